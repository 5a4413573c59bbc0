"""An invented record with what is hard to print: long and wide tables, equations, figures, notes."""
# ruff: noqa: E501

import datetime
import math
from collections.abc import Callable
from io import StringIO

import matplotlib
import pytest
from matplotlib.figure import Figure

from calcsheet.record.equations import to_mathml, to_svg
from calcsheet.record.markdown import to_html
from calcsheet.record.page import Cover, Fact, Page, Person, Section

LEVELS = 58
WORDS = r"""
# Scope and model

The tower at **Kestrel Quay** is idealised as a chain of masses and storey springs, one direction at a time. The
undamped modes follow from
$$\mathbf{K}\,\boldsymbol{\phi}_n = \omega_n^2\,\mathbf{M}\,\boldsymbol{\phi}_n ,$$
with mode shapes scaled so that $\boldsymbol{\psi}^{\mathsf T}\mathbf{M}\,\boldsymbol{\psi}=\mathbf{I}$; the period is
$T_n = 2\pi/\omega_n$ and the effective mass $m_n^* = L_n^2/M_n$ where $L_n = \sum_i m_i\,\phi_{in}$.

## What the model leaves out

- vertical component and load combinations
- uplift of the foundation; the base is fixed at level `Quay`
- torsion: each direction is a planar sheet, see ![plan](plan.png)

| source | edition | used for |
|---|---|--:|
| Structural drawings S-200 to S-214 | revision C | masses |
| Geotechnical note KQ-7 | 2 | base |
"""


def _row(level: int) -> str:
    mass, stiffness = 418.0 + 7.3 * (level % 5), 2.1e6 * (1 - level / 90)
    height = 4.2 if level == 1 else 3.4
    return (
        f'<tr><th scope="row">{"Roof" if level == LEVELS else level}</th>'
        + "".join(
            f'<td><data value="{value!r}">{value:{form}}</data></td>'
            for value, form in (
                (4.2 + 3.4 * (level - 1), ".2f"),
                (height, ".2f"),
                (mass, ",.1f"),
                (stiffness, ",.0f"),
                (0.8 * stiffness, ",.0f"),
            )
        )
        + "</tr>"
    ).replace(",", "\u202f")


def storey_table() -> str:
    """A table that runs over two pages."""
    rows = "".join(_row(level) for level in range(LEVELS, 0, -1))
    return (
        '<table class="values"><caption>Storeys, roof first. A row holds the level and the storey below it.</caption>'
        '<thead><tr><th scope="col">level</th><th scope="col">elevation [m]</th><th scope="col">storey height [m]</th>'
        '<th scope="col">mass [t]</th><th scope="col">stiffness x [kN/m]</th><th scope="col">stiffness y [kN/m]</th></tr>'
        f"</thead><tbody>{rows}</tbody>"
        '<tfoot><tr><th scope="row">total</th><td></td><td>198.0</td><td>25\u202f078.9</td><td></td><td></td></tr></tfoot>'
        "</table>"
    )


def wide_table() -> str:
    """A table that asks for a turned page."""
    modes = range(1, 15)
    head = "".join(f'<th scope="col">mode {mode}</th>' for mode in modes)
    rows = "".join(
        f'<tr><th scope="row">{level}</th>'
        + "".join(f"<td>{math.sin((2 * mode - 1) * math.pi / 2 * level / 9):.4f}</td>" for mode in modes)
        + "</tr>"
        for level in range(9, 0, -1)
    )
    return (
        '<table class="values"><caption>Mode shapes x, largest component 1</caption>'
        f'<thead><tr><th scope="col">level</th>{head}</tr></thead><tbody>{rows}</tbody></table>'
    )


def figure(number: int) -> str:
    """A figure as the renderers give it: inline SVG whose text stays text."""
    with matplotlib.rc_context({"svg.fonttype": "none", "svg.hashsalt": "sample"}):
        drawing = Figure(figsize=(6.3, 3.4), layout="constrained")
        axes = drawing.subplots()
        heights = [level / 20 for level in range(21)]
        for mode, (colour, dash) in enumerate([("#1f3a5f", "-"), ("#9a3412", "--"), ("#c28e1a", "-.")], start=1):
            shape = [math.sin((2 * mode - 1) * math.pi / 2 * height) for height in heights]
            axes.plot(shape, heights, color=colour, linestyle=dash)
            axes.annotate(f"mode {mode}, T = {4.31 / (2 * mode - 1):.2f} s", (shape[-1], 1.0), color=colour, fontsize=9)
        axes.set_xlabel("displacement, largest = 1")
        axes.set_ylabel("elevation over storey height ≤ 1")
        stream = StringIO()
        drawing.savefig(stream, format="svg", metadata={"Date": None})
    svg = stream.getvalue()
    svg = svg[svg.index("<svg") :].replace("<svg ", f'<svg role="img" aria-labelledby="figure-{number}" ', 1)
    start = svg.index(">") + 1
    svg = f'{svg[:start]}<title id="figure-{number}">Mode shapes over elevation</title>{svg[start:]}'
    return f"<figure>{svg}<figcaption>Mode shapes in direction x, {number}</figcaption></figure>"


