"""Whatever is wrong with the words, the set-up or the readings: exit 1 or 2, one sentence, never a traceback."""

import re
import subprocess
import sys

import pytest

from core.__main__ import main

SETUP = """[body]
shape = "cylinder"
diameter_m = 0.016
length_m = 0.110
material = "brass"

[thermometer]
resolution_K = 1.0

[recording]
mode = "change"

[air]
temperature_C = 23.0

[flow]
velocity_m_s = 8.0
"""
READINGS = "time_s,reading_C\r\n" + "".join(f"{2.0 * i},{90 - i}\r\n" for i in range(40))


def outcome(capsys, *words):
    """Exit status, stdout and stderr of a command."""
    status = main([str(word) for word in words])
    out, err = capsys.readouterr()
    return status, out, err


def refused(capsys, status, sentence, *words):
    """The command ends with that status, nothing on stdout, and one sentence on stderr that matches."""
    got, out, err = outcome(capsys, *words)
    assert (got, out) == (status, ""), err
    assert re.search(sentence, err), err
    assert err.endswith(".\n")
    assert err.count("\n") == 1
    assert err[:-1].isprintable()
    assert "Traceback" not in err


def line(text, number, new):
    """The text with one line (from 1) replaced."""
    lines = text.splitlines(keepends=True)
    lines[number - 1] = new
    return "".join(lines)


