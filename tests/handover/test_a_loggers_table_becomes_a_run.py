"""Tables of other instruments become readings: the form is guessed, shown, put right by a word, or refused."""

import csv
import io
from contextlib import suppress

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from core.__main__ import main
from core.bench.readings import Readings
from core.errors import BadReadings, BenchError, WrongUsage
from core.handover.import_log import (
    Mapping,
    guess_mapping,
    log_text,
    mapping_from_words,
    preview,
    readings_from_log,
)
from core.handover.readings_csv import read_readings

TABLES = {
    "seconds and °C": "t,T\n0,90\n5,88.5\n10,87\n15,85.6\n",
    "READINGS.csv itself": "time_s,reading_C\r\n0,90\r\n5,88.5\r\n10,87\r\n15,85.6\r\n",
    "decimal comma, semicolons": "Zeit;Temp\n0;90,0\n5;88,5\n10;87,0\n15;85,6\n",
    "°F": "time (s),temp (°F)\n0,194\n5,191.3\n10,188.6\n15,186.08\n",
    "milliseconds, tabs": "time_ms\treading\n100\t90\n5100\t88.5\n10100\t87\n15100\t85.6\n",
    "clock without a date, over midnight": "time,T\n23:59:50,90\n23:59:55,88.5\n0:00:00,87\n00:00:05,85.6\n",
    "clock with half days": "time,T\n11:59:50 AM,90\n11:59:55 AM,88.5\n12:00:00 PM,87\n12:00:05 PM,85.6\n",
    "ISO 8601": "at,T\n"
    + "".join(
        f"2026-03-02T10:00:{s:02d}.25+01:00,{c}\n"
        for s, c in zip((0, 5, 10, 15), (90, 88.5, 87, 85.6), strict=True)
    ),
    "date of its own, day first": "Datum;Uhrzeit;Kanal 1 (°C)\n"
    "31.12.2026;23:59:50,5;90\n31.12.2026;23:59:55,5;88,5\n01.01.2027;00:00:00,5;87\n01.01.2027;00:00:05,5;85,6\n",
    "month first": "when|T\n12/31/2026 11:59:55 PM|90\n1/1/2027 12:00:00 AM|88.5\n"
    "1/1/2027 12:00:05 AM|87\n1/1/2027 12:00:10 AM|85.6\n",
    "lines of talk above, index column": "Drying bench\nrod 3, brass\n\nno,s,air °C,temp °C\n"
    "1,0,23,90\n2,5,23,88.5\n3,10,23,87\n4,15,23,85.6\n",
    "units in the fields": "s,T\n0,90 °C\n5,88.5 °C\n10,87 °C\n15,85.6 °C\n",
    "quotes": '"s","T"\n"0","90"\n"5","88.5"\n"10","87"\n"15","85.6"\n',
    "empty lines at the end": "s,T\n0,90\n5,88.5\n10,87\n15,85.6\n\n,\n",
}


@pytest.mark.parametrize("name", TABLES)
def test_the_form_of_a_table_is_guessed(name):
    """Tables of one and the same cooling in many forms give the same readings, with no word from the person."""
    readings = readings_from_log(TABLES[name], guess_mapping(TABLES[name]), "beat", "log.csv")
    assert readings.time_s == (0.0, 5.0, 10.0, 15.0)
    assert readings.reading_C == pytest.approx((90.0, 88.5, 87.0, 85.6), abs=1e-9)


def test_a_log_in_another_encoding_is_read():
    """Windows-1252 with its degree sign, and UTF-16, are read as well as UTF-8."""
    text = "s;T / °F\n0;194\n5;191,3\n"
    for data in (text.encode("cp1252"), text.encode("utf-16"), text.encode("utf-8-sig")):
        decoded = log_text(data, "log.csv")
        assert guess_mapping(decoded).unit == "F"
        assert readings_from_log(decoded, guess_mapping(decoded), "beat", "log.csv").reading_C[0] == 90.0


def test_in_change_mode_only_changes_of_the_display_count():
    """A logger that repeats the display gives one reading at each change."""
    text = "s,T\n0,90\n1,90\n2,89\n3,89\n4,88\n"
    assert readings_from_log(text, Mapping(), "change", "log.csv") == Readings((0.0, 2.0, 4.0), (90.0, 89.0, 88.0))
    assert len(readings_from_log(text, Mapping(), "beat", "log.csv")) == 5


def test_a_part_of_a_long_log_is_cut_out():
    """from_s and to_s count from the first line; the part's own time begins at 0."""
    text = "s,T\n" + "".join(f"{100 + i},{90 - i}\n" for i in range(50))
    part = readings_from_log(text, Mapping(from_s=10.0, to_s=12.0), "beat", "log.csv")
    assert part == Readings((0.0, 1.0, 2.0), (80.0, 79.0, 78.0))


