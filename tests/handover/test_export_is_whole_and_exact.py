"""An exported folder is written whole or not at all, the same to the byte, and reads back to the same session."""

import csv
import hashlib
import json
import os
import random
import signal
from dataclasses import replace

import pytest
from csvw import CSVW
from hypothesis import given, settings
from hypothesis import strategies as st

from core.bench.readings import Readings, Ruling
from core.errors import BadReadings, HandoverFault
from core.handover import export
from core.handover.export import export_session, read_session
from core.handover.session import ExportSession
from core.handover.session_files import FILES, session_files, session_from_files
from tests.handover.sessions import READINGS, run_of, session_of

texts = st.text(st.characters(exclude_characters="\0", exclude_categories=["Cs"]), max_size=30)
names = st.lists(texts.filter(bool), min_size=1, max_size=4, unique=True)


def content(folder):
    """Every file of a folder, name to bytes."""
    return {one.name: one.read_bytes() for one in folder.iterdir()}


def without_answers(session):
    """The session as it reads back: all that was recorded, the answers to be computed again."""
    return replace(session, runs=tuple(replace(run, answer=None) for run in session.runs))


@settings(max_examples=60, deadline=None)
@given(names, texts, texts, texts, st.lists(st.floats(0, 1e5), unique=True, max_size=9).map(sorted), st.data())
def test_any_session_reads_back_as_it_was(runs, title, note, source, time_s, data):
    """Whatever texts a person typed and whatever was read, the recorded side comes back to the last bit."""
    session = ExportSession(
        title,
        tuple(
            run_of(
                name,
                name=note,
                note=note,
                stamp_source=source,
                marks=source,
                decision=data.draw(st.sampled_from(["", "keep", "look", "discard"])),
                decision_reason=note,
                answer=None,
                no_answer=note,
                start_s=data.draw(st.none() | st.floats(0, 100)),
                kind=data.draw(st.sampled_from(["measured", "still-air", "rehearsal", "imported"])),
                invented=data.draw(st.booleans()),
                readings=Readings(
                    tuple(time_s), tuple(90.0 - t / 1e4 for t in time_s), data.draw(st.floats(0, 1))
                ),
                rulings=tuple(Ruling(i, i % 2 == 0, "person") for i in range(0, len(time_s), 2)),
            )
            for name in runs
        ),
    )
    assert session_from_files(session_files(session), "folder") == session


def test_the_same_session_gives_the_same_bytes(tmp_path):
    """Exported twice, and from what was read back, the folder is the same to the byte, and its sums are right."""
    session = session_of(3)
    export_session(session, tmp_path / "a")
    export_session(session, tmp_path / "b")
    first = content(tmp_path / "a")
    stamps = {one: one.stat().st_mtime_ns for one in (tmp_path / "a").iterdir()}
    export_session(session, tmp_path / "a")
    assert content(tmp_path / "b") == first == content(tmp_path / "a")
    assert {one: one.stat().st_mtime_ns for one in (tmp_path / "a").iterdir()} == stamps
    assert sorted(first) == sorted(FILES)
    for line in first["SHA256SUMS"].decode().splitlines():
        digest, name = line.split("  ")
        assert hashlib.sha256(first[name]).hexdigest() == digest
    assert read_session(tmp_path / "a") == without_answers(session)
    assert sorted(one.name for one in tmp_path.iterdir()) == ["a", "b"]


@pytest.mark.parametrize(
    "text", ["=1+1", "+1", "-1", "@SUM(A1)", "\t=1", "\r=1", "'=1", "''", "=cmd|' /C calc'!A0"]
)
def test_a_text_that_could_be_a_formula_is_made_harmless(tmp_path, text):
    """No text field begins with a character that a spreadsheet acts on, and the text still reads back exactly."""
    session = ExportSession(text, (run_of(text, name=text, note=text, stamp_source=text, answer=None),))
    export_session(session, tmp_path / "out")
    for table in ("runs.csv", "readings.csv"):
        with (tmp_path / "out" / table).open(encoding="utf-8", newline="") as file:
            rows = list(csv.DictReader(file))
        cells = [cell for row in rows for key, cell in row.items() if key in ("session", "run", "name", "note")]
        assert cells
        assert not any(cell.startswith(("=", "+", "-", "@", "\t", "\r")) for cell in cells)
    assert read_session(tmp_path / "out") == session


