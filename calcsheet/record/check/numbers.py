"""Printed numbers held against the data, one by one, where the pages themselves can't be made again."""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from html import unescape
from typing import Any

from calcsheet.record.check.places import located
from calcsheet.record.tokens import attributes, name_of, tokens
from calcsheet.render.numbers import exponent, text
from calcsheet.units import DISPLAY

FACTORS: Mapping[str, float] = {how.symbol: how.factor for pair in DISPLAY.values() for how in pair.values()}
"""Core units to a unit of print, by its symbol."""
LATER = ("bending stiffness", "shear stiffness", "rotational stiffness", "angle")
"""Quantities that records which say no units do not have."""
UNSAID = tuple(
    dict.fromkeys(how.factor for name, pair in DISPLAY.items() if name not in LATER for how in pair.values())
)
"""Factors that a number may have whose unit is not said."""
PLAIN = re.compile(r"\u2212?\d{1,3}(?:\u202f?\d{3})*(?:\.(\d{1,12}))?")
BRACKETED = re.compile(r"\[([^\]]+)\]$")
EVIDENCE = re.compile(r"^/[^/]+/evidence/\d+/(value|limit)$")
"""Pointers to figures of evidence, which are always printed as powers of ten: a zero is a true one."""
SCRIPT = re.compile(r"<script", re.IGNORECASE | re.ASCII)
MISSING = object()


@dataclass(frozen=True)
class Printed:
    """A number as an HTML record prints it.

    Parameters
    ----------
    text : str
        Its text; a superscript is led by "^".
    pointer : str
        JSON pointer into the payloads.
    unit : str
        Unit that it is said to be in; empty where nothing is said.
    shown_unit : str
        Unit that stands behind it, or in its column's heading; empty where none stands there.
    place : str
        Where it stands, in words.
    """

    text: str
    pointer: str
    unit: str
    shown_unit: str
    place: str


def printed(html: str) -> Iterator[Printed]:
    """Every number of an HTML record that carries a pointer."""
    found = list(located(tokens(html)))
    for i, where in enumerate(found):
        if name_of(where.token) != "data" or where.inside:
            continue
        shown, end = "", i + 1
        while end < len(found) and (name := name_of(found[end].token)) not in ("data", "/data"):
            shown += "^" if name == "sup" else "" if name else unescape(found[end].token)
            end += 1
        behind = found[end + 1].token if end + 1 < len(found) else ""
        said = attributes(where.token)
        unit = said.get("data-unit", "")
        yield Printed(shown, said.get("value", ""), unit, _shown_unit(behind, unit, where.column), where.place)


def _shown_unit(behind: str, unit: str, column: str) -> str:
    """The unit that stands behind a number, after a space that doesn't break, or in the heading of its column."""
    if behind.startswith("\u00a0"):
        follows = unescape(behind[1:200])
        goes_on = follows[len(unit) : len(unit) + 1]
        if unit and follows.startswith(unit) and not goes_on.isalnum():
            return unit
        return (follows.split() or [""])[0]
    heading = BRACKETED.search(column)
    return heading[1] if heading else ""


def differing(html: str, payloads: Mapping[str, Any], *, units_said: bool) -> tuple[int, list[tuple[str, str]]]:
    """Printed numbers that are not those of the data.

    Parameters
    ----------
    html : str
        An HTML record.
    payloads : mapping of str to payload
        Its data.
    units_said : bool
        Whether numbers say their unit, as they do from record format 2 on; else each is held against every unit.

    Returns
    -------
    count : int
        Numbers looked at.
    list of (str, str)
        Place and what is wrong there, for each that differs.
    """
    count, found = 0, []
    for number in printed(html):
        count += 1
        if wrong := wrong_with(number, resolved(payloads, number.pointer), units_said=units_said):
            found.append((number.place, wrong))
    return count, found


def resolved(data: Any, pointer: str) -> Any:
    """What a JSON pointer (RFC 6901) leads to, `MISSING` where nothing is there."""
    if not pointer.startswith("/"):
        return MISSING
    for part in pointer[1:].split("/"):
        part = part.replace("~1", "/").replace("~0", "~")
        if isinstance(data, Mapping) and part in data:
            data = data[part]
        elif isinstance(data, list) and re.fullmatch(r"0|[1-9]\d{0,8}", part, re.ASCII) and int(part) < len(data):
            data = data[int(part)]
        else:
            return MISSING
    return data


def wrong_with(number: Printed, value: Any, *, units_said: bool) -> str:
    """What is wrong with a printed number; "" where nothing is."""
    shown = f'printed "{number.text[:40]}"'
    if value is MISSING:
        return f"{shown}, and its pointer leads nowhere"
    if type(value) not in (int, float):
        return f"{shown}, and its pointer leads to no number"
    if number.unit and number.unit not in FACTORS:
        return f'{shown} in "{number.unit[:20]}", which is no unit of a record'
    if number.unit and number.shown_unit and number.shown_unit != number.unit:
        return f'{shown} with unit "{number.shown_unit[:20]}", should be {number.unit}'
    if "\u00b710" in number.text or EVIDENCE.search(number.pointer):
        should = "".join("^" if name_of(t) == "sup" else "" if name_of(t) else t for t in tokens(exponent(value, "")))
        return "" if number.text == should else f"{shown}, should be {should}"
    plain = PLAIN.fullmatch(number.text)
    if not plain:
        return f"{shown}, which is no number of a record"
    decimals = len(plain[1] or "")
    factors = [FACTORS[number.unit]] if units_said else list(UNSAID)
    should_be = [text(value / factor, decimals) for factor in factors]
    return "" if number.text in should_be else f"{shown}, should be {should_be[0]}"


def active(html: str) -> list[str]:
    """What an HTML record must not hold: scripts besides its data, and attributes that run any."""
    found = []
    if (scripts := len(SCRIPT.findall(html))) != 1:
        found.append(f"{scripts} script elements; the data are the one allowed")
    for token in tokens(html):
        if name_of(token) and any(name.startswith("on") for name in attributes(token)):
            found.append(f"an attribute that runs a script: {token[:60]}")
    return found
