"""Equations in the engineer's LaTeX: MathML for the screen, drawn SVG for the page."""

from __future__ import annotations

import re
from functools import lru_cache
from html import escape
from xml.etree import ElementTree

import ziafont
import ziamath
from latex2mathml.converter import convert

MATHML = "{http://www.w3.org/1998/Math/MathML}"
ENVIRONMENT = re.compile(r"\\(begin|end)\{(?:align|aligned)\}")
LEAF = re.compile(r"<(mi|mo|mn|mtext)\b[^>]*>([^<]*)</\1>")
ENTITY = re.compile(r"&#x[0-9A-Fa-f]+;")
LEFT_OVER = re.compile(r"\\[A-Za-z]+|\\.?|[&{}]")
DRAWN_SIZE = 16.0


class EquationError(ValueError):
    """An equation that can't be set; says which command is at fault, in one sentence."""


def to_mathml(latex: str, display: bool) -> str:
    r"""LaTeX as a MathML element.

    Parameters
    ----------
    latex : str
        The equation without its delimiters.
    display : bool
        On a line of its own, or within the text.

    Returns
    -------
    str
        A ``<math>`` element.

    Raises
    ------
    EquationError
        When a command is unknown, a brace is missing, or the equation is empty.
    """
    return _mathml(latex.strip(), display)


def to_svg(latex: str, display: bool) -> str:
    r"""LaTeX as a drawing, for PDF engines, which know no MathML.

    Sizes are in em, so that the drawing follows the text around it; an equation within the text stands on the
    text's baseline. The LaTeX is the title, that is the alternative text.

    Parameters
    ----------
    latex, display
        As for `to_mathml`.

    Returns
    -------
    str
        An ``<svg>`` element.

    Raises
    ------
    EquationError
        As for `to_mathml`.
    """
    return _svg(latex.strip(), display)


def _normal(latex: str) -> str:
    # A "<" would reach the output as a tag, and a numbered environment would restart at (1) in every cell.
    latex = latex.replace("<", r"\lt ").replace(">", r"\gt ")
    return ENVIRONMENT.sub(r"\\\1{align*}", latex)


@lru_cache(maxsize=1024)
def _mathml(latex: str, display: bool) -> str:
    if not latex:
        raise EquationError("an equation is empty; write one between its delimiters, or take them out")
    try:
        mathml = convert(_normal(latex), display="block" if display else "inline")
    except Exception as error:  # the library raises bare Exception subclasses, and IndexError on some input
        raise EquationError(f'equation "{latex}" can\'t be read: {_reason(error)}') from error
    for leaf in LEAF.finditer(mathml):
        found = LEFT_OVER.search(ENTITY.sub("", leaf[2]))
        if found:
            raise EquationError(f'equation "{latex}": {found[0]} is not understood here')
    try:
        root = ElementTree.fromstring(mathml)
    except ElementTree.ParseError as error:
        raise EquationError(f'equation "{latex}" gives malformed MathML; write it another way') from error
    for element in root.iter():
        if "href" in element.attrib:
            raise EquationError(f'equation "{latex}": a link can\'t stand in an equation')
        expected = {"mfrac": 2, "msub": 2, "msup": 2, "msubsup": 3, "mroot": 2, "munder": 2, "mover": 2}
        count = expected.get(element.tag.removeprefix(MATHML))
        if count is not None and len(element) != count:
            raise EquationError(f'equation "{latex}": an argument is missing or a brace isn\'t closed')
    return mathml


@lru_cache(maxsize=1024)
def _svg(latex: str, display: bool) -> str:
    _mathml(latex, display)  # the same refusals, in the same words, whatever the target
    ziafont.config.svg2 = False  # plain paths: shared symbols would repeat their ids across equations
    try:
        drawn = ziamath.Latex(_normal(latex), size=DRAWN_SIZE, inline=not display, margin=0.5).svgxml()
    except Exception as error:  # the library asserts or raises whatever its parser met
        raise EquationError(f'equation "{latex}" can\'t be drawn: {_reason(error)}') from error
    _, top, width, height = (float(number) for number in drawn.attrib["viewBox"].split())
    depth = top + height
    size = f"width:{width / DRAWN_SIZE:.4f}em;height:{height / DRAWN_SIZE:.4f}em"
    place = "" if display else f";vertical-align:{-depth / DRAWN_SIZE:.4f}em"
    paths = "".join(ElementTree.tostring(child, encoding="unicode") for child in drawn)
    kind = "equation" if display else "equation inline"
    return (
        f'<svg xmlns="http://www.w3.org/2000/svg" class="{kind}" role="img" '
        f'viewBox="{drawn.attrib["viewBox"]}" style="{size}{place}">'
        f"<title>{escape(latex)}</title>{paths}</svg>"
    )


def _reason(error: Exception) -> str:
    words = re.sub(r"(?<=[a-z])(?=[A-Z])", " ", type(error).__name__.removesuffix("Error")).lower()
    return str(error) or words
