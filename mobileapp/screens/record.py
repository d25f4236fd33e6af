"""Recording: nearly the whole screen is the pad, or, on a beat, two blocks of digit keys for two thumbs."""

from __future__ import annotations

from typing import Any

from kivy.clock import Clock
from kivy.properties import BooleanProperty, ObjectProperty, StringProperty

from mobileapp.device.ports import Stamp
from mobileapp.figures import clock_time, number, percent, with_uncertainty
from mobileapp.navigation import Page
from mobileapp.trace import trace
from mobileapp.views import Felt, LiveFit, PadView
from mobileapp.widgets import basics, digits, hold, pad, simulated  # noqa: F401  the .kv of this screen uses them
from mobileapp.widgets.basics import MainPress
from mobileapp.widgets.digits import ERASE, SKIP
from mobileapp.widgets.edge_layout import EdgeLayout  # noqa: F401
from mobileapp.widgets.pad import USED_BUTTONS
from mobileapp.widgets.ticks import round_ticks
from mobileapp.words import _, say

PAD_KEYS = {32, 13, 271, 273, 274, 275, 276, 280, 281}  # space, enter, keypad enter, arrows, page up and down
ERASE_KEY = 8
STATUS_PERIOD_S = 0.25
BATTERY_EVERY_S = 60.0
LOW_BATTERY_PERCENT = 15.0


