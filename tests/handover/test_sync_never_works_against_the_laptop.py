"""A session's folder on a stick or card is brought up to date, whatever was changed or cut there meanwhile."""

import os
import random
import shutil
import signal
from dataclasses import replace
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from core.errors import HandoverFault
from core.handover import export, sync
from core.handover.archive import folder_name
from core.handover.export import read_session
from core.handover.session import ExportSession
from core.handover.session_files import session_files
from core.handover.sync import LIST, sync_session
from tests.handover.sessions import run_of, session_of

NAME = "2026-03-02 drying cabinet bench"


def grown(count, name="drying cabinet bench"):
    """The same session after so many runs."""
    return session_of(count, name)


def content(folder):
    return {one.name: one.read_bytes() for one in folder.iterdir()}


def everything(place):
    """Every file below a place with its bytes and the moment of its last change."""
    files = (one for one in sorted(place.rglob("*")) if one.is_file())
    return {str(one.relative_to(place)): (one.read_bytes(), one.stat().st_mtime_ns) for one in files}


def test_a_new_session_is_written_and_a_second_time_nothing_is_touched(tmp_path):
    """The first call writes; any number of calls more change no byte and no time stamp."""
    first = sync_session(grown(2), tmp_path)
    assert (first.folder, first.outcome) == (tmp_path / NAME, "new")
    before = everything(tmp_path)
    for _ in range(3):
        again = sync_session(grown(2), tmp_path)
        assert (again.folder, again.outcome, again.left_alone) == (tmp_path / NAME, "same", ())
    assert everything(tmp_path) == before


def test_a_session_that_grew_takes_the_place_of_its_older_self(tmp_path):
    """An untouched older export is replaced, not doubled."""
    sync_session(grown(1), tmp_path)
    grew = sync_session(grown(3), tmp_path)
    assert (grew.folder, grew.outcome) == (tmp_path / NAME, "renewed")
    assert content(tmp_path / NAME) == session_files(grown(3))
    assert sorted(one.name for one in tmp_path.iterdir()) == [LIST, NAME]


@pytest.mark.parametrize("change", ["edit", "edit and new sums", "add", "take away", "no list"])
def test_what_the_laptop_changed_is_left_and_the_export_goes_beside(tmp_path, change):
    """An edit (even one with fitting sums), a file more or less, or a folder nobody remembers writing: untouched,
    said, and the newer session stands beside it."""
    sync_session(grown(1), tmp_path)
    folder = tmp_path / NAME
    if change.startswith("edit"):
        (folder / "runs.csv").write_bytes((folder / "runs.csv").read_bytes().replace(b"brass rod", b"brass bar"))
    if change == "edit and new sums":
        edited = replace(run_of("run-1"), name="brass bar, 8 m/s")
        for name, data in session_files(ExportSession("drying cabinet bench", (edited,))).items():
            (folder / name).write_bytes(data)
    if change == "add":
        (folder / "my plot.png").write_bytes(b"png")
    if change == "take away":
        (folder / "SHA256SUMS").unlink()
    if change == "no list":
        (tmp_path / LIST).unlink()
    before = everything(folder)
    beside = sync_session(grown(2), tmp_path)
    assert beside.folder == tmp_path / f"{NAME} (2)"
    assert beside.left_alone == (folder,)
    assert any("changed on the laptop" in one for one in beside.sentences())
    assert everything(folder) == before
    assert content(beside.folder) == session_files(grown(2))
    later = sync_session(grown(3), tmp_path)
    assert (later.folder, later.outcome) == (beside.folder, "renewed")
    assert everything(folder) == before


def test_what_a_file_manager_leaves_is_no_change(tmp_path):
    """Looking at the folder on the laptop does not make copies pile up."""
    sync_session(grown(1), tmp_path)
    for litter in (".DS_Store", "._runs.csv", "Thumbs.db", "desktop.ini"):
        (tmp_path / NAME / litter).write_bytes(b"x")
    assert sync_session(grown(2), tmp_path).outcome == "renewed"
    assert content(tmp_path / NAME) == session_files(grown(2))


def test_two_sessions_of_one_title_do_not_push_each_other_out(tmp_path):
    """Same title, same day: each has a folder of its own and keeps it."""
    other = ExportSession("drying cabinet bench", (run_of("run-1", recorded_at="2026-03-02T15:00:00+01:00"),))
    assert sync_session(grown(1), tmp_path).folder == tmp_path / NAME
    second = sync_session(other, tmp_path)
    assert (second.folder, second.outcome, second.left_alone) == (tmp_path / f"{NAME} (2)", "new", ())
    assert sync_session(grown(2), tmp_path).folder == tmp_path / NAME
    assert sync_session(other, tmp_path).outcome == "same"
    assert content(tmp_path / NAME) == session_files(grown(2))


