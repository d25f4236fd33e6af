"""The answer at a glance: h, how sure, the verdict in word, shape and colour, and the one reason."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from kivy.clock import Clock
from kivy.properties import BooleanProperty, StringProperty

from core.judgement.answer import Answer
from mobileapp.figures import NO_VALUE, clock_time, number, percent, significant, with_uncertainty
from mobileapp.navigation import Page
from mobileapp.trace import trace
from mobileapp.widgets import badge, basics  # noqa: F401  the .kv of this screen uses them
from mobileapp.widgets.badge import verdict_word
from mobileapp.widgets.basics import PlainPress
from mobileapp.words import _, later, say

if TYPE_CHECKING:
    from core.judgement.stem import StemLoss

REASONS = (
    later("A slip of mine"),
    later("The bench was disturbed"),
    later("The display misbehaved"),
    later("Only a trial"),
)


class AnswerScreen(Page):
    """First level of the answer; the second lies behind `Curve and budget`."""

    run = StringProperty("")
    title = StringProperty("")
    h_text = StringProperty("")
    u_text = StringProperty("")
    verdict = StringProperty("none")
    verdict_text = StringProperty("")
    reason = StringProperty("")
    side_words = StringProperty("")
    decision_words = StringProperty("")
    truth_words = StringProperty("")
    has_answer = BooleanProperty(False)
    rehearsal = BooleanProperty(False)
    adoptable = BooleanProperty(False)
    safe_words = StringProperty("")
    stem_words = StringProperty("")
    stem_adoptable = BooleanProperty(False)
    asking_reason = BooleanProperty(False)

    def arrive(self, run: str = "", **_aim: Any) -> None:
        self.run = run
        self.asking_reason = False
        self.model.bind(session=self._decided)
        self._clear()
        self._decided()
        self._show_truth()
        self.model.ask_answer(run, self._show, self._refused)
        self._count_down()
        self._countdown = Clock.schedule_interval(self._count_down, 1.0)

    def leave(self) -> None:
        self.model.unbind(session=self._decided)
        self._countdown.cancel()

    def _count_down(self, *_args: Any) -> None:
        """How long the body still burns."""
        left_s = self.model.touch_safe_s(self.run)
        if left_s is None:
            self.safe_words = ""
        elif left_s <= 0:
            self.safe_words = _("By the fitted curve the body is now below 43 °C.")
        else:
            self.safe_words = _("Still hot: by the fitted curve below 43 °C in {time}.").format(
                time=clock_time(left_s)
            )

    def _clear(self) -> None:
        self.has_answer = False
        self.h_text = self.u_text = self.side_words = ""
        self.verdict, self.verdict_text = "none", _("Fitting …")
        self.reason = self.truth_words = self.stem_words = ""
        self.stem_adoptable = False
        self.adoptable = False

    def _decided(self, *_args: Any) -> None:
        view = self.model.run_view(self.run)
        if view is None:
            return
        self.rehearsal = view.kind == "rehearsal"
        what = _("Rehearsal {number}") if self.rehearsal else _("Run {number}")
        self.title = what.format(number=view.number)
        if view.velocity_m_s is not None:
            self.title += f" · {number(view.velocity_m_s, 1)} m/s"
        said = {
            "keep": _("You kept this run."),
            "look": _("You marked this run to be looked at again."),
            "discard": _("You set this run aside: {reason}").format(reason=_(view.reason)),
        }
        self.decision_words = said.get(view.decision, "")

    def _show(self, answer: Answer) -> None:
        if not self.manager or self.manager.current != self.name:
            return
        self.has_answer = True
        self.h_text, u = with_uncertainty(answer.h_W_m2K, answer.h_U95_W_m2K)
        self.u_text = f"± {u}"
        self.verdict, self.verdict_text = answer.verdict, verdict_word(answer.verdict)
        self.reason = say(answer.reason)
        parts = []
        if answer.nusselt is not None and answer.nusselt_u is not None:
            value, spread = with_uncertainty(answer.nusselt, 2 * answer.nusselt_u)
            parts.append(f"Nu {value} ± {spread}")
        if answer.reynolds is not None:
            parts.append(f"Re {significant(answer.reynolds, 3)}")
        parts.append(f"Bi {significant(answer.biot, 2)}")
        parts.append(f"τ {significant(answer.time_constant_s, 4)} s")
        parts.append(f"U95 {percent(answer.h_U95_W_m2K / answer.h_W_m2K, 1)}")
        self.side_words = "   ".join(parts)
        self._show_truth(answer)
        if answer.setup.recording.kind == "still-air":
            self.model.ask_stem_loss(answer, self._show_stem, self._refused_stem)
        trace(
            "answer",
            run=self.run,
            h=answer.h_W_m2K,
            U95=answer.h_U95_W_m2K,
            verdict=answer.verdict,
            reason=answer.reason,
            shown=f"{self.h_text} {self.u_text}",
        )

    def _refused(self, sentence: str) -> None:
        self.h_text = NO_VALUE
        self.verdict, self.verdict_text = "none", _("No answer")
        self.reason = say(sentence)
        trace("no answer", run=self.run, sentence=sentence)

    def _show_stem(self, stem: StemLoss) -> None:
        """What a run in still air is made for."""
        self._stem = stem
        value, spread = with_uncertainty(1e3 * stem.loss_W_K, 1e3 * stem.U95_W_K)
        self.stem_words = _("Holder and stem carry off {value} ± {spread} mW/K.").format(value=value, spread=spread)
        self.stem_adoptable = stem.loss_W_K > 0.0
        trace("stem", run=self.run, loss_W_K=stem.loss_W_K, u_W_K=stem.u_W_K)

    def _refused_stem(self, sentence: str) -> None:
        self.stem_words = say(sentence)

    def adopt_stem(self) -> None:
        """Put the measured stem loss into the bench."""
        self.model.adopt_stem_loss(self._stem)
        self.stem_adoptable = False
        self.stem_words += "\n" + _("The bench has taken it over, with its uncertainty.")

    def _show_truth(self, answer: Answer | None = None) -> None:
        if not self.rehearsal:
            return
        truth = self.model.rehearsal_truth(self.run)
        if truth is None:
            return
        lines = [_("True h was {h} W/(m²·K).").format(h=significant(truth.h_W_m2K, 4))]
        if answer is not None:
            off = abs(answer.h_W_m2K - truth.h_W_m2K)
            inside, outside = _("Yours is {off} away, inside its U95."), _("Yours is {off} away, outside its U95.")
            where = inside if off <= answer.h_U95_W_m2K else outside
            lines[0] += " " + where.format(off=percent(off / truth.h_W_m2K, 2))
        if truth.lag_s is not None and truth.jitter_s is not None:
            habit = _("Your taps came {lag} s late on average and scattered by {jitter} s, over {count} taps.")
            lines.append(
                habit.format(lag=number(truth.lag_s, 2), jitter=number(truth.jitter_s, 3), count=truth.taps)
            )
            self.adoptable = True
        self.truth_words = "\n".join(lines)

    def adopt(self) -> None:
        """Put the measured delay and scatter into the bench."""
        self.model.adopt_habit(self.run)
        self.adoptable = False
        self.truth_words += "\n" + _("The bench has taken them over.")

    def decide(self, decision: str, reason: str = "") -> None:
        self.asking_reason = False
        self.model.decide(self.run, decision, reason)

    def ask_reason(self) -> None:
        """A run is set aside with a reason, one touch."""
        box = self.ids.reasons
        box.clear_widgets()
        for reason in REASONS:
            button = PlainPress(text=_(reason))
            button.bind(on_release=lambda _button, why=reason: self.decide("discard", why))
            box.add_widget(button)
        self.asking_reason = True