def test_metadata_describes_every_column_and_an_independent_reader_agrees(tmp_path):
    """The csvw library finds the tables valid and reads the same numbers; every number has its unit."""
    session = session_of(2)
    export_session(session, tmp_path / "out")
    group = CSVW(str(tmp_path / "out" / "csv-metadata.json"), validate=True)
    assert group.is_valid
    runs, readings = (list(table) for table in group.tables)
    assert [row["run"] for row in runs] == ["run-1", "run-2"]
    assert runs[0]["h_W_m2K"] == session.runs[0].answer.h_W_m2K
    assert runs[0]["body_diameter_m"] == 0.016
    assert runs[0]["flow_velocity_readings_m_s"] == [7.9, 8.1, 8.0]
    assert runs[0]["invented"] is False
    assert runs[0]["degrees_of_freedom"] is None
    assert runs[0]["recorded_at"].isoformat() == "2026-03-02T10:15:30+01:00"
    assert [row["time_s"] for row in readings][:5] == list(READINGS.time_s)
    assert readings[4]["used"] is False
    assert readings[4]["left_out_cause"] == "late"
    assert [row["ruling"] for row in readings[:5]] == [None, "keep", None, None, "leave-out"]
    metadata = json.loads((tmp_path / "out" / "csv-metadata.json").read_bytes())
    for table in metadata["tables"]:
        with (tmp_path / "out" / table["url"]).open(encoding="utf-8", newline="") as file:
            assert next(csv.reader(file)) == [one["name"] for one in table["tableSchema"]["columns"]]
        for column in table["tableSchema"]["columns"]:
            assert column["dc:description"]
            if column["datatype"] == "double":
                assert column["http://qudt.org/schema/qudt/ucumCode"]


def test_pandas_and_the_csv_module_read_the_same_numbers(tmp_path):
    """Both read every number to the last bit, with no options."""
    pandas = pytest.importorskip("pandas")
    session = session_of(2)
    export_session(session, tmp_path / "out")
    table = pandas.read_csv(tmp_path / "out" / "readings.csv")
    assert table["time_s"].tolist() == list(READINGS.time_s) * 2
    assert table["used"].tolist() == [True, True, True, True, False] * 2
    runs = pandas.read_csv(tmp_path / "out" / "runs.csv")
    with (tmp_path / "out" / "runs.csv").open(encoding="utf-8", newline="") as file:
        plain = list(csv.DictReader(file))
    for name in ("h_W_m2K", "time_constant_s", "thermometer_resolution_K", "air_pressure_Pa"):
        assert runs[name].tolist() == [float(row[name]) for row in plain]


def export_and_die(session, folder, left):
    """Export in a child process that kills itself once `left` bytes are written, or at one of the steps after."""

    def cut_write(path, data, write=export._write):
        nonlocal left
        if left <= len(data):
            with path.open("xb") as file:
                file.write(data[:left])
                file.flush()
                os.kill(os.getpid(), signal.SIGKILL)
        left -= len(data)
        write(path, data)

    def cut(step, odds):
        def stepped(*args):
            nonlocal left
            if left < odds:
                os.kill(os.getpid(), signal.SIGKILL)
            left -= odds
            return step(*args)

        return stepped

    child = os.fork()
    if child == 0:
        export._write = cut_write
        for name in ("_sync_folder", "_put_in_place"):
            setattr(export, name, cut(getattr(export, name), 500))
        if random.random() < 0.5:
            export._exchange = lambda one, other: False
            export.Path.rename = cut(export.Path.rename, 500)
        export_session(session, folder)
        os._exit(0)
    return os.waitpid(child, 0)[1]