LINES = """
<table class="lines"><caption>Worked lines, direction x</caption>
<thead><tr><th scope="col">quantity</th><th scope="col">relation</th><th scope="col">with values</th>
<th scope="col">result</th><th scope="col">reference</th></tr></thead><tbody>
<tr><td>first period</td><td>T₁ = 2π / ω₁</td><td>2π / 1.4579</td><td><data value="4.3097">4.310 s</data></td><td>single-degree relation</td></tr>
<tr><td>participation of mode 1</td><td>Γ₁ = L₁ / M₁</td><td>15 993.8 / 12 545.2</td><td><data value="1.2749">1.275</data></td><td>modal analysis, textbook</td></tr>
<tr><td>effective mass of mode 1</td><td>L₁² / M₁</td><td>15 993.8² / 12 545.2</td><td><data value="20390.4">20 390 t</data></td><td>EN 1998-1:2004, 4.3.3.3 (from memory)</td></tr>
</tbody></table>
"""
EVIDENCE = """
<table class="evidence"><thead><tr><th scope="col">what was checked</th><th scope="col">found</th><th scope="col">limit</th>
<th scope="col">verdict</th></tr></thead><tbody>
<tr><td>orthogonality with the mass matrix</td><td>4.1e-15</td><td>below 1e-10</td><td><span class="passes">passes</span></td></tr>
<tr class="exceeds"><td>share of effective mass, 12 modes</td><td>88.7 %</td><td>90 %</td><td><span class="exceeds">exceeds</span></td></tr>
<tr><td>stiffness step at level 14</td><td>71 %</td><td>no number given</td><td><span class="judgement">judgement</span></td></tr>
<tr><td>torsion</td><td></td><td></td><td><span class="not-assessed">not assessed</span></td></tr>
</tbody></table>
"""
CAUTIONS = """
<ul class="cautions">
<li class="caution needs-answer"><span class="word">Needs an answer.</span> Level 58 holds most of the kinetic energy of mode 6: a light roof plant. Is it modelled apart?</li>
<li class="caution">Periods above 4 s lie outside the range for which the spectrum is defined. <span class="below">Answer: displacement spectrum of annex A used instead.</span></li>
</ul>
"""
NOT_REPLAYED = """
<div class="not-replayed"><span class="word">Output of the engineer's own cell: not replayed</span>
<pre>checked by hand: T1 = 2*pi*sqrt(0.4707) = 4.31 s</pre></div>
"""


def sample_page(target: str, *, draft: bool = True, engine: str = "") -> Page:
    """The sample, with equations set for the target."""
    math_of: Callable[[str, bool], str] = to_mathml if target == "html" else to_svg
    cover = Cover(
        project="Kestrel Quay, tower B, for the Harbour Trust of Sankt Őrsöd",
        title="Lateral modes of the tower",
        number="KQB-S-014",
        revision="B",
        date=datetime.date(2026, 5, 12),
        status="DRAFT" if draft else "FOR CHECKING",
        reason="Masses of levels 20 to 31 revised after the façade change",
        purpose="Periods, mode shapes and effective masses in x and y, as the basis of the seismic action",
        people=(
            Person("Prepared", "Zoë Márkus", "ZM", "MEng, chartered, no. 18 442", datetime.date(2026, 5, 12)),
            Person("Checked", "Θάλεια Ιωάννου", "ΘΙ", "Dipl.-Ing., registered, no. 2 071"),
            Person("Approved"),
        ),
        headline=(
            Fact(
                "First period x, y",
                '<data value="4.3097">4.310 s</data>, <data value="4.8184">4.818 s</data>',
            ),
            Fact("Modes for 90 % of the effective mass, x", "13 (12 modes reach 88.7 %)"),
            Fact("Evidence", '1 of 24 <span class="exceeds">exceeds</span>'),
            Fact("Torsion", '<span class="not-assessed">not assessed</span>'),
        ),
        programme="calcsheet 0.1.0",
        pdf_engine=engine,
        fingerprint="sha256 9f2c41d07be4c1a6d3f0b1d9b78e5521c6a0f4e2b8d97a3355d1e60c4fb2a8e7",
    )
    sections = (
        Section("basis", "Basis and criteria", "<p>Both directions; all storeys; fixed base.</p>", part="front"),
        Section("words", "", to_html(WORDS, math_of, top=2, prefix="words")),
        Section("storeys", "Storeys", storey_table()),
        Section("modes", "Modes", LINES + figure(1) + figure(2)),
        Section("shapes", "Mode shapes in full", wide_table(), landscape=True),
        Section(
            "own",
            "Check by hand",
            "<p>地震 and ∝ are outside the record's own fonts.</p>" + NOT_REPLAYED,
            level=3,
        ),
        Section("evidence", "Evidence", EVIDENCE, part="back"),
        Section("cautions", "Cautions", CAUTIONS, part="back"),
        Section(
            "versions",
            "Versions",
            '<table class="facts"><tr><th scope="row">Python</th><td>3.11</td></tr></table>',
            part="back",
        ),
    )
    return Page(
        cover=cover,
        draft=draft,
        headline="<p>The first periods are 4.31 s (x) and 4.82 s (y).</p>",
        sections=sections,
        data='{"note": "a </script> & <b>", "period": 4.3097}',
    )


@pytest.fixture(scope="session")
def sample() -> Callable[..., Page]:
    """`sample_page`, for tests."""
    return sample_page