BAD_READINGS = {
    "empty file": (b"", r"A\.csv line 1: the header time_s,reading_C is missing"),
    "header alone": (b"time_s,reading_C\r\n", r"A\.csv line 1: there is no reading below the header"),
    "no header": (b"0,90\r\n1,89\r\n", r"line 1: the header is '0,90'"),
    "other header": (b"time,temp\r\n0,90\r\n", r"line 1: the header is 'time,temp', where time_s,reading_C"),
    "header in capitals": (b"TIME_S,READING_C\r\n0,90\r\n", r"line 1: the header is"),
    "header twice": (
        b"time_s,reading_C\r\ntime_s,reading_C\r\n0,90\r\n",
        r"line 2, column time_s: 'time_s' is not",
    ),
    "header column twice": (b"time_s,time_s\r\n0,90\r\n", r"line 1: the header is"),
    "three columns": (b"time_s,reading_C,note\r\n0,90,x\r\n", r"line 1: the header is"),
    "semicolons": (b"time_s;reading_C\r\n0;90\r\n", r"line 1: the header is .*core import"),
    "decimal comma": (
        b"time_s,reading_C\r\n0,90\r\n1,5,89,0\r\n",
        r"line 3, column reading_C: there are 4 fields",
    ),
    "quoted decimal comma": (b'time_s,reading_C\r\n"0,5",90\r\n', r"column time_s: '0,5' .*decimal point"),
    "comma at the end": (
        b"time_s,reading_C\r\n0,90,\r\n",
        r"line 2, column reading_C: there are 3 .*comma at the end",
    ),
    "one field": (b"time_s,reading_C\r\n0\r\n", r"line 2, column time_s: there are 1 fields"),
    "empty time": (b"time_s,reading_C\r\n,90\r\n", r"line 2, column time_s: there is nothing"),
    "empty reading": (b"time_s,reading_C\r\n0,90\r\n1,\r\n", r"line 3, column reading_C: there is nothing"),
    "word": (b"time_s,reading_C\r\n0,hot\r\n", r"line 2, column reading_C: 'hot' is not a number"),
    "nan": (b"time_s,reading_C\r\n0,90\r\n1,nan\r\n", r"line 3, column reading_C: 'nan' is not a number"),
    "inf": (b"time_s,reading_C\r\n0,90\r\ninf,89\r\n", r"line 3, column time_s: 'inf' is not a number"),
    "too large a number": (b"time_s,reading_C\r\n0,1e999\r\n", r"line 2, column reading_C: 1e999 .* outside"),
    "underscore": (b"time_s,reading_C\r\n0,9_0\r\n", r"column reading_C: '9_0' is not a number"),
    "hexadecimal": (b"time_s,reading_C\r\n0,0x5A\r\n", r"column reading_C: '0x5A' is not a number"),
    "space": (b"time_s,reading_C\r\n0, 90\r\n", r"column reading_C: ' 90' .*take out the space"),
    "unit": (b"time_s,reading_C\r\n0 s,90\r\n", r"column time_s: '0 s' is not a number"),
    "other digits": ("time_s,reading_C\r\n٠,90\r\n".encode(), r"column time_s: '٠' is not a number"),
    "time stands still": (b"time_s,reading_C\r\n0,90\r\n0,89\r\n", r"line 3, column time_s: 0 s is not later"),
    "time runs back": (
        b"time_s,reading_C\r\n0,90\r\n5,89\r\n4,88\r\n",
        r"line 4, column time_s: 4 s is not later",
    ),
    "negative time": (b"time_s,reading_C\r\n-1,90\r\n", r"line 2, column time_s: -1 s is outside"),
    "time in ms of the epoch": (b"time_s,reading_C\r\n1764590000000,90\r\n", r"column time_s: .* outside"),
    "below absolute zero": (b"time_s,reading_C\r\n0,-300\r\n", r"line 2, column reading_C: -300 °C is outside"),
    "molten": (b"time_s,reading_C\r\n0,1200\r\n", r"line 2, column reading_C: 1200 °C is outside"),
    "open quote": (b'time_s,reading_C\r\n0,90\r\n"1,89\r\n2,88\r\n', r"line 3: the quotes are broken"),
    "quote in a field": (b'time_s,reading_C\r\n0,90\r\n"1"x,89\r\n', r"line 3: the quotes are broken"),
    "quote in a bare field": (
        b'time_s,reading_C\r\n0,9"0\r\n',
        r"line 2, column reading_C: '9\"0' is not a number",
    ),
    "line break in quotes": (b'time_s,reading_C\r\n"0\r\n",90\r\n', r"line 2, column time_s"),
    "empty line inside": (b"time_s,reading_C\r\n0,90\r\n\r\n1,89\r\n", r"line 3: the line is empty"),
    "NUL": (b"time_s,reading_C\r\n0,90\r\n1,8\x009\r\n", r"line 3: there is a NUL"),
    "UTF-16": ("time_s,reading_C\r\n0,90\r\n".encode("utf-16"), r"line 1: this is UTF-16"),
    "another encoding": (b"time_s,reading_C\r\n0,90\r\n1,89\xb0\r\n", r"line 3: this is not UTF-8"),
    "second mark": (b"\xef\xbb\xbf\xef\xbb\xbftime_s,reading_C\r\n0,90\r\n", r"line 1: the header is"),
    "control characters": (b"time_s,reading_C\r\n0,\x1b[31m90\r\n", r"line 2, column reading_C"),
    "binary": (bytes(range(1, 256)), r"A\.csv line"),
    "huge field": (b"time_s,reading_C\r\n0," + b"9" * 140_000 + b"\r\n", r"line 2: a field is longer"),
    "huge number": (
        b"time_s,reading_C\r\n0," + b"9" * 5_000 + b"\r\n",
        r"line 2, column reading_C: 9+… .* outside",
    ),
    "comment": (b"# rod 3\r\ntime_s,reading_C\r\n0,90\r\n", r"line 1: the header is '# rod 3'"),
    "one reading": (b"time_s,reading_C\r\n0,90\r\n", r"A\.csv: "),
    "two readings": (b"time_s,reading_C\r\n0,90\r\n2,89\r\n", r"A\.csv: "),
    "all the same": (b"time_s,reading_C\r\n" + b"".join(b"%d,90\r\n" % i for i in range(40)), r"A\.csv: "),
    "rising": (b"time_s,reading_C\r\n" + b"".join(b"%d,%d\r\n" % (i, 30 + i) for i in range(40)), r"A\.csv: "),
    "colder than the air": (
        b"time_s,reading_C\r\n" + b"".join(b"%d,%d\r\n" % (i, 15 - i) for i in range(9)),
        r"A\.csv",
    ),
}


@pytest.mark.parametrize(("content", "sentence"), BAD_READINGS.values(), ids=BAD_READINGS)
def test_bad_readings_are_refused(tmp_path, capsys, content, sentence):
    """Each bad READINGS.csv ends in exit 1 and one sentence with the file, the line and the column."""
    (tmp_path / "A.csv").write_bytes(content)
    (tmp_path / "A.toml").write_text(SETUP)
    refused(capsys, 1, sentence, "fit", tmp_path / "A.csv", "--json")


