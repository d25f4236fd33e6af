"""The way from tap to CSV where SciPy, Matplotlib, the screen and all that the device strips cannot be imported.

`on_numpy_alone.py OUT` taps a run of the demo session into a journal again, fits and judges it, lays the law over the
demo's speeds, writes the export to OUT, and lets the command fit what was written. Ends with status 1 and a sentence
where a blocked package was asked for, whether or not somebody coped with its absence; else prints h."""

import json
import sys
from pathlib import Path

BLOCKED = ("scipy", "matplotlib", "pandas", "kivy", "plyer", "lib2to3", "ensurepip", "idlelib", "tkinter", "test")


class Block:
    """Refuses what the device does not have, and remembers that it was asked."""

    def __init__(self) -> None:
        self.asked: list[str] = []

    def find_spec(self, name, _path=None, _target=None):
        stripped = name.split(".")[-1] == "tests" and not name.startswith("numpy")
        if name.split(".")[0] in BLOCKED or stripped:
            self.asked.append(name)
            raise ModuleNotFoundError(f"No module named {name!r}", name=name)


def tapped_again(run, folder):
    """The readings that a journal holds once each of the run's numbers was tapped or typed."""
    from core.bench.setup_file import setup_to_text
    from core.recording.events import RunOpened, SessionOpened
    from core.recording.opening import open_journal
    from core.recording.tally import Confirmed, Tally

    opened = open_journal(folder, wall_time=run.recorded_at)
    journal, step_K = opened.journal, run.setup.thermometer.resolution_K
    session = journal.open_session(SessionOpened("Again", run.recorded_at)).number
    begun = RunOpened("measured", setup_to_text(run.setup), run.recorded_at, "loop", run.readings.stamp_halfwidth_s)
    number = journal.open_run(session, begun).number
    tally = Tally(step_K, lambda event: journal.keep(session, number, event), (), run.setup.thermometer.refresh_s)
    before = None
    for time_s, reading_C in zip(run.readings.time_s, run.readings.reading_C, strict=True):
        steps = 0 if before is None else round((before - reading_C) / step_K)
        given = tally.tap(time_s, steps) if steps in (1, 2, 3) else tally.typed(reading_C, time_s)
        if not isinstance(given, Confirmed):
            raise SystemExit(f"the tally refused {reading_C} °C at {time_s} s: {given}")
        before = reading_C
    tally.end(run.readings.time_s[-1])
    opened.close()
    return tally.state.readings


def main(out: Path) -> int:
    from dataclasses import replace

    from core.__main__ import main as command
    from core.demo import __file__ as demo
    from core.handover.export import export_session, read_session
    from core.judgement.judge import judge

    session = read_session(Path(demo).parent / "session")
    first = session.runs[0]
    readings = replace(tapped_again(first, out.parent), stamp_halfwidth_s=first.readings.stamp_halfwidth_s)
    answer = judge(readings, first.setup)
    export_session(replace(session, runs=(replace(first, readings=readings, answer=answer), *session.runs[1:])), out)
    statuses = [command(words) for words in (["fit", str(out)], ["series", str(Path(demo).parent / "session")])]
    print(json.dumps({"h": answer.h_W_m2K, "readings": len(readings), "statuses": statuses}))
    return 0


if __name__ == "__main__":
    block = Block()
    sys.meta_path.insert(0, block)
    status = main(Path(sys.argv[1]))
    if block.asked:
        sys.exit(f"the way from tap to CSV asks for {', '.join(sorted(set(block.asked)))}")
    sys.exit(status)