class RecordScreen(Page):
    """Forwards every touch and key with its stamp to the model, and paints the pad view that comes back."""

    view = ObjectProperty(None, allownone=True)
    hand = StringProperty("right")
    beat_mode = BooleanProperty(False)
    waiting = BooleanProperty(True)
    title = StringProperty("")
    clock_text = StringProperty("0:00")
    live_text = StringProperty("")
    guide_text = StringProperty("")
    enough = BooleanProperty(False)
    start_text = StringProperty("")
    body_marked = BooleanProperty(False)
    fan_marked = BooleanProperty(False)
    can_undo = BooleanProperty(False)
    asking_number = BooleanProperty(False)
    rehearsal = BooleanProperty(False)
    asking_which = BooleanProperty(False)
    beat_prefix = StringProperty("")
    beat_word = StringProperty("")

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self._number_stamp: Stamp | None = None
        self._ticker: Any = None

    # ------------------------------------------------------------------ coming and going

    def arrive(self, **_aim: Any) -> None:
        self.model.recorder.bind(pad=self._paint, live=self._paint_live, beat=self._paint_beat)
        self.hand = self.model.preferences.hand
        self.ids.pad.flash_wanted = self.model.preferences.flash
        self.asking_number = False
        self._ticker = Clock.schedule_interval(self._tick, STATUS_PERIOD_S)
        self._paint()
        self._paint_live()
        self.ids.display.source = self.model.recorder.simulated_display
        self.model.watch_screen(True)
        self.model.bind(notice=self._told)
        self._told()
        self._battery_told = False
        self._battery = Clock.schedule_interval(self._look_at_battery, BATTERY_EVERY_S)
        self._look_at_battery()

    def leave(self) -> None:
        self.model.recorder.unbind(pad=self._paint, live=self._paint_live, beat=self._paint_beat)
        if self._ticker is not None:
            self._ticker.cancel()
        self._battery.cancel()
        self.ids.display.source = None
        self.model.watch_screen(False)
        self.model.unbind(notice=self._told)

    def hold_back(self) -> bool:
        """The back key never leaves a run by accident; it closes the number panel at most."""
        if self.asking_number:
            self.asking_number = False
            return True
        return self.model.recorder.pad is not None

    def _told(self, *_args: Any) -> None:
        """What happened while the app was away stands on the pad for a moment."""
        if self.model.notice:
            self.ids.pad.tell(self.model.notice)
            self.model.notice = ""

    def _look_at_battery(self, *_args: Any) -> None:
        """A charge that runs out is told once a run."""
        left = self.model.device.battery.percent_left()
        if left is not None and left <= LOW_BATTERY_PERCENT and not self._battery_told:
            self._battery_told = True
            low = _("Battery at {left}: plug it in. Every tap so far is kept.")
            self.ids.pad.tell(low.format(left=percent(left / 100.0, 0)))

    # ------------------------------------------------------------------ what is painted

    def _paint(self, *_args: Any) -> None:
        view: PadView | None = self.model.recorder.pad
        self.view = view
        if view is None:
            return
        self.beat_mode = view.mode == "beat"
        self.waiting = view.state == "waiting"
        self.rehearsal = view.kind == "rehearsal"
        self.can_undo = view.can_undo
        self.body_marked = "body in" in view.marks
        self.fan_marked = "fan on" in view.marks
        self.title = self.model.run_title(view.run)
        decimals = self._decimals(view)
        self.start_text = number(view.start_C, decimals)
        self._paint_entry(view)
        pad_widget = self.ids.pad
        shown = view.start_C if self.waiting or view.shown_C is None else view.shown_C
        pad_widget.figure = f"{number(shown, decimals)}"
        if self.waiting and self.beat_mode:
            pad_widget.caption = _("Tap to start the beat")
            pad_widget.hint = _("Set the number that the display shows about now with the keys at the edge.")
        elif self.waiting:
            pad_widget.caption = _("Tap when the display becomes {reading} °C").format(reading=self.start_text)
            pad_widget.hint = _("Set the first number with the keys at the edge.")
        elif self.beat_mode:
            pad_widget.caption = "" if self.ids.deck.roomy else f"{self.beat_word}   {self.beat_prefix}"
            typing = _("Type the last digits that the display shows at the beat.")
            pad_widget.hint = typing if self.ids.deck.roomy else ""
        else:
            pad_widget.caption = _("next {reading} °C").format(reading=number(view.next_C, decimals))
            pad_widget.hint = ""
        self._paint_level(view)

    def _decimals(self, view: PadView) -> int:
        return max(0, len(f"{view.resolution_K:g}".partition(".")[2]))

    def _paint_level(self, view: PadView) -> None:
        top = view.start_C
        shown = view.shown_C if view.shown_C is not None else top
        if top is None or shown is None or top <= view.floor_C:
            return
        span = top - view.floor_C
        pad_widget = self.ids.pad
        pad_widget.level = (shown - view.floor_C) / span
        ticks, decimals = round_ticks(view.floor_C, top, 8)
        pad_widget.marks = [((tick - view.floor_C) / span, f"{number(tick, decimals)} °C") for tick in ticks]

    def _paint_live(self, *_args: Any) -> None:
        live = self.model.recorder.live
        self.enough = live.guidance is not None and live.guidance.enough
        self.guide_text = self._guide_words(live)
        trace("guided", text=self.guide_text, readings=live.readings)
        if live.answer is None:
            self.live_text = say(live.waiting_for)
            return
        value, spread = with_uncertainty(live.answer.h_W_m2K, live.answer.h_U95_W_m2K)
        share = percent(live.answer.h_U95_W_m2K / live.answer.h_W_m2K, 1)
        self.live_text = f"h {value} ± {spread} W/(m²·K)  ({share})"

    def _guide_words(self, live: LiveFit) -> str:
        """What U95 would become if the run were stopped later, or that going on is not worth it."""
        guidance = live.guidance
        if guidance is None or live.end_C is None:
            return ""
        there = f"{number(live.end_C, 0)} °C"
        if guidance.end_in_s <= 0.0:
            return _("Far enough: {there} is where a run usually ends.").format(there=there)
        if guidance.enough:
            return _("Enough: going on to {there} would hardly sharpen h.").format(there=there)
        return _("± {soon} in 30 s, ± {end} at {there} in {time}").format(
            soon=percent(guidance.U95_soon_rel, 1),
            end=percent(guidance.U95_end_rel, 1),
            there=there,
            time=clock_time(guidance.end_in_s),
        )

    def _tick(self, _dt: float) -> None:
        view = self.view
        if view is None:
            return
        since = view.elapsed_from_s
        self.clock_text = clock_time(self.model.recorder.now_s() - since) if since is not None else "0:00"

    # ------------------------------------------------------------------ taps

    def touched(self, touch: Any) -> None:
        """A finger on the pad."""
        self._felt(self.model.recorder.contact(self._stamp(touch)))

    def _stamp(self, touch: Any) -> Stamp:
        return touch.ud.get("stamp") or self.model.device.stamps.touch(touch)

    def key(self, key: int, character: str, stamp: Stamp) -> bool:
        """A key of a keyboard or pedal, once a press."""
        if self.view is None or self.asking_number:
            return False
        if key == ERASE_KEY:
            self.undo(stamp)
        elif character.isdigit() and self.beat_mode and not self.waiting:
            self.digit(character, stamp)
        elif character in ("2", "3") and not self.beat_mode and not self.waiting:
            self._felt(self.model.recorder.step(int(character), stamp))
        elif key in PAD_KEYS:
            self._felt(self.model.recorder.contact(stamp))
        else:
            return False
        return True

    def _felt(self, felt: Felt) -> None:
        if felt.confirmed:
            self.ids.pad.confirm()
        elif felt.sentence:
            self.ids.pad.refuse(say(felt.sentence))

    def steps(self, count: int, touch: Any) -> None:
        if getattr(touch, "button", None) in USED_BUTTONS:
            self._felt(self.model.recorder.step(count, self._stamp(touch)))

    def undo(self, stamp: Stamp) -> None:
        self._felt(self.model.recorder.undo(stamp))

    def undo_touch(self, touch: Any) -> None:
        self.undo(self._stamp(touch))

    def mark(self, name: str, touch: Any) -> None:
        self._felt(self.model.recorder.mark(name, self._stamp(touch)))

    def raise_start(self, steps: int) -> None:
        """Move the first number up or down by display steps."""
        if self.view is not None and self.view.start_C is not None:
            self.model.recorder.start_at(self.view.start_C + steps * self.view.resolution_K)

    def ask_number(self, touch: Any) -> None:
        """The stamp is taken now; the number may take its time."""
        self._number_stamp = self._stamp(touch)
        self.ids.number.entered = ""
        self.asking_number = True

    def number_done(self, value: float) -> None:
        if self.waiting:
            self.model.recorder.start_at(value)
            self.asking_number = False
            return
        felt = self.model.recorder.typed(value, self._number_stamp)
        if felt.confirmed:
            self.asking_number = False
            self._felt(felt)
        else:
            self.ids.number.trouble = say(felt.sentence)

    def end(self) -> None:
        """Held long enough: the run is over."""
        run = self.model.end_run()
        if run is None:
            self.manager.trail = []
            self.go("home")
            return
        self.manager.trail = [("home", {})]
        self.go("after" if self.model.asks_after(run) else "answer", run=run)

    # ------------------------------------------------------------------ beat

    def digit(self, name: str, stamp: Stamp) -> None:
        """One of the digit keys: the last digits of the display at this beat."""
        if name == ERASE:
            self.undo(stamp)
        elif name == SKIP:
            self._felt(self.model.recorder.skip_beat(stamp))
        else:
            self._felt(self.model.recorder.digit(name, stamp))

    def digit_touched(self, name: str, touch: Any) -> None:
        if getattr(touch, "button", None) in USED_BUTTONS:
            self.digit(name, self._stamp(touch))

    def meant(self, reading_C: float, touch: Any) -> None:
        """The person says which of two numbers the last digits were."""
        self._felt(self.model.recorder.answer_question(reading_C, self._stamp(touch)))

    def _paint_entry(self, view: PadView) -> None:
        blanks = "▢" * max(0, view.digits - len(view.entered))
        self.beat_prefix = f"{view.entered}{blanks}" if view.mode == "beat" else ""
        box = self.ids.question
        box.clear_widgets()
        for reading in view.question_C:
            key = MainPress(text=f"{number(reading, self._decimals(view))} °C", size_hint_y=1)
            key.bind(on_press=lambda pressed, meant=reading: self.meant(meant, pressed.last_touch))
            box.add_widget(key)
        self.asking_which = bool(view.question_C)

    def _paint_beat(self, *_args: Any) -> None:
        beat = self.model.recorder.beat
        if beat is None:
            self.beat_word = ""
        elif beat.index < 0:
            self.beat_word = _("in {count}").format(count=-beat.index)
        else:
            self.beat_word = _("Beat {count}").format(count=beat.index + 1)
            self.ids.pad.confirm()
        self._paint()
