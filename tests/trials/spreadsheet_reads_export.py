"""A spreadsheet (LibreOffice Calc, without a screen) opens an exported folder's tables and saves them again: every
number must be the same.

    python -m tests.trials.spreadsheet_reads_export FOLDER
"""

import csv
import subprocess
import sys
import tempfile
from pathlib import Path

FILTER = "csv:Text - txt - csv (StarCalc):44,34,76,1,,0,false,false,false"  # comma, quotes, UTF-8, raw values
LOADED = "CSV:44,34,76,1,,0,false,true,false"  # comma, quotes, UTF-8, numbers recognised


def rows(path):
    """A table's rows by name."""
    with path.open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


def saved_again(table, folder):
    """The table as the spreadsheet saves it."""
    words = ["soffice", "--headless", f"-env:UserInstallation=file://{folder}/profile", f"--infilter={LOADED}"]
    words += ["--convert-to", FILTER, "--outdir", folder, table]
    subprocess.run([str(one) for one in words], check=True, capture_output=True, timeout=300)
    return rows(Path(folder) / table.name)


def compared(before, after):
    """How many numbers were compared, and the largest relative difference."""
    count, worst = 0, 0.0
    assert len(before) == len(after)
    for old, new in zip(before, after, strict=True):
        assert old.keys() == new.keys()
        for name, field in old.items():
            try:
                number = float(field)
            except ValueError:
                continue
            count += 1
            worst = max(worst, abs(float(new[name]) - number) / max(abs(number), 1e-300))
    return count, worst


if __name__ == "__main__":
    with tempfile.TemporaryDirectory() as scratch:
        for name in ("runs.csv", "readings.csv"):
            table = Path(sys.argv[1]) / name
            count, worst = compared(rows(table), saved_again(table, scratch))
            print(f"{name}: {count} numbers, largest relative difference {worst:.1e}")
