"""Numbers as printed: rounded for their quantity, with the place in the payload that they come from."""

from __future__ import annotations

import math
from collections.abc import Sequence
from html import escape

from calcsheet.units import display


def decimals_for(values: Sequence[float], digits: int) -> int:
    """Decimals that show the largest of `values` to `digits` significant digits, none below 0."""
    largest = max((abs(v) for v in values), default=0.0)
    if largest == 0.0:
        return 0
    shown = float(f"{largest:.{digits - 1}e}")  # 9.9996 rounds up to 10.00 before its digits are counted
    return max(0, digits - 1 - math.floor(math.log10(shown)))


def decimals_given(values: Sequence[float]) -> int:
    """Decimals that show every digit of `values`, up to ten significant digits and six decimals."""
    needed = 0
    for value in values:
        shown = f"{value:.10g}"
        places = len(shown.partition(".")[2]) if "e" not in shown else 6
        needed = max(needed, min(places, 6))
    return needed


def text(value: float, decimals: int) -> str:
    """A number to a fixed number of decimals, thousands apart by a narrow space that never breaks, with a true minus sign."""
    shown = f"{value:,.{decimals}f}".replace(",", "\u202f")
    if float(f"{value:.{decimals}f}") == 0.0:
        return shown.lstrip("-")
    return shown.replace("-", "\u2212")


def number(value: float, quantity: str, system: str, at: str, *, decimals: int | None = None, unit: bool = True) -> str:
    """HTML of one number: ``<data value="place in the payload" data-unit="m">text</data>`` and its unit.

    Parameters
    ----------
    value : float
        In core units.
    quantity : str
        A quantity of the unit table.
    system : {"SI", "US"}
        System of units.
    at : str
        JSON pointer into the record's payloads.
    decimals : int, optional
        Decimals; by the quantity's significant digits where omitted.
    unit : bool
        Whether the unit follows.
    """
    how = display(quantity, system)
    shown = how.of(value)
    places = decimals_for([shown], how.digits) if decimals is None else decimals
    symbol = escape(how.symbol)
    unit_of = f' data-unit="{symbol}"' if symbol else ""
    suffix = f"\u00a0{symbol}" if unit and symbol else ""
    return f'<data value="{escape(at)}"{unit_of}>{text(shown, places)}</data>{suffix}'


def exponent(value: float, at: str) -> str:
    """HTML of a very small number to two digits, such as 3.1·10⁻¹⁵."""
    if value == 0.0:
        return f'<data value="{escape(at)}">0</data>'
    mantissa, power = f"{value:.1e}".split("e")
    shown = f"{mantissa}\u00b710<sup>{int(power)}</sup>".replace("-", "\u2212")
    return f'<data value="{escape(at)}">{shown}</data>'


def heading(name: str, quantity: str, system: str) -> str:
    """A column's heading with its unit: "mass [t]"."""
    symbol = display(quantity, system).symbol.lstrip("·")  # a dot parts a power of ten from the number before it
    return f"{name} [{symbol}]" if symbol else name
