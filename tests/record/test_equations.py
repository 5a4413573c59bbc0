import re
from xml.etree import ElementTree

import pytest

from calcsheet.record.equations import EquationError, to_mathml, to_svg

SET = [
    r"\omega_1^2=\frac{k}{m}",
    r"\begin{align}a&=b\\c&=d\end{align}",
    r"\begin{equation}\begin{aligned}a&=b\\c&=d\end{aligned}\end{equation}",
    r"x < y \le z",
    r"\boldsymbol\phi^{\mathsf T}\mathbf M\,\boldsymbol\phi = 1",
    r"\sum_{i=1}^{n} m_i\,\phi_{in}^2",
    r"\{a\} = 5\,\mathrm{kN\cdot m}",
]
REFUSED = {
    r"\wrongcommand{x}": r'equation "\wrongcommand{x}": \wrongcommand is not understood here',
    r"a & b": 'equation "a & b": & is not understood here',
    r"\text{a \& b}": r'equation "\text{a \& b}": \& is not understood here',
    r"a}": 'equation "a}": } is not understood here',
    r"\frac{a": r'equation "\frac{a": an argument is missing or a brace isn' + "'t closed",
    r"\left( x": r'equation "\left( x" can' + "'t be read: extra left or missing right",
    r"\href{javascript:x}{y}": r'equation "\href{javascript:x}{y}": a link can' + "'t stand in an equation",
    "  ": "an equation is empty; write one between its delimiters, or take them out",
}


@pytest.mark.parametrize("latex", SET)
@pytest.mark.parametrize("display", [True, False])
def test_an_equation_is_well_formed_for_screen_and_page(latex: str, display: bool) -> None:
    mathml = ElementTree.fromstring(to_mathml(latex, display))
    assert mathml.attrib["display"] == ("block" if display else "inline")
    svg = ElementTree.fromstring(to_svg(latex, display))
    assert svg.attrib["role"] == "img"
    assert svg[0].tag.endswith("title")
    assert svg[0].text == latex
    assert len(svg) > 1


@pytest.mark.parametrize("set_equation", [to_mathml, to_svg])
@pytest.mark.parametrize("latex", REFUSED)
def test_a_refusal_names_what_is_wrong(set_equation, latex: str) -> None:  # type: ignore[no-untyped-def]
    with pytest.raises(EquationError) as caught:
        set_equation(latex, False)
    assert str(caught.value) == REFUSED[latex]


def test_markup_in_an_equation_never_reaches_the_document() -> None:
    for latex in (r"\text{<img src='x' onerror='y'/>}", r"\text{<script>}", r"\text{&lt;script>}"):
        with pytest.raises(EquationError):
            to_mathml(latex, False)
    tags = {element.tag for element in ElementTree.fromstring(to_mathml(r"\mathrm{</math><b>}", False)).iter()}
    assert {tag.rpartition("}")[2] for tag in tags} <= {"math", "mrow", "mi", "mo"}


def test_an_equation_in_the_text_stands_on_its_baseline() -> None:
    def descent(latex: str) -> float:
        found = re.search(r"vertical-align:(-?[\d.]+)em", to_svg(latex, False))
        assert found
        return -float(found[1])

    assert descent("x") < 0.1  # the margin alone
    assert descent(r"\frac{a}{b}") > descent("y") > descent("x")
    assert "vertical-align" not in to_svg("x", True)


def test_numbered_environments_lose_their_number() -> None:
    assert "(1)" not in to_mathml(r"\begin{align}a&=b\\c&=d\end{align}", True)


def test_drawings_hold_no_ids() -> None:
    assert " id=" not in to_svg(r"\omega\omega", False)
