"""The commands of the terminal give what their contract promises, in JSON for programs and in words for people."""

import html
import json
import math
import re
import subprocess
import sys
from dataclasses import replace

import pytest

from core.__main__ import main
from core.bench.readings import Ruling
from core.bench.setup_file import setup_from_text, setup_to_text
from core.commands.json_form import answer_form, line
from core.handover.columns import RESULTS, cell
from core.handover.export import export_session, read_session
from core.handover.readings_csv import readings_to_text
from core.handover.recompute import answers_to
from core.handover.session import ExportSession
from core.judgement.answer import Answer
from tests.commands.simulated import run_for, session_for

FIT_KEYS = {
    "time_constant_s",
    "time_constant_u_s",
    "h_W_m2K",
    "h_u_W_m2K",
    "h_U95_W_m2K",
    "h_total_W_m2K",
    "h_radiation_W_m2K",
    "biot",
    "nusselt",
    "nusselt_u",
    "reynolds",
    "reynolds_u",
    "asymptote_C",
    "readings",
    "readings_left_out",
    "window_s",
    "expected",
    "budget",
    "checks",
    "verdict",
    "setup",
}
EXPECT_KEYS = {
    "film_temperature_C",
    "velocity_narrowest_m_s",
    "reynolds",
    "expected",
    "h_W_m2K",
    "time_constant_s",
    "run_length_s",
    "changes_per_s_start",
    "mode",
    "mode_reason",
    "h_U95_rel",
}


@pytest.fixture(scope="module")
def session():
    """Four speeds, answered as the app answers them."""
    bare = session_for((6.0, 8.0, 10.0, 12.0))
    answers = answers_to(bare)
    assert all(isinstance(one, Answer) for one in answers), answers
    runs = (replace(run, answer=answer) for run, answer in zip(bare.runs, answers, strict=True))
    return ExportSession(bare.name, tuple(runs))


@pytest.fixture(scope="module")
def folder(session, tmp_path_factory):
    """The same session as an exported folder."""
    out = tmp_path_factory.mktemp("export") / "bench"
    export_session(session, out)
    return out


def said(capsys, *words):
    """What a command prints; it must succeed."""
    assert main([str(word) for word in words]) == 0
    out, err = capsys.readouterr()
    assert err == ""
    return out


def strict(text):
    """JSON without NaN and Infinity."""

    def refuse(constant):
        raise AssertionError(constant)

    return json.loads(text, parse_constant=refuse)


def finite(value):
    """Every number in a JSON value is finite."""
    if isinstance(value, dict):
        return all(finite(one) for one in value.values())
    if isinstance(value, list):
        return all(finite(one) for one in value)
    return not isinstance(value, float) or math.isfinite(value)


@pytest.mark.parametrize("mode", ["change", "beat"])
def test_fit_answers_with_every_key_of_the_contract(tmp_path, capsys, mode):
    """The object has all keys, only finite numbers, the true h within U95, and the whole set-up that was used."""
    run = run_for("run", 8.0, seed=5, mode=mode)
    (tmp_path / "A.csv").write_bytes(readings_to_text(run.readings).encode())
    (tmp_path / "A.toml").write_text(setup_to_text(run.setup), encoding="utf-8")
    (one,) = said(capsys, "fit", tmp_path / "A.csv", "--json").splitlines()
    answer = strict(one)
    assert set(answer) >= FIT_KEYS
    assert finite(answer)
    assert abs(answer["h_W_m2K"] - run.true_h_W_m2K) < answer["h_U95_W_m2K"]
    assert answer["verdict"] in ("keep", "look", "again")
    assert {one["outcome"] for one in answer["checks"]} <= {"good", "look", "again"}
    assert set(answer["expected"][0]) == {"correlation", "source", "nusselt", "h_W_m2K", "band_rel", "in_range"}
    assert set(answer["budget"][0]) >= {"input", "value", "u", "sensitivity", "share"}
    assert set(answer["checks"][0]) >= {"name", "outcome", "value", "limit", "source", "advice"}
    assert sum(one["share"] for one in answer["budget"]) == pytest.approx(1.0, abs=1e-6)
    sections = "".join(
        f"[{section}]\n" + "".join(f"{key} = {json.dumps(v)}\n" for key, v in keys.items() if v not in (None, []))
        for section, keys in answer["setup"].items()
    )
    assert setup_from_text(sections, "again.toml") == run.setup


def test_an_exported_run_gives_what_the_app_showed_to_the_last_digit(session, folder, capsys):
    """`fit FOLDER` prints the very answers of the app, in the order of the session."""
    lines = said(capsys, "fit", folder, "--json").splitlines()
    assert len(lines) == len(session.runs)
    for printed, run in zip(lines, session.runs, strict=True):
        about = {key: strict(printed)[key] for key in ("file", "run", "name", "kind", "invented")}
        assert about["run"] == run.run
        assert printed == line(answer_form(run.answer, about))