BAD_SETUPS = {
    "empty": ("", r"bench\.toml: \[body\] shape is missing"),
    "not TOML": (line(SETUP, 3, "diameter_m: 0.016\n"), r"line 3 column \d+: this is not TOML"),
    "decimal comma": (line(SETUP, 3, "diameter_m = 0,016\n"), r"line 3 column \d+: this is not TOML"),
    "no value": (line(SETUP, 3, "diameter_m =\n"), r"line 3 column \d+: this is not TOML"),
    "open quote": (line(SETUP, 2, 'shape = "cylinder\n'), r"line 2 column \d+: this is not TOML"),
    "key twice": (line(SETUP, 4, "diameter_m = 0.017\n"), r"line 4 column \d+: this is not TOML"),
    "section twice": (SETUP + "[body]\n", r"line 18 column \d+: this is not TOML"),
    "unknown key": (line(SETUP, 3, "diametre_m = 0.016\n"), r"line 3: \[body\] diametre_m .*'diameter_m'"),
    "key without its unit": (line(SETUP, 17, "velocity = 8\n"), r"line 17: \[flow\] velocity .*'velocity_m_s'"),
    "key in another section": (line(SETUP, 8, "temperature_C = 1.0\n"), r"line 8: .* belongs in \[air\]"),
    "unknown section": (line(SETUP, 7, "[thermometre]\n"), r"line 7: \[thermometre\] .*'thermometer'"),
    "key outside sections": ("velocity_m_s = 8\n" + SETUP, r"line 1: .* belongs below \[flow\]"),
    "section as a value": ("body = 3\n", r"line 1: \[body\] is a section"),
    "section as a list": (line(SETUP, 1, "[[body]]\n"), r"line 1: \[body\] is a section"),
    "text for a number": (
        line(SETUP, 3, 'diameter_m = "16 mm"\n'),
        r"line 3: \[body\] diameter_m is the text '16 mm'",
    ),
    "true for a number": (line(SETUP, 3, "diameter_m = true\n"), r"line 3: \[body\] diameter_m is true or false"),
    "number for a text": (line(SETUP, 5, "material = 7\n"), r"line 5: \[body\] material is the number 7"),
    "list for a number": (line(SETUP, 17, "velocity_m_s = [8, 9]\n"), r"line 17: \[flow\] velocity_m_s is a list"),
    "date for a number": (line(SETUP, 14, "temperature_C = 2026-03-02\n"), r"line 14: \[air\] .* is a date"),
    "nan": (line(SETUP, 3, "diameter_m = nan\n"), r"line 3: \[body\] diameter_m is nan, where a number from"),
    "inf": (line(SETUP, 17, "velocity_m_s = inf\n"), r"line 17: \[flow\] velocity_m_s is inf"),
    "out of range": (line(SETUP, 17, "velocity_m_s = 1500\n"), r"line 17: .* is 1500, where .* 0 to 120 m/s"),
    "millimetres": (line(SETUP, 3, "diameter_m = 16\n"), r"line 3: .* 16, .* \(is 16 in mm\?\)"),
    "negative": (line(SETUP, 3, "diameter_m = -0.016\n"), r"line 3: \[body\] diameter_m is -0.016"),
    "percent": (SETUP.replace("23.0", "23.0\nrelative_humidity = 40"), r"line 15: .* \(is 40 in %\?\)"),
    "hectopascals": (SETUP.replace("23.0", "23.0\npressure_Pa = 1013"), r"line 15: .* \(is 1013 in hPa\?\)"),
    "monstrous number": (line(SETUP, 17, "velocity_m_s = " + "9" * 400 + "\n"), r"line 17: \[flow\] velocity_m_s"),
    "more digits than Python reads": (line(SETUP, 17, "velocity_m_s = " + "9" * 5000 + "\n"), r"bench\.toml"),
    "deep nesting": (line(SETUP, 17, "velocity_m_s = " + "[" * 5000 + "\n"), r"bench\.toml"),
    "whole number wanted": (SETUP + "row = 1.5\n", r"line 18: \[flow\] row is the number 1.5, where a whole"),
    "unknown shape": (
        line(SETUP, 2, 'shape = "cilinder"\n'),
        r"line 2: .*'cilinder', .*; 'cylinder' is the nearest",
    ),
    "unknown mode": (line(SETUP, 11, 'mode = "changes"\n'), r"line 11: .*'change' is the nearest"),
    "unknown material": (line(SETUP, 5, 'material = "bras"\n'), r"line 5: \[body\] material is 'bras', .*'brass'"),
    "empty text": (line(SETUP, 5, 'material = ""\n'), r"line 5: \[body\] material"),
    "no shape": (line(SETUP, 2, "\n"), r"line 1: \[body\] shape is missing"),
    "no size": (line(SETUP, 4, "\n"), r"line 1: \[body\] length_m is missing"),
    "no material": (line(SETUP, 5, "\n"), r"line 1: \[body\] material is missing"),
    "two properties of three": (
        line(SETUP, 5, "density_kg_m3 = 8500\nconductivity_W_mK = 110\n"),
        r"line 1: \[body\] heat_capacity_J_kgK is missing",
    ),
    "no resolution": (line(SETUP, 8, "\n"), r"line 7: \[thermometer\] resolution_K is missing"),
    "no mode": (line(SETUP, 11, "\n"), r"line 10: \[recording\] mode is missing"),
    "no air temperature": (line(SETUP, 14, "\n"), r"line 13: \[air\] temperature_C is missing"),
    "no velocity": (line(SETUP, 17, "\n"), r"line 16: \[flow\] velocity_m_s is missing"),
    "no flow section": (SETUP[: SETUP.index("[flow]")], r"bench\.toml: \[flow\] velocity_m_s is missing"),
    "two velocities": (
        SETUP + "dynamic_pressure_Pa = 38\n",
        r"line 18: .*dynamic_pressure_Pa and velocity_m_s both",
    ),
    "no wind": (line(SETUP, 17, "velocity_m_s = 0.0\n"), r"line 17: \[flow\] velocity_m_s is 0, .*still-air"),
    "flow without a duct": (line(SETUP, 17, "flow_m3_s = 0.1\n"), r"line 16: \[flow\] duct_height_m is missing"),
    "size of another shape": (line(SETUP, 2, 'shape = "sphere"\n'), r"line 4: \[body\] length_m does not belong"),
    "row behind the last": (
        SETUP + "row = 6\nrows = 5\n",
        r"line 18: \[flow\] row is 6, behind the last of the 5",
    ),
    "bank without pitches": (
        SETUP + 'arrangement = "inline"\n',
        r"line 16: \[flow\] pitch_transverse_m is missing",
    ),
    "pitch within the tube": (
        SETUP + 'arrangement = "inline"\npitch_transverse_m = 0.015\npitch_longitudinal_m = 0.03\n',
        r"line 19: \[flow\] pitch_transverse_m is 0.015 m, not more than the 0.016 m",
    ),
    "rows that touch": (
        SETUP + 'arrangement = "staggered"\npitch_transverse_m = 0.02\npitch_longitudinal_m = 0.011\n',
        r"line 20: \[flow\] pitch_longitudinal_m .* touch",
    ),
    "body taller than the duct": (SETUP + "duct_height_m = 0.016\n", r"line 18: \[flow\] duct_height_m .* fill"),
    "body longer than the duct": (
        SETUP + "duct_width_m = 0.10\n",
        r"line 18: \[flow\] duct_width_m is 0.1 m, less",
    ),
    "thermometer outside": (
        line(SETUP, 5, 'material = "brass"\naxial_offset_m = 0.06\n'),
        r"line 6: \[body\] axial_offset_m is 0.06 m, outside",
    ),
    "mass in grams": (
        line(SETUP, 5, 'material = "brass"\nmass_kg = 189\n'),
        r"line 6: \[body\] mass_kg is 189.0 kg",
    ),
    "air jumps": (
        line(SETUP, 14, "temperature_C = 23\ntemperature_end_C = 73\n"),
        r"line 15: \[air\] temperature_end_C",
    ),
    "control characters": (line(SETUP, 5, '"\\u001b[31m" = 1\n'), r"\[body\]"),
}


