"""One cell read as a number in core units, or refused in one sentence."""

from __future__ import annotations

import math

from calcsheet.job.amounts import split_amount
from calcsheet.job.errors import InputError
from calcsheet.job.numbers import format_number, is_ambiguous, parse_number, readings
from calcsheet.job.wording import shorten
from calcsheet.units import Unit, quantities_of

ANY, POSITIVE, NOT_NEGATIVE = "a finite number", "above 0", "0 or above"
"""What a number must be."""


def read_cell(
    text: str,
    file: str,
    where: str,
    name: str,
    unit: Unit,
    mark: str | None,
    allowed: str,
    may_be_blank: bool = False,
) -> float:
    """Return the number of a cell in core units.

    Parameters
    ----------
    text : str
        The cell.
    file, where : str
        File and row, for messages.
    name : str
        Name of the quantity.
    unit : Unit
        The heading's unit.
    mark : str or None
        The decimal mark; None where the column doesn't tell it.
    allowed : str
        `ANY`, `POSITIVE` or `NOT_NEGATIVE`.
    may_be_blank : bool
        Whether it may be blank: NaN is returned.

    Raises
    ------
    InputError
        The cell holds no number, an ambiguous one, or one that isn't allowed.
    """
    text = text.strip()
    if not text:
        if may_be_blank:
            return math.nan
        raise InputError(file, where, f"{name} is blank", f"{_wanted(unit)}, {allowed}")
    if mark is None and is_ambiguous(text):
        dot, comma = (format_number(readings(text)[m], "," if "," in text else ".") for m in ".,")
        found = f"{_with_unit(name, text, unit)} can be read as {dot} or {comma}"
        raise InputError(file, where, found, "must be written so that it can be read in one way")
    try:
        value = parse_number(text, mark or ".")
    except ValueError:
        raise InputError(file, where, f'{name} "{shorten(text)}"', _number_wanted(text, unit, mark)) from None
    core = value * unit.factor
    if not math.isfinite(core):
        allowed = ANY
    if not {ANY: math.isfinite(core), POSITIVE: core > 0, NOT_NEGATIVE: core >= 0}[allowed]:
        raise InputError(file, where, _with_unit(name, shorten(text), unit), f"must be {allowed}")
    return core


def _number_wanted(text: str, unit: Unit, mark: str | None) -> str:
    wanted = _wanted(unit)
    if mark is not None and readings(text):
        return f'{wanted} with the decimal mark "{mark}", as in the other cells'
    symbol = split_amount(text)[1] if unit.symbol else ""
    others = quantities_of(symbol)
    if others and not {*others} & {*quantities_of(unit.symbol)}:
        return f'{wanted}, and "{symbol}" is a unit of {others[0]}'
    return f"{wanted}, the heading's unit, without a unit of its own" if symbol else wanted


def _wanted(unit: Unit) -> str:
    return f"must be a number in {unit.symbol}" if unit.symbol else "must be a number"


def _with_unit(name: str, text: str, unit: Unit) -> str:
    return f"{name} {text} {unit.symbol}".rstrip()
