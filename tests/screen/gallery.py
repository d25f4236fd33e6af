"""Every screen as a picture, and what is wrong with it: texts that are cut, targets that are too small.

`python tests/screen/gallery.py OUT [--only home,record] 1280x800/day/1.0/en 800x1280/night/1.5/de …` draws without any
display (SDL's offscreen driver), a folder a variant, and prints one JSON object. Without variants it takes those of
the suite; with `--sheet` it lays all pictures onto one contact sheet (ImageMagick). The data are invented here: a
bench of a small maker of fruit-drying cabinets, four runs whose taps follow a simulated display with a seeded hand."""

from __future__ import annotations

import argparse
import gc
import json
import os
import random
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass, replace
from pathlib import Path
from typing import Any

ROOT = Path(__file__).resolve().parents[2]
SCREENS = (
    "home-empty", "home", "bench-empty", "bench", "before", "rehearsal", "after", "answer", "answer-look",
    "answer-rehearsal", "answer-reason", "answer-still", "detail", "series", "handover", "settings", "intake",
    "record-waiting", "record", "record-refused", "record-number", "record-beat", "record-question", "record-rehearsal",
)  # fmt: skip
SETTLE_FRAMES = 10


TESTED = ("1280x800/day/1.5/de", "800x1280/night/1.5/en", "960x600/hall/1.0/en", "360x640/day/1.0/de")
VARIANTS = (
    *TESTED,
    "1280x800/day/1.0/en",
    "800x1280/hall/1.0/de",
    "640x360/night/1.0/en",
)  # in dp: 1280x800 is also an 11-inch tablet of 1920x1200 at a density of 1.5


@dataclass(frozen=True)
class Variant:
    """One size, palette, scale of text and language."""

    size: tuple[int, int]
    palette: str
    text: float
    language: str

    @classmethod
    def of(cls, words: str) -> Variant:
        size, palette, text, language = words.split("/")
        width, height = size.split("x")
        return cls((int(width), int(height)), palette, float(text), language)

    @property
    def phone(self) -> bool:
        return min(self.size) < 500


def _arguments() -> argparse.Namespace:
    parser = argparse.ArgumentParser()
    parser.add_argument("out", type=Path)
    parser.add_argument("variants", nargs="*", default=list(VARIANTS))
    parser.add_argument("--density", default="1")
    parser.add_argument("--only", default="")
    parser.add_argument("--sheet", action="store_true")
    return parser.parse_args()


def _prepare(arguments: argparse.Namespace) -> None:
    home = Path(tempfile.mkdtemp(prefix="gallery")) / "a_home_with_a_very_long_name/the_measuring_room"
    home.mkdir(parents=True)
    os.environ.update(
        HOME=str(home),
        SDL_VIDEODRIVER="offscreen",
        SDL_AUDIODRIVER="dummy",
        KIVY_DPI=str(160 * float(arguments.density)),
        KIVY_METRICS_DENSITY=arguments.density,
    )
    sys.path.insert(0, str(ROOT))
    from mobileapp.__main__ import prepare_environment

    prepare_environment(Variant.of(arguments.variants[0]).size)


