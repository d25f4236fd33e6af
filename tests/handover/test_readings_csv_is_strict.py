"""READINGS.csv: what is written reads back exactly, all else is refused by line and column."""

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from core.bench.readings import Readings
from core.errors import BadReadings
from core.handover.readings_csv import read_readings, readings_from_bytes, readings_to_text

times = st.lists(st.floats(0, 604_800), min_size=1, max_size=30, unique=True).map(sorted)


@given(times, st.data())
def test_readings_read_back_as_they_were_written(time_s, data):
    """Every time and temperature comes back to the last bit."""
    reading_C = data.draw(st.lists(st.floats(-80, 1000), min_size=len(time_s), max_size=len(time_s)))
    readings = Readings(tuple(time_s), tuple(reading_C))
    assert readings_from_bytes(readings_to_text(readings).encode(), "A.csv") == readings


@pytest.mark.parametrize("end", ["\r\n", "\n", "\r"])
@pytest.mark.parametrize("mark", [b"", b"\xef\xbb\xbf"])
@pytest.mark.parametrize("last", ["", "end", "end end"])
def test_line_ends_and_a_utf8_mark_do_not_matter(end, mark, last):
    """CR LF, LF or CR, with or without a byte order mark, with or without an end to the last line."""
    text = end.join(["time_s,reading_C", "0,90", '"1.5","89"']) + last.replace("end", end).replace(" ", "")
    assert readings_from_bytes(mark + text.encode(), "A.csv") == Readings((0.0, 1.5), (90.0, 89.0))


@settings(max_examples=300)
@given(
    st.binary(max_size=200) | st.text(max_size=200).map(lambda text: ("time_s,reading_C\n0,90\n" + text).encode())
)
def test_any_bytes_are_read_or_refused(data):
    """No file makes the reader raise anything but its own refusal, in one line that names the file."""
    sentence = ""
    try:
        readings_from_bytes(data, "A.csv")
    except BadReadings as error:
        sentence = str(error)
    assert sentence.isprintable()
    assert sentence.startswith("A.csv line ") or not sentence


def test_a_huge_field_and_a_huge_file_are_refused(tmp_path):
    """A line of millions of digits, and a file of more than 64 MB, are refused without being taken for numbers."""
    with pytest.raises(BadReadings, match=r"line 2: a field is longer"):
        readings_from_bytes(b"time_s,reading_C\n0," + b"9" * 200_000, "A.csv")
    path = tmp_path / "huge.csv"
    with path.open("wb") as file:
        file.truncate(65_000_000)
    with pytest.raises(BadReadings, match="larger than 64 MB"):
        read_readings(path)
    with pytest.raises(BadReadings, match="cannot be read"):
        read_readings(tmp_path)
