"""A disk that is full, read-only or broken: what was confirmed is kept, what was not kept was not confirmed, and
the person is told why."""

import os
import shutil
import subprocess
from contextlib import closing, contextmanager
from pathlib import Path

import pytest

from core.errors import JournalFault
from core.recording.events import Tapped
from core.recording.opening import open_journal
from tests.recording.journals import WALL_TIME, journal_in, left_open, record
from tests.recording.killing import kept, tapping, told

needs_root = pytest.mark.skipif(os.geteuid() != 0, reason="only root can mount")
needs_compiler = pytest.mark.skipif(shutil.which("gcc") is None, reason="the failing disk is written in C")


@pytest.fixture(scope="module")
def failing_disk(tmp_path_factory):
    """The library that makes a disk fail on command."""
    library = tmp_path_factory.mktemp("shim") / "faulty_disk.so"
    source = Path(__file__).with_name("faulty_disk.c")
    subprocess.run(["gcc", "-shared", "-fPIC", "-O1", "-o", library, source, "-ldl"], check=True)
    return str(library)


@contextmanager
def mounted(at, *words):
    """Something mounted at a folder, or skip where even root may not."""
    at.mkdir(exist_ok=True)
    if subprocess.run(["mount", *words, str(at)], check=False, capture_output=True).returncode:
        pytest.skip("this machine does not let anything be mounted")
    try:
        yield at
    finally:
        subprocess.run(["umount", str(at)], check=True)


@needs_compiler
@pytest.mark.parametrize(
    ("fault", "word"), [("fsync", "reports a fault"), ("full", "disk is full"), ("broken", "reports a fault")]
)
def test_nothing_is_confirmed_while_the_disk_fails(tmp_path, failing_disk, fault, word):
    """Six taps into a failing disk are all refused with its reason; before and after, all are kept."""
    process = tapping(tmp_path, "fault", fault, LD_PRELOAD=failing_disk)
    assert process.wait(60) == 0
    confirmed, refused = told(process)
    assert len(confirmed) == 41
    assert len(refused) == 6
    assert all(word in sentence for sentence in refused)
    rows, recovery = kept(tmp_path)
    assert rows == confirmed
    assert recovery is None


@needs_root
def test_a_disk_that_runs_full_keeps_what_was_confirmed(tmp_path):
    """On a real small disk: refused when full, counting again when there is room, all there afterwards."""
    with mounted(tmp_path / "small", "-t", "tmpfs", "-o", "size=1m", "tmpfs") as small:
        ballast = small / "ballast"
        ballast.write_bytes(bytes(300_000))
        process = tapping(small, "fill", ballast)
        assert process.wait(120) == 0
        confirmed, refused = told(process)
        assert len(confirmed) > 40
        assert len(refused) == 2
        assert all("the disk is full" in sentence for sentence in refused)
        rows, _ = kept(small)
        assert rows == confirmed


@needs_root
def test_a_full_disk_still_shows_the_journal(tmp_path):
    """Opened when not a byte is left: for reading, with the reason."""
    with mounted(tmp_path / "small", "-t", "tmpfs", "-o", "size=600k", "tmpfs") as small:
        left_open(small, runs=1, taps=20)
        (small / "journal.sqlite-shm").unlink()
        with (small / "ballast").open("wb") as ballast:
            try:
                while True:
                    os.write(ballast.fileno(), bytes(512))
            except OSError:
                pass
        with closing(open_journal(small, wall_time=WALL_TIME)) as opened:
            assert opened.journal.read_only
            assert "can read, not record" in opened.notes[0]
            assert len(opened.journal.events()) == 26


@needs_root
@pytest.mark.parametrize("killed", [False, True])
def test_a_read_only_disk_shows_the_journal(tmp_path, killed):
    """Also with a log left beside the file by a kill; recording is refused in words."""
    source = tmp_path / "disk"
    source.mkdir()
    if killed:
        left_open(source, runs=1, taps=20)
    else:
        with journal_in(source) as journal:
            record(journal, runs=1, taps=20)
    with mounted(tmp_path / "shown", "--bind", "-o", "ro", str(source)) as shown:
        subprocess.run(["mount", "-o", "remount,ro,bind", str(shown)], check=True)
        with closing(open_journal(shown, wall_time=WALL_TIME)) as opened:
            assert "does not let itself be written" in opened.notes[0]
            events = opened.journal.events()
            assert len(events) == 26
            with pytest.raises(JournalFault, match="reading only"):
                opened.journal.keep(events[0].session, events[1].run, Tapped(500.0, 1))


@needs_root
def test_an_empty_read_only_disk_is_refused_in_words(tmp_path):
    """There is nothing to read, and nothing can be begun."""
    source = tmp_path / "disk"
    source.mkdir()
    with mounted(tmp_path / "shown", "--bind", "-o", "ro", str(source)) as shown:
        subprocess.run(["mount", "-o", "remount,ro,bind", str(shown)], check=True)
        with pytest.raises(JournalFault, match="does not let itself be written"):
            open_journal(shown, wall_time=WALL_TIME)
