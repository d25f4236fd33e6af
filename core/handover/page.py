"""The plain parts of a report's page: escaped text, tables, figures, and one style for screen and paper."""

from __future__ import annotations

from base64 import b64encode
from collections.abc import Sequence
from html import escape

STYLE = """
:root { color-scheme: light; --ink: #1d1d1f; --soft: #5c5f66; --line: #d9dbe0; --blue: #00568c; }
* { box-sizing: border-box; }
body { margin: 0 auto; max-width: 60rem; padding: 2.5rem 1.5rem 4rem; background: #fff; color: var(--ink);
  font: 16px/1.5 system-ui, "Segoe UI", "DejaVu Sans", sans-serif; }
h1 { font-size: 1.9rem; line-height: 1.2; margin: 0 0 .3rem; }
h2 { font-size: 1.35rem; margin: 3rem 0 .6rem; padding-top: .8rem; border-top: 2px solid var(--ink); }
h3 { font-size: 1rem; margin: 1.6rem 0 .4rem; }
p { margin: .4rem 0; } .soft { color: var(--soft); }
.scroll { overflow-x: auto; }
table { border-collapse: collapse; width: 100%; font-size: .86rem; font-variant-numeric: tabular-nums; }
th { text-align: left; font-weight: 600; color: var(--soft); border-bottom: 1px solid var(--ink); }
th, td { padding: .28rem .9rem .28rem 0; vertical-align: top; }
td { border-bottom: 1px solid var(--line); }
td.from { color: var(--soft); font: .74rem/1.7 ui-monospace, "DejaVu Sans Mono", monospace; white-space: nowrap; }
small { color: var(--soft); display: block; font-size: .74rem; } small.at { font-family: ui-monospace, monospace; }
.halves { display: grid; grid-template-columns: 1fr 1fr; gap: 0 1.5rem; }
figure { margin: 1rem 0; } figure img { width: 100%; height: auto; display: block; }
figcaption { color: var(--soft); font-size: .82rem; }
.number { font-size: 1.5rem; font-weight: 600; } .number sup { font-size: .62em; }
.mark { display: inline-block; min-width: 4.2em; padding: 0 .5em; border: 1.5px solid; border-radius: 1em;
  text-align: center; font-size: .8rem; font-weight: 600; }
.keep, .good { color: #00664b; } .look { color: #8a5200; } .again { color: #a3200d; border-width: 2.5px; }
.invented { border: 1.5px dashed var(--ink); padding: .5rem .9rem; margin: 1rem 0; font-weight: 600; }
code { font: .85em ui-monospace, "DejaVu Sans Mono", monospace; }
a { color: var(--blue); }
@media (max-width: 40rem) { .halves { grid-template-columns: 1fr; } }
@media print {
  .halves { grid-template-columns: 1fr 1fr !important; }
  html { font-size: 11px; } body { font-size: 1rem; max-width: none; padding: 0; } h2 { break-before: page; }
  h2.flow { break-before: auto; }
  figure, tr { break-inside: avoid; } figure img { width: 84%; }
  h3 { break-after: avoid; } a { color: inherit; text-decoration: none; }
  @page { margin: 18mm 16mm; }
}
"""


METHOD = """
<p><b>Model.</b> m c dT/dt = −(h A + G)(T − T<sub>∞</sub>) − ε σ A (T<sup>4</sup> −
T<sub>s</sub><sup>4</sup>), the air drifting linearly between its two readings, c depending on temperature
where that is known; where conduction within the body matters, the eigenvalue series of the plane wall, long
cylinder or sphere takes its place (Incropera et al., Fundamentals of Heat and Mass Transfer, chapter 5). h is
the coefficient of forced convection: radiation and stem loss are taken off.</p>
<p><b>What a reading says.</b> A display is rounded and renewed only now and then, so a reading is an interval
of temperature at a moment known to one refresh. The fit maximises the likelihood of all intervals, with the
measured air temperature as a prior; readings far off are named and left out, never in silence.</p>
<p><b>Uncertainty.</b> JCGM 100:2008: the standard uncertainties of all inputs are propagated to first order;
U95 is the expanded uncertainty for 95 % with the coverage factor that the effective degrees of freedom give.
The uncertainty of the time constant comes from the readings and their fit alone.</p>
<p><b>Law.</b> Nu = C·Re<sup>m</sup>·Pr<sup>1/3</sup> with properties at film temperature, by a straight line
through the logarithms with errors in both, and with the errors that runs share kept common.</p>
"""


def text(value: str) -> str:
    """A text as it stands in HTML."""
    return escape(value)


def table(head: Sequence[str], rows: Sequence[Sequence[str]]) -> str:
    """A table; cells are HTML already. A column headed `from` is set small."""
    top = "".join(f"<th>{escape(one)}</th>" for one in head)
    small = {i for i, one in enumerate(head) if one == "from"}
    body = "".join(
        "<tr>"
        + "".join(f'<td class="from">{c}</td>' if i in small else f"<td>{c}</td>" for i, c in enumerate(row))
        + "</tr>\n"
        for row in rows
    )
    return f'<div class="scroll"><table><thead><tr>{top}</tr></thead><tbody>\n{body}</tbody></table></div>\n'


def halves(head: Sequence[str], rows: Sequence[Sequence[str]]) -> str:
    """A long table in two halves beside each other."""
    middle = (len(rows) + 1) // 2
    return f'<div class="halves">{table(head, rows[:middle])}{table(head, rows[middle:])}</div>\n'


def figure(png: bytes, about: str, caption: str) -> str:
    """A picture within the page; `about` is for who cannot see it."""
    source = b64encode(png).decode("ascii")
    return (
        f'<figure><img alt="{escape(about)}" src="data:image/png;base64,{source}">'
        f"<figcaption>{escape(caption)}</figcaption></figure>\n"
    )


def mark(word: str) -> str:
    """An outcome as a small label: its word says it, its colour and edge repeat it."""
    return f'<span class="mark {escape(word)}">{escape(word)}</span>'


def page(title: str, body: str) -> str:
    """A whole page."""
    return (
        '<!DOCTYPE html>\n<html lang="en">\n<head>\n<meta charset="utf-8">\n'
        '<meta name="viewport" content="width=device-width, initial-scale=1">\n'
        f"<title>{escape(title)}</title>\n<style>{STYLE}</style>\n</head>\n<body>\n{body}</body>\n</html>\n"
    )
