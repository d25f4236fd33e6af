"""What a person likes on this tablet comes back, whatever happened to the file."""

import pytest

from mobileapp.preferences import FILE, Preferences, read, write


def test_what_was_written_is_read(tmp_path):
    liked = Preferences(palette="hall", text_scale=1.5, language="de", click=False, hand="left")
    write(tmp_path, liked)
    assert read(tmp_path) == liked
    assert [path.name for path in tmp_path.iterdir()] == [FILE]


@pytest.mark.parametrize("content", ["", "{", "[]", "null", '{"palette": 3}', '{"nobody": 1}'])
def test_a_spoilt_file_gives_the_defaults(tmp_path, content):
    (tmp_path / FILE).write_text(content, encoding="utf-8")
    assert read(tmp_path) == Preferences()


def test_one_spoilt_value_leaves_the_others(tmp_path):
    (tmp_path / FILE).write_text('{"palette": "night", "click": "yes"}', encoding="utf-8")
    assert read(tmp_path) == Preferences(palette="night")