def test_a_link_or_a_file_in_the_way_is_not_followed_or_replaced(tmp_path):
    """A link that would lead elsewhere and a file of that name are left alone."""
    elsewhere = tmp_path / "elsewhere"
    elsewhere.mkdir()
    place = tmp_path / "stick"
    place.mkdir()
    (place / NAME).symlink_to(elsewhere)
    (place / f"{NAME} (2)").write_text("a file")
    assert sync_session(grown(1), place).folder == place / f"{NAME} (3)"
    assert list(elsewhere.iterdir()) == []


def test_a_stick_that_is_gone_is_one_sentence_and_no_folder_in_its_stead(tmp_path):
    """Nothing is made where the stick used to be mounted."""
    with pytest.raises(HandoverFault, match="plug it in again"):
        sync_session(grown(1), tmp_path / "media" / "stick")
    assert list(tmp_path.iterdir()) == []


def test_a_session_without_runs_is_refused(tmp_path):
    with pytest.raises(HandoverFault, match="no run"):
        sync_session(ExportSession("empty", ()), tmp_path)


@settings(max_examples=200, deadline=None)
@given(st.text(max_size=80))
def test_any_title_gives_a_name_that_every_file_system_takes(title):
    """No separator, no control sign, no reserved device, no point or space at the end, some length."""
    name = folder_name(ExportSession(title, (run_of("1", recorded_at=""),)))
    assert 0 < len(name) <= 68
    assert not set(name) & set('/\\:*?"<>|\0')
    assert name.isprintable()
    assert name[-1] not in ". "
    assert not name.startswith(".")
    assert name.split(".")[0].upper() not in {"CON", "PRN", "AUX", "NUL", "COM1", "LPT9"}


def sync_and_die(session, place, left):
    """Sync in a child process that is killed once `left` bytes are written, or at one of the steps after."""

    def spend(cost):
        nonlocal left
        left -= cost
        if left < 0:
            os.kill(os.getpid(), signal.SIGKILL)

    def cut_write(path, data):
        with path.open("xb") as file:
            file.write(data[: max(0, left)])
            file.flush()
            spend(len(data))

    def step(call):
        def stepped(*args, **options):
            spend(120)
            done = call(*args, **options)
            spend(120)
            return done

        return stepped

    def cut_remember(place, files, written, mark, remember=sync._remember):
        line = f"\n{sync._digest(files)} {mark}\n".encode()
        if left < len(line):
            with (place / LIST).open("ab") as file:
                file.write(line[: max(0, left)])
        spend(len(line))
        remember(place, files, written, mark)

    child = os.fork()
    if child == 0:
        export._write = cut_write
        export._sync_folder = step(export._sync_folder)
        sync._remember = cut_remember
        export.shutil = type("cut", (), {"rmtree": staticmethod(step(shutil.rmtree))})
        export.Path.rename = step(Path.rename)
        if random.random() < 0.6:
            export._exchange = lambda one, other: False
        try:
            sync_session(session, place)
        except BaseException:
            os._exit(3)
        os._exit(0)
    return os.waitpid(child, 0)[1]


def cut_syncs(place, seed, count):
    """Cut so many syncs at random; how many were cut, and how often the old and the new stood there."""
    random.seed(seed)
    length = sum(len(data) for data in session_files(grown(3)).values())
    sync_session(grown(1), place)
    runs, killed, found = 1, 0, {"old": 0, "new": 0}
    foreign = place / "thesis.txt"
    foreign.write_text("not ours")
    for _ in range(count):
        after = runs % 3 + 1
        at = random.choice([random.randrange(200), random.randrange(length), length + random.randrange(2500)])
        ended = sync_and_die(grown(after), place, at)
        assert ended in (0, signal.SIGKILL)
        killed += ended != 0
        session = read_session(place / NAME)
        assert len(session.runs) in (runs, after)
        found["new" if len(session.runs) == after else "old"] += 1
        done = sync_session(grown(after), place)
        assert (done.folder, done.left_alone) == (place / NAME, ())
        assert content(place / NAME) == session_files(grown(after))
        assert sorted(one.name for one in place.iterdir()) == [LIST, NAME, "thesis.txt"]
        assert foreign.read_text() == "not ours"
        runs = after
    return killed, found


def test_cut_at_any_byte_the_folder_is_old_or_new_and_the_next_call_finishes(tmp_path):
    """Unplugged at random: never torn, never doubled, nothing of others touched, whole after the next call."""
    killed, found = cut_syncs(tmp_path, seed=1, count=40)
    assert killed >= 20
    assert min(found.values()) >= 4
