"""The commands of the terminal: fit, air, expect, series, report, import.

Exit status 0 done, 1 the data cannot give an answer, 2 wrong usage; the reason is one sentence on stderr."""

from __future__ import annotations

import importlib
import os
import sys
from io import TextIOWrapper

from core.commands.arguments import parsed
from core.errors import BenchError, WrongUsage

_MODULES = {"import": "import_log"}


def main(argv: list[str] | None = None) -> int:
    """Run one command; `argv` are its words, those of the process if left out."""
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, TextIOWrapper):
            stream.reconfigure(encoding="utf-8", errors="replace")
    try:
        args = parsed(sys.argv[1:] if argv is None else argv)
        command = importlib.import_module(f"core.commands.{_MODULES.get(args.command, args.command)}")
        status: int = command.run(args)
        sys.stdout.flush()
    except SystemExit as ended:  # --help
        return int(ended.code or 0)
    except BenchError as error:
        sys.stderr.write(f"{error}\n")
        return 2 if isinstance(error, WrongUsage) else 1
    except BrokenPipeError:  # the reader, `head` say, has seen enough
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return 0
    return status


if __name__ == "__main__":
    sys.exit(main())
