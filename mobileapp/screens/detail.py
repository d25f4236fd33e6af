"""The second level of the answer: curve and residuals, what is expected, checks, budget, readings in doubt."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from kivy.clock import Clock
from kivy.properties import BooleanProperty, StringProperty

from core.judgement.answer import Answer
from core.judgement.improve import next_improvement
from mobileapp.figures import number, percent, significant, with_uncertainty
from mobileapp.judged import check_label, law_label, plus_minus
from mobileapp.trace import trace
from mobileapp.widgets import badge, basics, decision, gauge, run_plots  # noqa: F401  the .kv of this screen uses them
from mobileapp.widgets.badge import verdict_word
from mobileapp.widgets.beside import PicturePage
from mobileapp.widgets.findings import BudgetBar, CheckLine, DoubtLine, ValueLine
from mobileapp.widgets.gauge import Span
from mobileapp.words import _, say

WORST_FIRST = {"again": 0, "look": 1, "good": 2}
SHARE_SHOWN = 0.001  # shares of the variance below this are told in one line


class DetailScreen(PicturePage):
    """One run in full. What a person says here is an event; the answer is then worked out anew."""

    run = StringProperty("")
    title = StringProperty("")
    h_text = StringProperty("")
    verdict = StringProperty("none")
    verdict_text = StringProperty("")
    reason = StringProperty("")
    start_text = StringProperty("")
    start_by_person = BooleanProperty(False)
    picked_text = StringProperty("")
    picked_ruled = StringProperty("")
    improve_text = StringProperty("")
    rest_text = StringProperty("")
    decision = StringProperty("")
    decision_words = StringProperty("")
    busy = BooleanProperty(False)
    has_answer = BooleanProperty(False)
    checks_title = StringProperty("")
    good_shown = BooleanProperty(False)
    good_text = StringProperty("")

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self._to_show: list[Callable[[Answer], None]] = []
        self._next_part = Clock.create_trigger(self._show_part)

    def arrive(self, run: str = "", **_aim: Any) -> None:
        if run != self.run:
            self.ids.page.scroll_y = 1
            self.ids.plots.picked = -1
            self.has_answer = False
        self.run = run
        self.model.bind(session=self._decided)
        self._decided()
        self._ask()

    def leave(self) -> None:
        self.model.unbind(session=self._decided)

    def _decided(self, *_args: Any) -> None:
        view = self.model.run_view(self.run)
        if view is None:
            return
        self.title = self.model.run_title(self.run)
        self.decision = view.decision
        aside = view.decision == "discard" and view.reason
        self.decision_words = _("Set aside: {reason}").format(reason=_(view.reason)) if aside else ""

    def _ask(self) -> None:
        self.busy = True
        self.model.ask_answer(self.run, self._show, self._refused)

    def _refused(self, sentence: str) -> None:
        self.busy = self.has_answer = False
        self._to_show = []
        self.h_text = ""
        self.verdict, self.verdict_text = "none", _("No answer")
        self.reason = say(sentence)
        self._show_doubts(None)

    # ------------------------------------------------------------------ what is shown

    def _show(self, answer: Answer) -> None:
        self.busy = False
        self.has_answer = True
        self.answer = answer
        value, u = with_uncertainty(answer.h_W_m2K, answer.h_U95_W_m2K)
        self.h_text = f"h  {value} ± {u}"
        self.verdict, self.verdict_text = answer.verdict, verdict_word(answer.verdict)
        self.reason = say(answer.reason)
        self._show_start(answer)
        self.ids.plots.show(answer, self.model.readings_of(self.run))
        self._show_picked()
        parts = (self._show_expected, self._show_doubts, self._show_checks, self._show_budget, self._show_numbers)
        self._to_show = [*parts, self._tell]
        self._next_part()

    def _show_part(self, *_args: Any) -> None:
        """One sheet a frame, so that the curve stands there at once and no touch waits for the rest."""
        if self._to_show:
            self._to_show.pop(0)(self.answer)
            self._next_part()

    def _tell(self, answer: Answer) -> None:
        left_out = [one.row for one in answer.fit.left_out]
        shown = {"h": answer.h_W_m2K, "start_s": answer.window_s[0], "by": answer.fit.start_by, "left_out": left_out}
        trace("detail", run=self.run, **shown, places=self.ids.plots.places())

    def _show_start(self, answer: Answer) -> None:
        start_s = answer.window_s[0]
        self.start_by_person = answer.fit.start_by == "person"
        told = _("The fit starts at {time} s, found by the program. Drag the red line to move it.")
        if self.start_by_person:
            told = _("You set the start of the fit at {time} s.")
        self.start_text = told.format(time=number(start_s, 1))

    def _show_expected(self, answer: Answer) -> None:
        h, U = answer.h_W_m2K, answer.h_U95_W_m2K
        spans = [Span(_("measured, 95 %"), h, h - U, h + U)]
        for one in answer.expected:
            name = law_label(one.correlation)
            if not one.in_range:
                name = _("{author} (outside its range)").format(author=name)
            reach = one.band_rel * one.h_W_m2K
            spans.append(Span(name, one.h_W_m2K, one.h_W_m2K - reach, one.h_W_m2K + reach, one.in_range))
        self.ids.gauge.show(spans)
        sources = "\n".join(f"{one.source}  ± {percent(one.band_rel)}" for one in answer.expected)
        self.ids.sources.text = sources or _("No published correlation covers this bench.")

    def _show_doubts(self, answer: Answer | None) -> None:
        box = self.ids.doubts
        box.clear_widgets()
        ruled = {one.row: one.keep for one in self.model.rulings_of(self.run)}
        doubted = {one.row: one for one in answer.fit.left_out if one.cause != "start"} if answer else {}
        readings = self.model.readings_of(self.run)
        for row in sorted({*doubted, *ruled}):
            if row in doubted and doubted[row].cause != "dropped":
                sentence = say(doubted[row].reason)
            else:
                sentence = _("Reading {row}: {shown} °C at {time} s.").format(
                    row=row + 1,
                    shown=number(readings.reading_C[row], 1),
                    time=number(readings.time_s[row], 1),
                )
            line = DoubtLine(row=row, sentence=sentence, ruled=_ruled(ruled, row))
            line.bind(on_ruling=lambda pressed, keep: self.rule(pressed.row, keep))
            box.add_widget(line)

    def _show_checks(self, answer: Answer) -> None:
        box = self.ids.checks
        box.clear_widgets()
        good = [check for check in answer.checks if check.outcome == "good"]
        self.checks_title = _("Checks: {good} of {all} good").format(good=len(good), all=len(answer.checks))
        for check in sorted(answer.checks, key=lambda one: WORST_FIRST[one.outcome]):
            if check.outcome != "good" or self.good_shown:
                box.add_widget(CheckLine(check))
        self.good_text = "" if self.good_shown else "  ·  ".join(check_label(check.name) for check in good)

    def toggle_good(self) -> None:
        """Unfold the checks that are good, or fold them to their names."""
        self.good_shown = not self.good_shown
        self._show_checks(self.answer)

    def _show_budget(self, answer: Answer) -> None:
        box = self.ids.budget
        box.clear_widgets()
        longest = answer.budget[0].share if answer.budget else 0.0
        small = [line for line in answer.budget if line.share < SHARE_SHOWN]
        for line in answer.budget:
            if line not in small:
                box.add_widget(BudgetBar(line, longest))
        told = _("{count} more inputs make less than {share} each.")
        self.rest_text = told.format(count=len(small), share=percent(SHARE_SHOWN, 1)) if small else ""
        self.improve_text = say(next_improvement(answer.budget, answer.h_U95_W_m2K / answer.h_W_m2K))

    def _show_numbers(self, answer: Answer) -> None:
        box = self.ids.numbers
        fit = answer.fit
        h_unit = "W/(m²·K)"
        tau = plus_minus(answer.time_constant_s, answer.time_constant_u_s)
        lines = [
            (_("h, 95 %"), f"{plus_minus(answer.h_W_m2K, answer.h_U95_W_m2K)} {h_unit}"),
            (_("h before radiation and stem are taken off"), f"{number(answer.h_total_W_m2K, 1)} {h_unit}"),
            (_("of it radiation"), f"{number(answer.h_radiation_W_m2K, 2)} {h_unit}"),
            (_("Time constant, u from the readings"), f"{tau} s"),
            (_("Nusselt number, u"), plus_minus(answer.nusselt, answer.nusselt_u)),
            (_("Reynolds number, u"), plus_minus(answer.reynolds, answer.reynolds_u)),
            (_("Biot number"), significant(answer.biot, 2)),
            (_("The readings head for"), f"{number(answer.asymptote_C, 2)} °C"),
            (_("Film temperature"), f"{number(answer.film_temperature_C, 1)} °C"),
            (_("Airspeed at the body"), f"{number(answer.velocity_m_s, 2)} m/s"),
            (_("Part of the record used"), f"{number(answer.window_s[0], 1)} – {number(answer.window_s[1], 1)} s"),
            (_("Readings used"), str(sum(fit.used))),
            (_("Coverage factor k"), number(answer.coverage_factor, 2)),
        ]
        shown = list(reversed(box.children))
        if len(shown) != len(lines):
            box.clear_widgets()
            shown = [ValueLine() for _line in lines]
            for line in shown:
                box.add_widget(line)
        for line, (name, value) in zip(shown, lines, strict=True):
            line.name, line.value = name, value

    # ------------------------------------------------------------------ what a person says

    def move_start(self, start_s: float | None) -> None:
        """The start of the fit at this time from the first reading; None gives it back to the program."""
        if start_s is not None:
            last_s = self.model.readings_of(self.run).time_s[-1]
            start_s = min(max(start_s, 0.0), last_s)
        self.model.move_start(self.run, start_s)
        self._ask()

    def rule(self, row: int, keep: bool) -> None:
        self.model.rule(self.run, row, keep)
        self._ask()

    def pick(self, row: int) -> None:
        """A point of the plots was touched."""
        self._show_picked()

    def _show_picked(self) -> None:
        row = int(self.ids.plots.picked)
        readings = self.model.readings_of(self.run)
        if not 0 <= row < len(readings):
            self.picked_text = ""
            return
        told = _("Reading {row}: {shown} °C at {time} s.").format(
            row=row + 1, shown=number(readings.reading_C[row], 1), time=number(readings.time_s[row], 1)
        )
        residual = self.answer.fit.residual_s[row]
        if residual is not None:
            told += " " + _("It comes {time} s after the curve.").format(time=number(residual, 2))
        self.picked_text = told
        self.picked_ruled = _ruled({one.row: one.keep for one in self.model.rulings_of(self.run)}, row)

    def rule_picked(self, keep: bool) -> None:
        self.rule(int(self.ids.plots.picked), keep)

    def decide(self, decided: str, reason: str) -> None:
        self.model.decide(self.run, decided, reason)
        trace("decided", run=self.run, decision=decided)


def _ruled(ruled: dict[int, bool], row: int) -> str:
    return {True: "keep", False: "drop"}.get(ruled[row], "") if row in ruled else ""
