"""`series`: the law Nu = C·Re^m·Pr^(1/3) over the runs of an exported folder."""

from __future__ import annotations

from argparse import Namespace

from core.bench.setup_check import shown_path
from core.commands import json_form, text_form
from core.errors import WrongUsage
from core.handover.export import is_export, read_session
from core.handover.recompute import answers_to, law_over


def run(args: Namespace) -> int:
    """Print the law, and the runs that are not in it with the reason."""
    if not is_export(args.folder):
        raise WrongUsage(f"{shown_path(args.folder)}: there is no exported session here.")
    session = read_session(args.folder)
    series, left_out = law_over(session, answers_to(session))
    if args.json:
        reasons = [{"run": run, "reason": reason} for run, reason in left_out]
        print(json_form.line(json_form.series_form(series, reasons)))
    else:
        print(text_form.series_text(series, left_out))
    return 0