def cut_exports(folder, seed, count):
    """Cut so many exports at random; how many were cut, and how often old or new stood there whole."""
    random.seed(seed)
    sessions = [session_of(2, "first"), session_of(2, "second")]
    whole = [session_files(one) for one in sessions]
    length = sum(len(data) for data in whole[0].values())
    export_session(sessions[0], folder)
    old, killed, found = 0, 0, [0, 0]
    for _ in range(count):
        at = random.randrange(length) if random.random() < 0.6 else length + random.randrange(3000)
        killed += export_and_die(sessions[1 - old], folder, at) != 0
        session = read_session(folder)
        export.recover(folder)
        there = content(folder)
        assert there in whole
        assert session.name == ("first", "second")[whole.index(there)]
        found[whole.index(there) != old] += 1
        old = whole.index(there)
    return killed, found


def test_an_export_cut_anywhere_leaves_the_old_or_the_new_whole(tmp_path):
    """Killed at a random byte or step, with and without an exchange of names, the folder is the old or the new."""
    killed, (old, new) = cut_exports(tmp_path / "out", seed=1, count=40)
    assert killed >= 20
    assert old >= 5
    assert new >= 5
    export_session(session_of(1), tmp_path / "out")
    assert [one.name for one in tmp_path.iterdir()] == ["out"]


def test_a_full_disk_leaves_what_was_there(tmp_path, monkeypatch):
    """A write that fails is one sentence, and the older export still stands with nothing left beside it."""
    export_session(session_of(1), tmp_path / "out")
    before = content(tmp_path / "out")

    def full(path, data):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(export, "_write", full)
    with pytest.raises(HandoverFault, match=r"No space left.*still stands"):
        export_session(session_of(2), tmp_path / "out")
    assert content(tmp_path / "out") == before
    assert [one.name for one in tmp_path.iterdir()] == ["out"]


def test_a_folder_with_other_things_in_it_is_left_alone(tmp_path):
    """A foreign file, a changed table or missing sums stop the export; nothing is overwritten."""
    out = tmp_path / "out"
    export_session(session_of(1), out)
    (out / "notes.txt").write_text("mine")
    with pytest.raises(HandoverFault, match=r"notes\.txt"):
        export_session(session_of(2), out)
    (out / "notes.txt").unlink()
    (out / "runs.csv").write_bytes((out / "runs.csv").read_bytes().replace(b"brass rod", b"steel rod"))
    with pytest.raises(HandoverFault, match="not as it was exported"):
        export_session(session_of(2), out)
    (out / "SHA256SUMS").unlink()
    with pytest.raises(HandoverFault, match="lacks its SHA256SUMS"):
        export_session(session_of(2), out)
    assert read_session(out).runs[0].name.startswith("steel rod")


def changed(name, old, new):
    """The files of a session with one table changed, and no sums to notice it."""
    files = session_files(session_of(2))
    assert old in files[name]
    files[name] = files[name].replace(old, new, 1)
    del files["SHA256SUMS"]
    return files


