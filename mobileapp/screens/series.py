"""The law over the runs of a session: its picture, its constants, its runs, and the speed to measure next."""

from __future__ import annotations

from typing import Any

from kivy.properties import BooleanProperty, StringProperty

from core.judgement.answer import Answer
from core.judgement.law_bands import LawBand, law_bands
from core.judgement.series import Series
from mobileapp.figures import number, percent, significant, with_uncertainty
from mobileapp.gathering import with_answers
from mobileapp.judged import law_label, plus_minus
from mobileapp.theme import look
from mobileapp.trace import trace
from mobileapp.widgets import basics, plot  # noqa: F401  the .kv of this screen uses them
from mobileapp.widgets.basics import ChoicePress
from mobileapp.widgets.beside import PicturePage
from mobileapp.widgets.findings import ValueLine
from mobileapp.widgets.grid_table import Column
from mobileapp.widgets.plot import Band, Curve, Marks, Note, Whisker
from mobileapp.words import _, say

ROOM = 1.35  # the picture reaches so much beyond the slowest and the fastest run
COLOURS = ("cool", "look", "keep", "again")


class SeriesScreen(PicturePage):
    """What the session has come to so far."""

    law_text = StringProperty("")
    law_sure = StringProperty("")
    next_text = StringProperty("")
    next_reason = StringProperty("")
    repeat_text = StringProperty("")
    left_out_text = StringProperty("")
    trouble = StringProperty("")
    has_law = BooleanProperty(False)

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self._shown_bands: set[str] = set()
        self._bands: tuple[LawBand, ...] = ()

    def arrive(self, **_aim: Any) -> None:
        self.has_law = False
        self.trouble = _("Working out the law …")
        runs = [run for run in self.model.session.runs if not run.open] if self.model.session else []
        if not runs:
            self.trouble = _(
                "The law Nu = C·Re[sup]m[/sup]·Pr[sup]⅓[/sup] appears here after runs at two airspeeds. Three or "
                "four speeds, well apart, make a law worth having; a speed measured twice shows how well the "
                "bench repeats."
            )
            return
        with_answers(self.model, lambda: self.model.ask_series(self._show, self._refused))

    def _refused(self, sentence: str) -> None:
        self.has_law = False
        self.trouble = say(sentence)

    # ------------------------------------------------------------------ what is shown

    def _show(self, result: tuple[Series, list[tuple[str, str]]]) -> None:
        series, left_out = result
        self.series = series
        self.has_law = True
        self.trouble = ""
        self._show_law(series)
        self._show_runs(series)
        self._show_repeats(series)
        lines = [_("Run {run}: {why}").format(run=run, why=say(why)) for run, why in left_out]
        self.left_out_text = "\n".join(lines)
        self.next_text = _("Next: about {speed} m/s").format(speed=number(series.next_velocity_m_s, 1))
        self.next_reason = say(series.next_reason)
        answer = self._answer_in_the_middle(series)
        if answer is not None:
            low = min(run.reynolds for run in series.runs) / ROOM
            high = max(run.reynolds for run in series.runs) * ROOM
            self.model.ask("bands", lambda: law_bands(answer, low, high), self._take_bands, self._no_bands)
        self._draw()
        trace("law", C=series.C, m=series.m, next_m_s=series.next_velocity_m_s)

    def _answer_in_the_middle(self, series: Series) -> Answer | None:
        answers = {run.run: run.answer for run in self.model.export_session().runs}
        named = sorted(series.runs, key=lambda run: run.reynolds)
        return answers.get(named[len(named) // 2].run)

    def _show_law(self, series: Series) -> None:
        C, C_u = with_uncertainty(series.C, series.C_u)
        m, m_u = with_uncertainty(series.m, series.m_u)
        self.law_text = f"Nu = {C} · Re[sup]{m}[/sup] · Pr[sup]⅓[/sup]"
        self.law_sure = _("standard uncertainties: C ± {C_u}, m ± {m_u}").format(C_u=C_u, m_u=m_u)
        box = self.ids.facts
        box.clear_widgets()
        re = [run.reynolds for run in series.runs]
        facts = [
            (_("Holds for Re"), f"{significant(min(re), 3)} – {significant(max(re), 3)}"),
            (_("Correlation of ln C and m"), number(series.correlation_ln_C_m, 3)),
            (_("Scatter beyond the uncertainties"), percent(series.scatter_rel, 1)),
            (_("χ² and degrees of freedom"), f"{number(series.chi_square, 1)}   {series.degrees_of_freedom}"),
        ]
        for name, value in facts:
            box.add_widget(ValueLine(name=name, value=value))

    def _show_runs(self, series: Series) -> None:
        pairs_re = [with_uncertainty(run.reynolds, run.reynolds_u) for run in series.runs]
        pairs_nu = [with_uncertainty(run.nusselt, run.nusselt_u) for run in series.runs]
        narrow = self.width < look.body * 26
        columns = [
            Column(_("run"), [run.run for run in series.runs], numeric=False),
            Column(_("m/s"), [number(run.velocity_m_s, 2) for run in series.runs]),
            Column("Re", [value for value, _u in pairs_re]),
            Column(_("u"), [u for _value, u in pairs_re]),
            Column("Nu", [value for value, _u in pairs_nu]),
            Column(_("u"), [u for _value, u in pairs_nu]),
            Column(_("off, %"), [number(100 * run.residual, 1) for run in series.runs]),
        ]
        if narrow:
            columns = [column for column in columns if column.heading != _("u")]
        by_number = {str(run.number): run.run for run in self.model.session.runs}
        self.ids.runs.show(columns, [by_number[run.run] for run in series.runs])

    def _show_repeats(self, series: Series) -> None:
        """Runs of one speed beside each other, and how well they repeat."""
        nusselt = {run.run: run.nusselt for run in series.runs}
        views = {str(run.number): run for run in self.model.session.runs}
        groups = [group for group in series.speeds if len(group.runs) > 1]
        speeds, names, values, off = [], [], [], []
        for group in groups:
            for name in group.runs:
                speeds.append(number(group.velocity_m_s, 1) if name == group.runs[0] else "")
                names.append(name)
                values.append(plus_minus(views[name].h_W_m2K, views[name].h_U95_W_m2K))
                off.append(number(100 * (nusselt[name] / group.nusselt - 1), 1))
        if groups:
            columns = [
                Column(_("m/s"), speeds),
                Column(_("run"), names),
                Column(_("h, W/(m²·K)"), values),
                Column(_("off the mean, %"), off),
            ]
            self.ids.repeats.show(columns)
        else:
            self.ids.repeats.clear_widgets()
        repeated = series.repeatability_rel
        self.repeat_text = (
            _("No speed was measured twice yet: a repeat shows what the bench itself scatters by.")
            if repeated is None
            else _("One run repeats to {share} (standard deviation, {dof} degrees of freedom).").format(
                share=percent(repeated, 1), dof=series.repeatability_dof
            )
        )

    # ------------------------------------------------------------------ the picture

    def _take_bands(self, bands: tuple[LawBand, ...]) -> None:
        self._bands = bands
        if not self._shown_bands & {band.correlation for band in bands}:
            self._shown_bands = {band.correlation for band in bands[:1]}
        box = self.ids.laws
        box.clear_widgets()
        for band in bands:
            button = ChoicePress(text=law_label(band.correlation), chosen=band.correlation in self._shown_bands)
            button.bind(on_release=lambda pressed, name=band.correlation: self._toggle(pressed, name))
            box.add_widget(button)
        self._draw()

    def _no_bands(self, _sentence: str) -> None:
        """Without a correlation for this bench the law stands alone."""
        self._bands = ()
        self.ids.laws.clear_widgets()

    def _toggle(self, pressed: ChoicePress, name: str) -> None:
        self._shown_bands ^= {name}
        pressed.chosen = name in self._shown_bands
        self._draw()

    def _draw(self) -> None:
        series = self.series
        re = [run.reynolds for run in series.runs]
        nu = [run.nusselt for run in series.runs]
        low, high = min(re) / ROOM, max(re) * ROOM
        prandtl = sum(run.prandtl for run in series.runs) / len(series.runs)

        def law(reynolds: float) -> float:
            return float(series.C * reynolds**series.m * prandtl ** (1 / 3))

        parts: list[Any] = []
        reach = [law(low), law(high), *nu]
        for band, colour in zip(self._bands, COLOURS, strict=False):
            if band.correlation in self._shown_bands:
                parts += self._band_parts(band, colour)
                reach += [band.nusselt[0] * (1 - band.band_rel), band.nusselt[-1] * (1 + band.band_rel)]
        parts.append(Curve([(low, law(low)), (high, law(high))], "ink", 1.8))
        for run in series.runs:
            x, y = run.reynolds, run.nusselt
            parts.append(Whisker((x - 2 * run.reynolds_u, y), (x + 2 * run.reynolds_u, y), "ember"))
            parts.append(Whisker((x, y - 2 * run.nusselt_u), (x, y + 2 * run.nusselt_u), "ember"))
        parts.append(Marks(list(zip(re, nu, strict=True)), "ember", "dot", 4.5))
        named = [band for band in self._bands if band.correlation in self._shown_bands]
        parts += [_note(band, 8 + 7 * i) for i, band in enumerate(named)]
        self.ids.plane.show(*parts, view=(low, high, min(reach) / 1.05, max(reach) * 1.05))

    @staticmethod
    def _band_parts(band: LawBand, colour: str) -> list[Any]:
        """The band where its author vouches for it, its middle line all along."""
        middle = list(zip(band.reynolds, band.nusselt, strict=True))
        firm = [point for point, held in zip(middle, band.in_range, strict=True) if held]
        lower = [(x, y * (1 - band.band_rel)) for x, y in firm]
        upper = [(x, y * (1 + band.band_rel)) for x, y in firm]
        parts: list[Any] = [Band(lower, upper, colour, 0.22)] if len(firm) > 1 else []
        return [*parts, Curve(middle, colour, 1.1)]

    def open_run(self, run: str) -> None:
        self.go("detail", run=run)


def _note(band: LawBand, at: int) -> Note:
    """The band's name below its lower edge, where the rising band leaves room."""
    return Note((band.reynolds[at], band.nusselt[at] * (1 - band.band_rel)), law_label(band.correlation), "soft")
