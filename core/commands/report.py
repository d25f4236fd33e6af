"""`report`: one page with figures out of an exported folder."""

from __future__ import annotations

from argparse import Namespace

from core.bench.setup_check import shown_path
from core.errors import WrongUsage
from core.handover.export import is_export
from core.handover.report import write_report


def run(args: Namespace) -> int:
    """Write the page and its figures into the folder `report` within the exported one, and print where."""
    if not is_export(args.folder):
        raise WrongUsage(f"{shown_path(args.folder)}: there is no exported session here.")
    print(write_report(args.folder))
    return 0
