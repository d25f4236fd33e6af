"""The words that a command takes. A wrong one is refused in one sentence, never with a page of usage."""

from __future__ import annotations

import argparse
import re
from math import isfinite
from pathlib import Path
from typing import NoReturn

from core.bench.setup_check import nearest, shown
from core.errors import WrongUsage

COMMANDS = {
    "fit": "fit each run: h, its uncertainty, Nu, Re, and whether to keep it",
    "air": "properties of dry or moist air",
    "expect": "before the run: expected h, length of the run, which way to record",
    "series": "Nu = C·Re^m·Pr^(1/3) over the runs of an exported folder",
    "report": "one page with figures from an exported folder",
    "import": "make a READINGS.csv from a logger's table",
}


class Parser(argparse.ArgumentParser):
    """An argument parser whose refusals are WrongUsage."""

    def error(self, message: str) -> NoReturn:
        """Refuse, in one sentence that ends by naming the way to help."""
        raise WrongUsage(f"{' '.join(message.split())}; '{self.prog} --help' shows the words it takes.")


def _number(text: str) -> float:
    if not re.fullmatch(r"[+-]?(\d+(\.\d*)?|\.\d+)([eE][+-]?\d+)?", text, re.ASCII) or not isfinite(float(text)):
        raise argparse.ArgumentTypeError(f"'{shown(text)}' is not a number")
    return float(text)


def _path(text: str) -> Path:
    if not text or "\0" in text:
        raise argparse.ArgumentTypeError("an empty word is no file")
    return Path(text)


def parser() -> Parser:
    """The parser of all commands."""
    top = Parser(prog="python -m core", description="The cooling of a body, without a screen.", allow_abbrev=False)
    add = top.add_subparsers(dest="command", metavar="COMMAND", parser_class=Parser).add_parser

    def command(name: str, *, json: bool = True) -> Parser:
        one: Parser = add(name, help=COMMANDS[name], description=COMMANDS[name], allow_abbrev=False)
        if json:
            one.add_argument("--json", action="store_true", help="print JSON, one object a line")
        return one

    fit = command("fit")
    fit.add_argument("paths", nargs="+", type=_path, metavar="READINGS.csv|FOLDER")
    fit.add_argument("--setup", type=_path, metavar="SETUP.toml", help="for A.csv, A.toml beside it if left out")
    air = command("air")
    air.add_argument("--temperature-C", required=True, type=_number, metavar="T")
    air.add_argument("--pressure-Pa", required=True, type=_number, metavar="P")
    air.add_argument(
        "--relative-humidity", default=0.0, type=_number, metavar="F", help="a fraction; dry if left out"
    )
    expect = command("expect")
    expect.add_argument("--setup", required=True, type=_path, metavar="SETUP.toml")
    command("series").add_argument("folder", type=_path, metavar="FOLDER")
    command("report", json=False).add_argument("folder", type=_path, metavar="FOLDER")
    imported = command("import", json=False)
    imported.add_argument("path", type=_path, metavar="LOG.csv")
    imported.add_argument("--to", type=_path, required=True, metavar="READINGS.csv", help="the file to write")
    imported.add_argument("--setup", type=_path, metavar="SETUP.toml", help="its mode decides what a row is")
    imported.add_argument(
        "--map",
        action="append",
        default=[],
        metavar="KEY=VALUE",
        help="how the table is to be read; guessed if left out",
    )
    return top


def parsed(words: list[str]) -> argparse.Namespace:
    """The words of a command line. Raises WrongUsage, SystemExit(0) for --help."""
    if not words:
        raise WrongUsage(f"Say what to do: {', '.join(COMMANDS)}; 'python -m core --help' tells more.")
    if words[0] not in COMMANDS and not words[0].startswith("-"):
        hint = f"the nearest is '{nearest(words[0], list(COMMANDS))}'"
        raise WrongUsage(f"'{shown(words[0])}' is not one of {', '.join(COMMANDS)}; {hint}.")
    return parser().parse_args(words)