class Gallery:
    """One model on invented data, and the pages over it."""

    def __init__(self, density: float) -> None:
        from kivy.base import EventLoop
        from kivy.clock import Clock
        from kivy.core.window import Window
        from kivy.lang import Builder

        from mobileapp.device.clock import SystemClock
        from mobileapp.device.haptics import NoHaptics
        from mobileapp.device.ports import Device
        from mobileapp.device.screen import WindowScreen
        from mobileapp.device.sound import NoSounds
        from mobileapp.device.stamps import LoopStamp
        from mobileapp.model import Model
        from mobileapp.preferences import Preferences
        from mobileapp.theme import look, register_fonts

        self.density = density
        self.window, self.loop, self.clock, self.builder = Window, EventLoop, Clock, Builder
        register_fonts()
        look.wear("day", 1.0)
        look.bind(ground=lambda _look, ground: setattr(Window, "clearcolor", ground))
        self.look = look
        data = Path(tempfile.mkdtemp(prefix="gallery"))
        device = Device(SystemClock(), LoopStamp(), NoHaptics(), NoSounds(), WindowScreen(), data)
        self.model = Model(device, Preferences())
        EventLoop.ensure_window()
        self.navigator = None
        EventLoop.start()

    def put_on(self, variant: Variant) -> None:
        """Change size, palette, text and language; the next page shown is made anew."""
        from mobileapp import words

        self.variant = variant
        words.use(variant.language)
        self.window.size = variant.size
        self.look.wear(variant.palette, variant.text)
        self.window.clearcolor = self.look.ground
        self.settle(3)

    def settle(self, frames: int = SETTLE_FRAMES) -> None:
        """Let layouts come to rest; nothing is drawn, which is what costs time without a graphics card."""
        for _frame in range(frames):
            self.clock.tick()
            self.builder.sync()
            self.clock.tick_draw()
            self.builder.sync()

    def show(self, name: str, **aim: object) -> object:
        from mobileapp.navigation import Navigator

        if self.navigator is not None:
            self.navigator.current_screen.leave()
            self.window.remove_widget(self.navigator)
            self.navigator.clear_widgets()
            self.navigator = None
            gc.collect()
        self.navigator = Navigator(self.model)
        self.window.add_widget(self.navigator)
        self.navigator.trail = [("home", {})] if name != "home" else []
        self.navigator.go(name, **aim)
        self.settle()
        return self.navigator.get_screen(name)

    # ------------------------------------------------------------------ invented data

    def fill(self) -> None:
        """A session with a bench and four measured runs, and one rehearsal."""
        from mobileapp import rehearsing

        bench = replace(
            rehearsing.SHORT_BENCH,
            body=replace(rehearsing.SHORT_BENCH.body, diameter_m=0.016, length_m=0.11, material="brass"),
            thermometer=replace(rehearsing.SHORT_BENCH.thermometer, refresh_s=0.5),
        )
        self.model.new_session("Drying cabinet, brass rod")
        self.model.save_setup(bench)
        self.runs = []
        for seed, velocity in enumerate((12.0, 8.5, 6.0, 4.2), start=1):
            setup = replace(bench, flow=replace(bench.flow, velocity_m_s=velocity))
            self.runs.append(self._measured(setup, seed))
        self.rehearsal = self._rehearsed()
        self.wait_for_answers()

    def _measured(self, setup: Any, seed: int) -> str:
        """A run whose h follows the power 0.6 of the velocity."""
        from core.bench.setup_file import setup_to_text
        from core.recording.events import RunEnded, RunOpened, Typed
        from mobileapp import rehearsing

        plan = rehearsing.plan(setup, "change", 1000.0, seed)
        opened = RunOpened(
            "measured", setup_to_text(plan.setup), f"2026-03-0{seed}T10:0{seed}:00+01:00", "loop", 0.004
        )
        truth = json.dumps(json.loads(plan.truth) | {"h_W_m2K": 102.0 * (setup.flow.velocity_m_s / 12.0) ** 0.6})
        display = rehearsing.display_of(replace(opened, run_kind="rehearsal", truth=truth), plan.setup)
        records = self.model._records
        run = records.open_run(int(self.model.session.session), opened)
        hand = random.Random(seed)
        for reading, moment in display.changes().items():
            if 84 >= reading >= 33:
                records.keep(
                    int(self.model.session.session), run, Typed(moment + 0.22 + hand.gauss(0, 0.04), reading)
                )
        records.keep(int(self.model.session.session), run, RunEnded(2000.0))
        return str(run)

    def _rehearsed(self) -> str:
        from core.recording.events import RunEnded, Typed
        from mobileapp import rehearsing

        self.model.begin_rehearsal(own_bench=False, mode="change")
        run = int(self.model.recorder.pad.run)
        record = self.model._records.run(run)
        display = rehearsing.display_of(record.state.opened, record.setup)
        hand = random.Random(5)
        for reading, moment in display.changes().items():
            if 84 >= reading >= 33:
                self.model._records.keep(record.session, run, Typed(moment + 0.2 + hand.gauss(0, 0.03), reading))
        self.model._records.keep(record.session, run, RunEnded(1e9))
        self.model.recorder._running = None
        self.model.recorder.pad = None
        return str(run)

    def wait_for_answers(self) -> None:
        """Until every run of the session has its answer or its refusal."""
        told: set[str] = set()
        self.model.open_session(self.model.session.session)
        closed = [run.run for run in self.model.session.runs if not run.open]
        for run in closed:
            self.model.ask_answer(run, lambda _answer, r=run: told.add(r), lambda _why, r=run: told.add(r))
        self.until(lambda: len(told) == len(closed), 30.0)

    def until(self, done: Callable[[], bool], longest_s: float) -> None:
        """Turn the loop until something is so."""
        end = time.monotonic() + longest_s
        while not done():
            if time.monotonic() > end:
                raise RuntimeError("it took too long")
            self.settle(1)

    def tap_down(self, count: int) -> None:
        """A run on the pad with some taps, a second apart."""
        from mobileapp.device.ports import Stamp

        now = self.model.recorder.now_s() - count - 1
        for i in range(count):
            self.model.recorder.contact(Stamp(now + i + 0.3 * (i / count) ** 2, 0.004, "loop"))

    # ------------------------------------------------------------------ each screen in a telling state

    def stage(self, name: str) -> object:
        kind, _dash, state = name.partition("-")
        if kind == "record":
            return self._stage_record(state)
        if name == "answer-rehearsal":
            return self.show("answer", run=self.rehearsal)
        if kind == "answer":
            page = self.show("answer", run=self.runs[0])
            self.until(lambda: page.has_answer, 10.0)
            if state == "look":
                page.verdict, page.verdict_text = "look", "Look first"
                page.reason = (
                    "The first seconds do not follow the curve: start tapping later, or let the fan run up first."
                )
            if state == "still":
                page.stem_words, page.stem_adoptable = "Holder and stem carry off 20.3 ± 1.8 mW/K.", True
            if state == "reason":
                page.ask_reason()
            self.settle()
            return page
        if name == "after":
            return self.show("after", run=self.runs[1])
        if name == "detail":
            return self.show("detail", run=self.runs[0])
        page = self.show(kind)
        if name == "before":
            page.ids.cautions.children[0].ticked = True
            self.until(lambda: bool(page.expectation), 10.0)
        if name == "series":
            self.until(lambda: page.has_law, 20.0)
        self.settle()
        return page

    def _stage_record(self, state: str) -> object:
        model = self.model
        if state == "rehearsal":
            model.begin_rehearsal(own_bench=False, mode="change")
            return self.show("record")
        setup = model.session.setup
        beat = state in ("beat", "question")
        model.begin_run(replace(setup, recording=replace(setup.recording, mode="beat" if beat else "change")))
        if beat:
            self._stage_beat(state == "question")
        elif state != "waiting":
            self.tap_down(28)
        page = self.show("record")
        if state == "refused":
            page.ids.pad.refuse("Give the number on the display first; then tap at each change.")
        if state == "number":
            page.asking_number = True
            page.ids.number.entered = "61"
        self.settle(20 if not state else 4)
        return page

    def _stage_beat(self, question: bool) -> None:
        from mobileapp.device.ports import Stamp
        from mobileapp.views import BeatView

        recorder = self.model.recorder
        recorder.contact(Stamp(recorder.now_s(), 0.004, "loop"))
        for i, reading in enumerate((84.0, 81.0, 79.0, 76.0)):
            recorder._beaten(BeatView(i, recorder.now_s() + 3.0 * i, 3.0))
            asked = question and reading == 76.0
            recorder.digit("3" if asked else f"{reading:.0f}"[-1], Stamp(recorder.now_s(), 0.004, "loop"))
            if not asked and recorder.pad.question_C:
                recorder.answer_question(reading, Stamp(recorder.now_s(), 0.004, "loop"))

    def put_away(self) -> None:
        """Forget a run that is still on the pad."""
        if self.model.recorder.pad is not None:
            self.model.recorder.end()

    # ------------------------------------------------------------------ pictures and faults

    def picture(self, path: Path) -> None:
        self.window.canvas.ask_update()
        self.loop.idle()
        self.window.canvas.ask_update()
        self.loop.idle()
        made = self.window.screenshot(name=str(path.with_suffix(".png")))
        Path(made).replace(path)

    def faults(self, page: object) -> list[str]:
        return [*self._cut_texts(page), *self._small_targets(page)]

    def _shown(self, page: object) -> list[object]:
        found = []

        def walk(widget: object) -> None:
            if widget.opacity == 0 or (hasattr(widget, "disabled") and widget.disabled and widget.height < 2):
                return
            found.append(widget)
            for child in widget.children:
                walk(child)

        walk(page)
        return found

    def _scrolled(self, widget: object) -> bool:
        while widget.parent is not None and widget.parent is not widget:
            if type(widget.parent).__name__ in ("Scroll", "ScrollView"):
                return True
            widget = widget.parent
        return False

    def _off_stage(self, widget: object) -> bool:
        x, y = widget.to_window(widget.x, widget.y)
        return (
            x >= self.window.width
            or x + widget.width <= 0
            or y >= self.window.height + 2
            or y + widget.height <= 0
        )

    def _cut_texts(self, page: object) -> list[str]:
        from kivy.core.text import Label as CoreLabel
        from kivy.uix.label import Label

        faults = []
        for widget in self._shown(page):
            if not isinstance(widget, Label) or not widget.text.strip() or widget.width < 2 or widget.height < 2:
                continue
            if not self._scrolled(widget) and self._off_stage(widget):
                continue
            wide, tall = widget.texture_size
            if wide > widget.width + 2 or tall > widget.height + 2:
                faults.append(f"cut: {widget.text[:40]!r} {wide}x{tall} in {widget.width:.0f}x{widget.height:.0f}")
            if not self._scrolled(widget):
                x, y = widget.to_window(widget.x, widget.y)
                if x < -2 or y < -2 or x + wide > self.window.width + 2 or y + tall > self.window.height + 2:
                    faults.append(f"outside: {widget.text[:40]!r}")
            if widget.text_size[0]:
                ruler = CoreLabel(font_name=widget.font_name, font_size=widget.font_size)
                plain = widget.text.replace("[b]", "").replace("[/b]", "")
                room = widget.text_size[0] - widget.padding[0] - widget.padding[2]
                longest = max(plain.split(), key=lambda word: ruler.get_extents(word)[0])
                if ruler.get_extents(longest)[0] > room + 2 and "[" not in plain:
                    faults.append(f"split: {longest!r} is wider than {room:.0f}")
        return faults

    def _small_targets(self, page: object) -> list[str]:
        """Targets below 12 mm; on the record screen, used in gloves, below 22 mm (on a phone 15, digits 12)."""
        gloved = page.name == "record"
        phone = self.variant.phone
        least_mm = (15.0 if phone else 22.0) if gloved else 12.0
        per_mm = 160 * self.density / 25.4
        faults = []
        for widget in self._shown(page):
            touchable = hasattr(widget, "rim") or type(widget).__name__ in ("Tick", "RunRow", "LineInput", "Pad")
            if not touchable or widget.disabled or widget.opacity == 0 or self._off_stage(widget):
                continue
            if type(widget).__name__ == "Pad" and page.beat_mode and not page.waiting:
                continue  # while the beat runs the digits are the targets; a touch on the pad counts for nothing
            if widget.height < 2 or widget.width < 2:
                continue
            small = min(widget.width, widget.height) / per_mm
            on_phone = phone and (type(widget).__name__ == "DigitKey" or getattr(page, "asking_number", False))
            limit = 12.0 if on_phone else least_mm
            if small < limit - 0.05:
                faults.append(
                    f"small: {type(widget).__name__} {getattr(widget, 'text', '')[:20]!r} {small:.1f} mm"
                )
        return faults


