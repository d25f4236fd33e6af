"""`expect`: what a run on this bench will look like, before the body is heated."""

from __future__ import annotations

from argparse import Namespace

from core.bench.setup_check import shown_path
from core.bench.setup_file import read_setup
from core.commands import json_form, text_form
from core.errors import WrongUsage
from core.judgement.expect import expect


def run(args: Namespace) -> int:
    """Print what to expect of a run."""
    if not args.setup.exists():
        raise WrongUsage(f"{shown_path(args.setup)}: there is no such file.")
    expected = expect(read_setup(args.setup))
    print(json_form.line(json_form.expect_form(expected)) if args.json else text_form.expect_text(expected))
    return 0
