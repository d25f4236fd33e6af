"""`import`: a READINGS.csv out of a logger's table."""

from __future__ import annotations

from argparse import Namespace
from dataclasses import fields

from core.bench.setup_check import shown_path
from core.bench.setup_file import read_setup
from core.errors import HandoverFault, WrongUsage
from core.handover.csv_text import read_bytes
from core.handover.import_log import guess_mapping, log_text, mapping_from_words, readings_from_log
from core.handover.readings_csv import readings_to_text


def run(args: Namespace) -> int:
    """Write the readings, and print the mapping by which they were read, so that it can be named outright."""
    name = str(args.path)
    if not args.path.exists():
        raise WrongUsage(f"{shown_path(name)}: there is no such file.")
    if args.to.exists():
        raise WrongUsage(f"{shown_path(args.to)}: the file is already there; choose another name.")
    mode = read_setup(args.setup).recording.mode if args.setup else "beat"
    text = log_text(read_bytes(args.path), name)
    mapping = mapping_from_words(args.map, guess_mapping(text))
    readings = readings_from_log(text, mapping, mode, name)
    try:
        args.to.write_bytes(readings_to_text(readings).encode())
    except OSError as error:
        raise HandoverFault(f"{shown_path(args.to)}: cannot be written ({error.strerror}).") from None
    set_parts = ((one.name, getattr(mapping, one.name)) for one in fields(mapping))
    words = " ".join(f"--map {key}={value}" for key, value in set_parts if value is not None)
    print(f"{len(readings)} readings over {readings.time_s[-1]:g} s in {args.to}, read with {words}")
    return 0