@pytest.mark.parametrize("command", ["fit", "expect"])
@pytest.mark.parametrize(("content", "sentence"), BAD_SETUPS.values(), ids=BAD_SETUPS)
def test_bad_setups_are_refused(tmp_path, capsys, command, content, sentence):
    """Each bad SETUP.toml ends in exit 1 and one sentence with the file, the line and the key."""
    (tmp_path / "A.csv").write_text(READINGS)
    (tmp_path / "bench.toml").write_text(content)
    words = [tmp_path / "A.csv"] if command == "fit" else []
    refused(capsys, 1, sentence, command, *words, "--setup", tmp_path / "bench.toml")


@pytest.mark.parametrize(
    ("words", "sentence"),
    [
        ([], "Say what to do: fit, air"),
        (["fitt"], "nearest is 'fit'"),
        (["fit"], "required"),
        (["fit", "none.csv"], "none.csv: there is no such file"),
        (["fit", "{folder}"], "no exported session"),
        (["fit", "{folder}/A.csv"], "no A.toml beside it"),
        (["fit", "{folder}/A.csv", "--setup", "none.toml"], "none.toml: there is no such file"),
        (["fit", "{folder}/A.csv", "--jsn"], "unrecognized arguments: --jsn"),
        (["fit", "{folder}/A.csv", "--setup"], "expected one argument"),
        (["fit", ""], "empty word"),
        (["expect"], "--setup"),
        (["expect", "--setup", "none.toml"], "none.toml: there is no such file"),
        (["air"], "--temperature-C, --pressure-Pa"),
        (["air", "--temperature-C", "warm", "--pressure-Pa", "1e5"], "'warm' is not a number"),
        (["air", "--temperature-C", "nan", "--pressure-Pa", "1e5"], "'nan' is not a number"),
        (["air", "--temperature-C", "20", "--pressure-Pa", "1e999"], "'1e999' is not a number"),
        (["series", "{folder}"], "no exported session"),
        (["series", "none"], "no exported session"),
        (["report", "none"], "no exported session"),
        (["import", "none.csv", "--to", "new.csv"], "none.csv: there is no such file"),
        (["import", "{folder}/A.csv", "--to", "{folder}/A.csv"], "already there"),
        (["import", "{folder}/A.csv", "--to", "{folder}/B.csv", "--map", "colour=red"], "'colour=red' is no part"),
        (["import", "{folder}/A.csv", "--to", "{folder}/B.csv", "--map", "unit=X"], "unit is one of C F K"),
    ],
)
def test_wrong_words_are_refused(tmp_path, capsys, words, sentence):
    """Each wrong use ends in exit 2 and one sentence."""
    (tmp_path / "A.csv").write_text(READINGS)
    refused(capsys, 2, sentence, *(word.replace("{folder}", str(tmp_path)) for word in words))