@pytest.mark.parametrize(
    ("name", "old", "new", "sentence"),
    [
        ("runs.csv", b"measured", b"guessed", r"runs.csv line 2, column kind: 'guessed' is none of measured"),
        ("runs.csv", b"run-2", b"run-1", r"runs.csv line 3, column run: 'run-1' is already the name"),
        ("runs.csv", b"body_shape", b"body_shap", r"line 1, column body_shap: .* nearest is 'body_shape'"),
        ("runs.csv", b"cylinder", b"cylindre", r"line 2, column body_shape: .*'cylinder' is the nearest"),
        ("runs.csv", b"0.016", b"0.016mm", r"line 2, column body_diameter_m: '0.016mm' is not a number"),
        ("runs.csv", b"0.016", b"-0.016", r"line 2, column body_diameter_m: the value is -0.016"),
        ("runs.csv", b"0.016", b"", r"line 2, column body_diameter_m: the value is missing"),
        ("runs.csv", b"false", b"no", r"line 2, column invented: 'no' is neither true nor false"),
        ("runs.csv", b",3,5,", b",3.5,5,", r"line 2, column flow_row: 3.5 is not a whole number"),
        ("runs.csv", b"\r\n", b"", r"line 1, column"),
        ("readings.csv", b"run-1,2,", b"run-1,3,", r"readings.csv line 3, column row: row 3 stands where row 2"),
        ("readings.csv", b"run-1,2,1.9,", b"run-1,2,0.0,", r"line 3, column time_s"),
        ("readings.csv", b"89.0", b"8900.0", r"line 3, column reading_C: 8900.0 °C is outside"),
        ("runs.csv", b"run-2", b"run-9", r"readings.csv line 7, column run: runs.csv has no run 'run-2'"),
        ("readings.csv", b"leave-out", b"drop", r"line 6, column ruling: 'drop' is neither"),
        ("readings.csv", b"time_s", b"time", r"line 1, column time: the name is not known"),
    ],
)
def test_a_damaged_export_is_refused_by_line_and_column(name, old, new, sentence):
    """One sentence names the file, the line and the column."""
    with pytest.raises(BadReadings, match=sentence):
        session_from_files(changed(name, old, new), "out")


def test_an_incomplete_or_changed_copy_is_noticed():
    """A missing file, a changed byte or a foreign line in the sums is refused before anything is computed."""
    files = session_files(session_of(1))
    for name in ("runs.csv", "readings.csv", "csv-metadata.json"):
        with pytest.raises(BadReadings, match=f"{name}: the file is missing"):
            session_from_files({key: data for key, data in files.items() if key != name}, "out")
    with pytest.raises(BadReadings, match="not as it was exported"):
        session_from_files(files | {"readings.csv": files["readings.csv"][:-10]}, "out")
    with pytest.raises(BadReadings, match="SHA256SUMS line 1"):
        session_from_files(files | {"SHA256SUMS": b"0  /etc/passwd\n"}, "out")


@settings(max_examples=200, deadline=None)
@given(
    st.sampled_from(["runs.csv", "readings.csv"]), st.integers(0, 4000), st.integers(0, 40), st.binary(max_size=6)
)
def test_a_damaged_export_is_read_or_refused(name, at, cut, put):
    """Damage at any byte raises nothing but the project's own refusal."""
    files = session_files(session_of(1))
    files[name] = files[name][:at] + put + files[name][at + cut :]
    del files["SHA256SUMS"]
    sentence = ""
    try:
        session_from_files(files, "out")
    except BadReadings as error:
        sentence = str(error)
    assert sentence.isprintable()


@pytest.mark.parametrize(
    ("session", "sentence"),
    [
        (ExportSession("empty", ()), "no run"),
        (ExportSession("twice", (run_of("a"), run_of("a"))), "Two runs"),
        (ExportSession("nul", (run_of("a", note="\0"),)), "NUL"),
        (ExportSession("half a pair", (run_of("a", note="\ud800"),)), "no file can hold"),
        (ExportSession("nameless", (run_of(""),)), "needs a name"),
        (ExportSession("kind", (run_of("a", kind="guess"),)), "a kind out of"),
        (ExportSession("decision", (run_of("a", decision="perhaps"),)), "a decision"),
        (ExportSession("time", (run_of("a", recorded_at="yesterday"),)), "ISO 8601"),
        (ExportSession("rulings", (run_of("a", rulings=(Ruling(99, True),)),)), "rulings"),
    ],
)
def test_a_session_that_no_table_can_hold_is_refused(tmp_path, session, sentence):
    """It is one sentence, and no folder appears."""
    with pytest.raises(HandoverFault, match=sentence):
        export_session(session, tmp_path / "out")
    assert list(tmp_path.iterdir()) == []
