"""Coverage-guided fuzzing of every reader of a foreign file: nothing but the project's own errors may come out.

Needs the package atheris, which is no part of the project's environment:

    python -m tests.trials.fuzz_parsers CORPUS -max_total_time=600 -max_len=8192

An empty folder CORPUS is first given one good file for each reader.
"""

import sys
from contextlib import suppress
from pathlib import Path

import atheris

with atheris.instrument_imports(include=["core.bench", "core.handover"]):
    from core.bench.setup_file import setup_from_text, setup_to_text
    from core.bench.units import FACTORS, parse_entry
    from core.errors import BenchError
    from core.handover.import_log import guess_mapping, log_text, mapping_from_words, preview, readings_from_log
    from core.handover.readings_csv import readings_from_bytes, readings_to_text
    from core.handover.session_files import session_files, session_from_files
    from tests.bench_setup.test_setup_file_reads_back import EXAMPLE
    from tests.handover.sessions import session_of

UNITS = [*FACTORS, "°C"]


def read_setup(data: bytes) -> None:
    """A set-up that is read must be written and read again the same."""
    setup = setup_from_text(data.decode("utf-8", "replace"), "fuzzed.toml")
    if setup_from_text(setup_to_text(setup), "again.toml") != setup:
        raise AssertionError("the set-up does not read back")


def read_readings(data: bytes) -> None:
    """Readings that are read must be written and read again the same."""
    readings = readings_from_bytes(data, "fuzzed.csv")
    if readings_from_bytes(readings_to_text(readings).encode(), "again.csv") != readings:
        raise AssertionError("the readings do not read back")


def read_log(data: bytes) -> None:
    """A log is guessed, shown and read."""
    words, _, table = data.partition(b"\n\n")
    text = log_text(table or words, "fuzzed.log")
    mapping = guess_mapping(text)
    preview(text, mapping, "change", "fuzzed.log")
    with suppress(BenchError):
        readings_from_log(text, mapping, "beat", "fuzzed.log")
    mapping = mapping_from_words(words.decode("utf-8", "replace").split(), mapping)
    readings_from_log(text, mapping, "beat", "fuzzed.log")


def read_export(data: bytes) -> None:
    """An exported folder that is read must export the same again."""
    runs, _, readings = data.partition(b"\x1e")
    session = session_from_files({"runs.csv": runs, "readings.csv": readings}, "fuzzed")
    session_files(session)


def read_entry(data: bytes) -> None:
    """An entry in any unit."""
    parse_entry(data[1:].decode("utf-8", "replace"), UNITS[data[0] % len(UNITS)] if data else "m")


READERS = (read_setup, read_readings, read_log, read_export, read_entry)


def one_input(data: bytes) -> None:
    """The first byte chooses the reader, the rest is its file."""
    if data:
        with suppress(BenchError):
            READERS[data[0] % len(READERS)](data[1:])


def seed(corpus: Path) -> None:
    """One good file for each reader."""
    files = session_files(session_of(1))
    goods = (
        EXAMPLE.encode(),
        b"time_s,reading_C\r\n0,90\r\n1.5,89\r\n3.25,88\r\n",
        b"unit=F time=clock\n\nLog\nDate;Time;T / \xb0F\n30.11.2026;14:03:05,2;194,5\n30.11.2026;14:03:07;93\n",
        files["runs.csv"] + b"\x1e" + files["readings.csv"],
        b"\x030,63 in",
    )
    for i, good in enumerate(goods):
        (corpus / f"seed-{i}").write_bytes(bytes([i]) + good)


if __name__ == "__main__":
    for folder in map(Path, sys.argv[1:2]):
        if folder.is_dir() and not any(folder.iterdir()):
            seed(folder)
    atheris.Setup(sys.argv, one_input)
    atheris.Fuzz()
