"""`python -m mobileapp [--data DIR] [--size WxH] [--demo]`: the app on a desktop screen, and on the tablet."""

from __future__ import annotations

import argparse
import os
import re
import sys
from pathlib import Path


def _size(words: str) -> tuple[int, int]:
    found = re.fullmatch(r"(\d{3,5})x(\d{3,5})", words)
    if not found:
        raise argparse.ArgumentTypeError(f"the size {words!r} is not WIDTHxHEIGHT in pixels, such as 1280x800")
    return int(found[1]), int(found[2])


def prepare_environment(size: tuple[int, int] | None) -> None:
    """Set up Kivy before its first import: no arguments, no files of its own, our sizes and input."""
    on_device = "ANDROID_ARGUMENT" in os.environ
    for name, value in (
        ("KIVY_NO_ARGS", "1"),
        ("KIVY_NO_CONFIG", "1"),
        ("KIVY_NO_FILELOG", "1"),
        ("KIVY_LOG_MODE", "PYTHON"),
        ("KIVY_WINDOW", "sdl2"),
    ):
        os.environ.setdefault(name, value)
    if not on_device:
        os.environ.setdefault("KIVY_DPI", "160")  # one dp is one pixel unless a density is asked for
        os.environ.setdefault("KIVY_METRICS_DENSITY", "1")
    from kivy.config import Config

    Config.set("kivy", "exit_on_escape", "0")
    Config.set("graphics", "multisamples", "0")  # edges are smoothed by the drawing itself
    Config.set("graphics", "maxfps", "200")  # the fallback stamp is as good as the loop is quick
    if not on_device:
        width, height = size or (1280, 800)
        Config.set("graphics", "width", str(width))
        Config.set("graphics", "height", str(height))
        Config.set("input", "mouse", "mouse,disable_multitouch")
        Config.remove_option("input", "%(name)s")  # the kernel's touch device would send every touch twice


def main(argv: list[str] | None = None) -> int:
    parser = argparse.ArgumentParser(prog="python -m mobileapp", description="Cooltally on a screen.")
    parser.add_argument("--data", type=Path, help="folder for the journal and the preferences")
    parser.add_argument("--size", type=_size, help="size of the window, such as 1280x800")
    parser.add_argument("--demo", action="store_true", help="open with the invented demo session in it")
    arguments = parser.parse_args(sys.argv[1:] if argv is None else argv)
    prepare_environment(arguments.size)
    from kivy.base import ExceptionManager

    from core.errors import BenchError
    from mobileapp.app import CooltallyApp
    from mobileapp.refusals import RefusalApp, Refusals

    ExceptionManager.add_handler(Refusals())
    try:
        CooltallyApp(data=arguments.data, demo=arguments.demo).run()
    except BenchError as refusal:
        print(refusal, file=sys.stderr)
        RefusalApp(str(refusal)).run()
        return 1
    return 0


if __name__ == "__main__":
    sys.exit(main())