def test_the_preview_shows_the_table_and_the_refusal():
    """A wrong column shows the first rows and the sentence; the right one the readings."""
    text = "s,T,note\n0,90,hot\n5,88,\n"
    wrong = preview(text, Mapping(reading_column=3), "beat", "log.csv")
    assert wrong.names == ("s", "T", "note")
    assert wrong.rows == (("0", "90", "hot"), ("5", "88", ""))
    assert wrong.readings is None
    assert wrong.fault.startswith("log.csv line 2, column 3: 'hot' is not a number")
    assert preview(text, Mapping(), "beat", "log.csv").readings == Readings((0.0, 5.0), (90.0, 88.0))


@pytest.mark.parametrize(
    ("text", "mapping", "sentence"),
    [
        ("", Mapping(), "line 2: there is no reading"),
        ("s,T\n0,90\n0,89\n", Mapping(), "line 3, column 1: the time is not later"),
        ("s,T\n0,90\n5\n", Mapping(), "line 3, column 2: there are only 1 columns"),
        ("s,T\n0,90,5\n", Mapping(decimal=",", delimiter=";"), "line 2, column 1"),
        ("s,T\n25:00:00,90\n", Mapping(time="clock"), "line 2, column 1: '25:00:00' is not a clock time"),
        ("s,T\n31.02.2026 10:00:00,90\n", Mapping(time="clock", date_order="dmy"), "is not a clock time"),
        ("s,T\n0,2000\n", Mapping(), "line 2, column 2: 2000 is 2000 °C, outside"),
        ("s,T\n0,10\n", Mapping(unit="K"), "line 2, column 2: 10 is -263.15 °C, outside"),
        ('s,T\n0,"90\n5,88\n', Mapping(), "line 2: the quotes are broken"),
        ("s,T\n0,90\n1e9,88\n", Mapping(), "longer than a week"),
        ("s,T\n0,90\n0.0000000000001,88\n", Mapping(), "same to the nanosecond"),
        ("s,T\n0,9_0\n", Mapping(), "'9_0' is not a number"),
    ],
)
def test_a_table_that_does_not_fit_is_refused(text, mapping, sentence):
    """One sentence names the file, the line and the column."""
    with pytest.raises(BadReadings, match=rf"log\.csv.*{sentence}"):
        readings_from_log(text, mapping, "beat", "log.csv")


@pytest.mark.parametrize(
    "word", ["colour=red", "unit=X", "time=week", "time_column=0", "first_line=1.5", "from_s=-1", "x"]
)
def test_a_word_that_is_no_mapping_is_refused(word):
    """The sentence names the words there are."""
    with pytest.raises(WrongUsage):
        mapping_from_words([word], Mapping())


def as_csv(rows):
    """Rows as text."""
    out = io.StringIO()
    csv.writer(out, delimiter=";").writerows(rows)
    return out.getvalue()


@settings(max_examples=150, deadline=None)
@given(st.text(max_size=200) | st.lists(st.lists(st.text(max_size=8), max_size=4), max_size=6).map(as_csv))
def test_any_table_is_read_or_refused(text):
    """No table makes the guess, the preview or the reader raise anything but the project's own errors."""
    mapping = guess_mapping(text)
    preview(text, mapping, "change", "log.csv")
    with suppress(BenchError):
        readings_from_log(text, mapping, "beat", "log.csv")


def test_the_command_writes_readings_and_says_how_it_read(tmp_path, capsys):
    """`import` writes a strict READINGS.csv and prints its mapping, which given outright does the same."""
    (tmp_path / "log.csv").write_text(TABLES["date of its own, day first"])
    assert main(["import", str(tmp_path / "log.csv"), "--to", str(tmp_path / "A.csv")]) == 0
    said = capsys.readouterr().out
    assert said.startswith("4 readings over 15 s")
    words = said.split(" read with ")[1].split()
    assert main(["import", str(tmp_path / "log.csv"), "--to", str(tmp_path / "B.csv"), *words]) == 0
    assert (tmp_path / "A.csv").read_bytes() == (tmp_path / "B.csv").read_bytes()
    assert read_readings(tmp_path / "A.csv") == Readings((0.0, 5.0, 10.0, 15.0), (90.0, 88.5, 87.0, 85.6))


def test_a_decimal_comma_is_found_beside_a_column_of_whole_numbers():
    """A second column without a comma (here humidity) must not pass for the reading."""
    log = "Date;Time;Temp;RH\n10.03.2026;09:12:00;88,4;41\n10.03.2026;09:12:05;84,9;41\n10.03.2026;09:12:10;81,6;41"
    found = guess_mapping(log)
    assert (found.decimal, found.reading_column) == (",", 3)
    assert readings_from_log(log, found, "beat", "log").reading_C == (88.4, 84.9, 81.6)