def test_rulings_and_a_moved_start_survive_the_export(tmp_path, capsys):
    """A person's words on single readings and on the start act on the laptop as they did in the app."""
    run = run_for("run", 8.0, seed=5, start_s=20.0, rulings=(Ruling(30, False), Ruling(31, True)))
    (answer,) = answers_to(ExportSession("s", (run,)))
    plain = answers_to(ExportSession("s", (run_for("run", 8.0, seed=5),)))[0]
    assert answer.h_W_m2K != plain.h_W_m2K
    export_session(ExportSession("s", (replace(run, answer=answer),)), tmp_path / "out")
    printed = strict(said(capsys, "fit", tmp_path / "out", "--json"))
    assert printed["h_W_m2K"] == answer.h_W_m2K
    assert 31 in [one["row"] for one in printed["readings_left_out"]]
    assert printed["window_s"][0] >= 20.0


def test_a_setup_serves_many_files_in_the_order_given(tmp_path, capsys):
    """One set-up for several files gives one line a file, in their order."""
    run = run_for("run", 8.0, seed=5)
    (tmp_path / "bench.toml").write_text(setup_to_text(run.setup), encoding="utf-8")
    names = [tmp_path / name for name in ("B.csv", "A.csv")]
    for name in names:
        name.write_bytes(readings_to_text(run.readings).encode())
    lines = said(capsys, "fit", *names, "--setup", tmp_path / "bench.toml", "--json").splitlines()
    assert [strict(one)["file"] for one in lines] == [str(name) for name in names]


def test_the_words_of_fit_carry_value_uncertainty_unit_and_reason(folder, capsys):
    """In words: h with U95 and unit, the verdict with its reason, budget, checks, aligned."""
    text = said(capsys, "fit", folder)
    assert re.search(r"^(KEEP|LOOK|AGAIN): .+\.$", text, re.MULTILINE)
    assert re.search(r"^  h +\d+\.\d ± \d\.\d W/\(m²·K\)  U95 = ", text, re.MULTILINE)
    for word in ("budget of h", "checks", "published correlations", "time constant", "Reynolds number"):
        assert word in text


def test_expect_tells_the_run_before_it_is_made(tmp_path, capsys):
    """All keys of the contract, numbers that hang together, and the same in words."""
    (tmp_path / "bench.toml").write_text(setup_to_text(run_for("run", 8.0, seed=1).setup), encoding="utf-8")
    one = strict(said(capsys, "expect", "--setup", tmp_path / "bench.toml", "--json"))
    assert set(one) >= EXPECT_KEYS
    assert finite(one)
    assert one["mode"] in ("change", "beat")
    assert one["run_length_s"] > one["time_constant_s"] > 0
    assert one["mode_reason"] in said(capsys, "expect", "--setup", tmp_path / "bench.toml")


def test_air_gives_the_properties_of_the_contract(capsys):
    """Dry air at 300 K and 101 325 Pa as in the reference equation of Lemmon et al. (2000), within 0.2 %."""
    one = strict(said(capsys, "air", "--temperature-C", "26.85", "--pressure-Pa", "101325", "--json"))
    expected = {
        "density_kg_m3": 1.17700,
        "viscosity_Pa_s": 18.537e-6,
        "kinematic_viscosity_m2_s": 18.537e-6 / 1.17700,
        "conductivity_W_mK": 26.384e-3,
        "heat_capacity_J_kgK": 1006.37,
        "prandtl": 0.70706,
    }
    assert one == pytest.approx(expected, rel=2e-3)
    assert "1.17" in said(capsys, "air", "--temperature-C", "26.85", "--pressure-Pa", "101325")
    moist = ["air", "--temperature-C", "26.85", "--pressure-Pa", "101325", "--relative-humidity", "0.9", "--json"]
    assert strict(said(capsys, *moist))["density_kg_m3"] < one["density_kg_m3"]


def test_series_gives_the_law_over_the_speeds(session, folder, capsys):
    """The exponent of the simulation comes back within its uncertainty, each run with its residual."""
    one = strict(said(capsys, "series", folder, "--json"))
    assert set(one) >= {"C", "m", "C_u", "m_u", "correlation_ln_C_m", "runs", "next_velocity_m_s"}
    assert abs(one["m"] - 0.6) < 3 * one["m_u"]
    assert [run["run"] for run in one["runs"]] == [run.run for run in session.runs]
    assert set(one["runs"][0]) >= {"run", "reynolds", "reynolds_u", "nusselt", "nusselt_u", "residual"}
    assert "Nu = C·Re^m·Pr^(1/3)" in said(capsys, "series", folder)


def test_runs_that_cannot_stand_are_named_and_left_out_of_the_law(session, tmp_path, capsys):
    """A discarded run, a rehearsal and one without an answer are not in the law; the object says why."""
    runs = list(session.runs)
    runs[0] = replace(runs[0], decision="discard", decision_reason="the damper slipped")
    runs[1] = replace(runs[1], kind="rehearsal")
    short = replace(runs[2].readings, time_s=(0.0, 1.0), reading_C=(90.0, 89.0))
    runs.append(replace(runs[2], run="short", readings=short, answer=None, no_answer="too few"))
    export_session(ExportSession("s", tuple(runs)), tmp_path / "out")
    one = strict(said(capsys, "series", tmp_path / "out", "--json"))
    assert [run["run"] for run in one["runs"]] == ["run-3", "run-4"]
    assert [left["run"] for left in one["left_out"]] == ["run-1", "run-2", "short"]
    assert "the damper slipped" in one["left_out"][0]["reason"]


