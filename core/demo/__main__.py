"""`python -m core.demo [FOLDER]` makes the demo session anew, in the tree if no folder is named."""

from __future__ import annotations

import sys
from pathlib import Path

from core.demo.cabinet_bench import FOLDER, write_demo

write_demo(Path(sys.argv[1]) if len(sys.argv) > 1 else FOLDER)
