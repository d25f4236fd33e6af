"""`python -m core.demo [FOLDER]` makes the demo session anew, in the tree if no folder is named."""

from __future__ import annotations

import argparse
from pathlib import Path

from core.demo.cabinet_bench import FOLDER, write_demo

parser = argparse.ArgumentParser("python -m core.demo", description="Make the invented demo session anew.")
parser.add_argument("folder", nargs="?", type=Path, default=FOLDER, help="where to; the tree's own if left out")
write_demo(parser.parse_args().folder)