@pytest.mark.parametrize(("temperature", "pressure"), [("-50", "101325"), ("20", "1013"), ("200", "101325")])
def test_air_outside_its_range_is_refused(capsys, temperature, pressure):
    """Properties outside the stated range are not made up."""
    refused(capsys, 1, "", "air", "--temperature-C", temperature, "--pressure-Pa", pressure)


def test_one_bad_file_does_not_stop_the_others(tmp_path, capsys):
    """The bad file's sentence goes to stderr and the status is 1; the good ones are answered in their order."""
    for name, content in (("A.csv", READINGS), ("B.csv", "nonsense"), ("C.csv", READINGS)):
        (tmp_path / name).write_text(content)
    (tmp_path / "bench.toml").write_text(SETUP)
    names = [tmp_path / name for name in ("A.csv", "B.csv", "C.csv")]
    status, out, err = outcome(capsys, "fit", *names, "--setup", tmp_path / "bench.toml", "--json")
    assert status == 1
    assert len(out.splitlines()) == 2
    assert re.match(r".*B\.csv line 1: the header is 'nonsense'", err)
    assert err.count("\n") == 1


def test_a_bad_file_in_a_real_process_leaves_no_traceback(tmp_path):
    """As an outsider calls it: status, streams and one sentence, whatever the locale."""
    (tmp_path / "Ä \N{BALLOON}.csv").write_bytes(b"time_s,reading_C\r\n0,\xff\r\n")
    (tmp_path / "bench.toml").write_text(SETUP)
    words = [
        sys.executable,
        "-m",
        "core",
        "fit",
        tmp_path / "Ä \N{BALLOON}.csv",
        "--setup",
        tmp_path / "bench.toml",
    ]
    done = subprocess.run(words, capture_output=True, check=False, env={"LC_ALL": "C", "PATH": ""}, timeout=60)
    assert done.returncode == 1
    assert done.stdout == b""
    assert done.stderr.decode().count("\n") == 1
    assert b"Traceback" not in done.stderr
