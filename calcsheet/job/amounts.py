"""Amounts as people type and paste them, with a unit or another decimal mark, written as their column writes numbers."""

from __future__ import annotations

import math
import re

from calcsheet.job.headings import Column
from calcsheet.job.numbers import format_number, is_ambiguous, readings
from calcsheet.units import UnitError, parse_unit

_AMOUNT = re.compile(r"(.*?[0-9][.,]?(?:[eE][+-]?[0-9]+)?)(?:\s*([^\W\d_]\D*)|\s+([^\W\d_].*))")


def split_amount(text: str) -> tuple[str, str]:
    """Return the number and the unit that a text is made of; ("", "") where it is no number, with a unit or without."""
    text = text.strip()
    if readings(text):
        return text, ""
    found = _AMOUNT.fullmatch(text)
    return (found[1], found[2] or found[3]) if found and readings(found[1]) else ("", "")


def as_written(text: str, column: Column, mark: str | None, usual: str, own: str | None = None) -> str:
    """Return a cell's text as its column writes it: without a unit, in the heading's unit, with the column's decimal mark.

    What is no amount, has a unit of another quantity, or could be read in two ways is returned as it is, for the table
    to say so. A value converted from another unit is rounded to 15 significant digits.

    Parameters
    ----------
    text : str
        The text, such as "12,5 t".
    column : Column
        Its column.
    mark : str or None
        Decimal mark of the column's other cells; None where they don't tell it.
    usual : str
        Decimal mark to write where the column doesn't tell it.
    own : str, optional
        Decimal mark of the cells that this one came with, where they tell it.
    """
    number, symbol = split_amount(text)
    if column.unit is None or column.quantity is None or not number:
        return text
    try:
        given = parse_unit(symbol, column.quantity) if symbol else column.unit
    except UnitError:
        return text
    found = readings(number)
    read = own or mark
    if is_ambiguous(number) and read is None:
        return number if given == column.unit else text
    value = found[read] if read in found else next(iter(found.values()))
    if given == column.unit:
        kept = found.get(mark or usual) == value and (mark or not is_ambiguous(number))
        return number if kept else format_number(value, mark or usual)
    value = float(f"{value * given.factor / column.unit.factor:.15g}")
    return format_number(value, mark or usual) if math.isfinite(value) else text
