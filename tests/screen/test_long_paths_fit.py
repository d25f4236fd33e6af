"""A path of any length is shown whole within its column."""

from hypothesis import given
from hypothesis import strategies as st

from mobileapp.wrapping import broken

PATHS = st.text(st.sampled_from("ab0/\\- _.é"), max_size=80)


def test_a_path_is_broken_after_its_separators():
    assert broken("/home/drying/Cooltally", 14, len) == "/home/drying/\nCooltally"
    assert broken("Written to /media/stick/runs now", 10, len) == "Written to /media/\nstick/runs now"
    assert broken("C:\\bench\\runs", 9, len) == "C:\\bench\\\nruns"


def test_a_name_without_separators_is_broken_where_the_column_ends():
    assert broken("/a/cabinet_bench_of_may", 8, len) == "/a/\ncabinet_\nbench_of\n_may"


def test_what_fits_is_left_alone():
    assert broken("Nothing of use in here.", 8, len) == "Nothing of use in here."


@given(PATHS, st.integers(1, 30))
def test_nothing_is_lost_and_no_word_is_too_wide(path, room):
    lines = broken(path, room, len)
    assert lines.replace("\n", "") == path
    assert all(len(word) <= room for word in lines.split())
