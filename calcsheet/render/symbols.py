"""Symbols in plain text, such as S_D1 or h^0.75, set with subscripts and superscripts."""

from __future__ import annotations

import re
from html import escape

INDEX = re.compile(r"(?<=[A-Za-z\u0370-\u03ff\u0304])_([A-Za-z0-9\u03b1-\u03c9]+)")
POWER = re.compile(r"\^(\d+(?:\.\d+)?|[a-z])")


def symbols(text: str) -> str:
    """HTML of a text with ``a_b`` and ``a^b`` set as sub- and superscript; everything else escaped.

    Only for the program's own texts: in an engineer's text an underscore may be meant.
    """
    html = INDEX.sub(r"<sub>\1</sub>", escape(text, quote=False))
    return POWER.sub(r"<sup>\1</sup>", html)