def draw(arguments: argparse.Namespace, out: Path) -> dict[str, dict[str, list[str]]]:
    """All variants of one size, in this process."""
    _prepare(arguments)
    gallery = Gallery(float(arguments.density))
    wanted = [name for name in SCREENS if not arguments.only or name in arguments.only.split(",")]
    empty = [name for name in wanted if name.endswith("-empty")]
    found: dict[str, dict[str, list[str]]] = {}
    for names in (empty, [name for name in wanted if name not in empty]):
        if names and names is not empty:
            gallery.fill()
        for words in arguments.variants:
            gallery.put_on(Variant.of(words))
            folder = out / words.replace("/", "_")
            folder.mkdir(parents=True, exist_ok=True)
            for name in names:
                page = gallery.stage(name)
                gallery.picture(folder / f"{name}.png")
                found.setdefault(words, {})[name] = gallery.faults(page)
                gallery.put_away()
    gallery.model.close()
    return found


def draw_apart(arguments: argparse.Namespace, out: Path, sizes: list[str]) -> dict[str, dict[str, list[str]]]:
    """Each size in a process of its own, since a window without a screen cannot grow; two at a time."""

    def one(size: str) -> dict[str, dict[str, list[str]]]:
        variants = [words for words in arguments.variants if words.startswith(size)]
        command = [sys.executable, __file__, str(out), *variants, "--density", arguments.density]
        told = subprocess.run([*command, "--only", arguments.only], capture_output=True, text=True, check=False)
        if told.returncode:
            raise RuntimeError(told.stderr[-2000:])
        return dict(json.loads(told.stdout.splitlines()[-1]))

    found: dict[str, dict[str, list[str]]] = {}
    with ThreadPoolExecutor(2) as pool:
        for part in pool.map(one, sizes):
            found |= part
    return found


def main() -> None:
    arguments = _arguments()
    out = arguments.out.resolve()
    os.chdir(ROOT)
    sizes = sorted({words.split("/")[0] for words in arguments.variants})
    found = draw(arguments, out) if len(sizes) == 1 else draw_apart(arguments, out, sizes)
    if arguments.sheet:
        pictures = sorted(str(path) for path in out.glob("*/*.png"))
        tiles = ["-tile", "8x", "-geometry", "420x420+6+6", "-background", "#888888"]
        subprocess.run(["montage", *pictures, *tiles, str(out / "contact_sheet.jpg")], check=True)
    print(json.dumps(found))
    sys.stdout.flush()
    os._exit(0)  # the window library's threads are not waited for


if __name__ == "__main__":
    main()