def test_one_speed_makes_no_law(session, tmp_path, capsys):
    """With one speed `series` says so in one sentence and exit 1."""
    export_session(ExportSession("s", session.runs[:1]), tmp_path / "out")
    assert main(["series", str(tmp_path / "out"), "--json"]) == 1
    out, err = capsys.readouterr()
    assert out == ""
    assert err.count("\n") == 1


def test_the_report_is_one_page_with_everything_in_it(session, folder, capsys):
    """Self-contained, every run with figures and its place in the CSV; what was stored agrees."""
    pytest.importorskip("matplotlib")
    (path,) = said(capsys, "report", folder).splitlines()
    page = (folder / "report" / "index.html").read_text(encoding="utf-8")
    assert path == str(folder / "report" / "index.html")
    assert page.count("data:image/png;base64,") == 1 + 2 * len(session.runs)
    assert not re.search(r"""(src|href)=["'](?!data:|#)""", page)
    assert "agrees with the export" in page
    for number, run in enumerate(session.runs, 2):
        assert html.escape(run.name) in page
        assert f"runs.csv:{number} h_W_m2K" in page
    pictures = sorted(one.name for one in (folder / "report").glob("*.png"))
    assert len(pictures) == 1 + 2 * len(session.runs)
    for name in pictures:
        assert (folder / "report" / name).read_bytes().startswith(b"\x89PNG")
    first = {one.name: one.read_bytes() for one in (folder / "report").iterdir()}
    said(capsys, "report", folder)
    assert {one.name: one.read_bytes() for one in (folder / "report").iterdir()} == first


def test_a_report_says_where_it_differs_from_the_export(session, tmp_path, capsys):
    """A stored result that the readings do not give again is shown beside what they give."""
    pytest.importorskip("matplotlib")
    answer = replace(session.runs[0].answer, nusselt=99.25)
    export_session(ExportSession("s", (replace(session.runs[0], answer=answer),)), tmp_path / "out")
    said(capsys, "report", tmp_path / "out")
    page = (tmp_path / "out" / "report" / "index.html").read_text(encoding="utf-8")
    assert "differ from the export" in page
    assert "99.25" in page


def test_texts_in_a_report_cannot_become_markup(session, tmp_path, capsys):
    """A name or a note with markup in it is shown as it was typed."""
    pytest.importorskip("matplotlib")
    run = replace(session.runs[0], name="<script>alert(1)</script>", note='"><img src=x>')
    export_session(ExportSession("<b>s</b>", (run,)), tmp_path / "out")
    said(capsys, "report", tmp_path / "out")
    page = (tmp_path / "out" / "report" / "index.html").read_text(encoding="utf-8")
    assert "<script" not in page
    assert "<img src=x" not in page
    assert "&lt;b&gt;s&lt;/b&gt;" in page


def test_a_session_without_matplotlib_says_what_to_install(folder, monkeypatch, capsys):
    """Without the library `report` is one sentence that names the extra."""
    monkeypatch.setitem(sys.modules, "matplotlib", None)
    assert main(["report", str(folder)]) == 1
    assert re.fullmatch(r".*Matplotlib.*report.*\.\n", capsys.readouterr().err)


def test_the_export_holds_every_result_that_fit_prints(session, folder):
    """Each result column of runs.csv carries the answer's own number."""
    for run, read in zip(session.runs, read_session(folder).runs, strict=True):
        assert isinstance(run.answer, Answer)
        assert replace(read, answer=run.answer) == run
        values = {column.name: cell(value(session, run)) for column, value in RESULTS}
        assert float(values["h_W_m2K"]) == run.answer.h_W_m2K
        assert values["verdict"] == run.answer.verdict


def test_no_command_but_report_loads_scipy_or_matplotlib(folder):
    """The way from a file to an answer runs on NumPy alone."""
    code = (
        "import sys; from core.__main__ import main\n"
        f"assert main(['fit', {str(folder)!r}]) == 0\n"
        "bad = [name for name in ('scipy', 'matplotlib', 'kivy', 'plyer') if name in sys.modules]\n"
        "sys.exit(bool(bad))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, check=False, timeout=120)
    assert done.returncode == 0, done.stderr.decode()


def test_a_reader_that_leaves_early_is_no_fault(folder):
    """`fit … | head -1` ends without a traceback."""
    words = f"{sys.executable} -m core fit {folder} --json | head -c 10"
    done = subprocess.run(["bash", "-c", words], capture_output=True, check=False, timeout=120)
    assert done.stderr == b""


def test_help_names_every_command(capsys):
    """--help is printed, with status 0."""
    text = said(capsys, "--help")
    for word in ("fit", "air", "expect", "series", "report", "import"):
        assert word in text
