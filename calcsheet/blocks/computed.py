"""The columns beside a storey table that are calculated while it is typed, and its row of sums."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from calcsheet.core.alongside import at_and_above, elevations, heights, to_level_below
from calcsheet.job.headings import GRAVITY, OPTIONAL, QUANTITIES
from calcsheet.job.storeyreading import StoreyReading
from calcsheet.render.numbers import decimals_for, decimals_given, text
from calcsheet.units import STANDARD_GRAVITY, Display, display

ALL = "sum above the base"
DECIMALS = {"kN": 1, "kip": 1, "N": 0, "kg": 0, "mm": 0}
"""Most decimals by unit; three of any other."""


@dataclass(frozen=True)
class Computed:
    """A column that can't be typed into.

    Parameters
    ----------
    key : str
        Its key, no other column's.
    heading : str
        Its heading with the unit.
    cells : mapping of int to str
        Text by row of the table; rows without a number are left out.
    """

    key: str
    heading: str
    cells: Mapping[int, str]


def computed(reading: StoreyReading, system: str) -> tuple[Computed, ...]:
    """Return the columns calculated from what is readable in a table; a wrong cell leaves open what depends on it.

    What take-offs give comes first, headed with the table that it comes from.

    Parameters
    ----------
    reading : StoreyReading
        The table as read.
    system : {"SI", "US"}
        System of units, for what no column's heading gives a unit for.
    """
    given, columns = reading.numbers, _taken(reading, system)
    if "storey height" in given:
        values = elevations(given["storey height"][::-1], reading.foot)
        columns.append(_column(reading, "elevation", values, _unit(reading, "storey height", "elevation", system)))
    elif "elevation" in given:
        values = heights(given["elevation"][::-1], reading.foot)
        columns.append(_column(reading, "storey height", values, _unit(reading, "elevation", "length", system)))
    mass = _mass(reading)
    if mass is None:
        return tuple(columns)
    for key, summed in (("mass", mass), ("weight", mass * STANDARD_GRAVITY), (GRAVITY, _load(reading))):
        if summed is not None:
            how = _unit(reading, key, OPTIONAL.get(key, key), system)
            decimals = _digits(mass, how) if key in reading.taken else None
            columns.append(_column(reading, f"{key} at and above", at_and_above(summed), how, decimals=decimals))
    columns.append(_column(reading, "mass / level below", to_level_below(mass), display("ratio", system)))
    return tuple(columns)


def sums(reading: StoreyReading, beside: Sequence[Computed]) -> dict[str, str]:
    """Return the row of sums over the levels above the effective base, where all of a column are known.

    Parameters
    ----------
    reading : StoreyReading
        The table as read.
    beside : sequence of Computed
        Its calculated columns.
    """
    found, keys = {}, [column.key for column in reading.columns]
    shown = {*keys, *(column.key for column in beside)}
    for column in beside:
        summed = column.key.removeprefix("=").removesuffix(" at and above")
        lowest = reading.used[reading.above - 1] if reading.above else -1
        if column.key.endswith(" at and above") and lowest in column.cells:
            place = next(key for key in (f"={summed}", summed, column.key) if key in shown)
            found[place] = column.cells[lowest]
    return {keys[0]: ALL, **found} if found else {}


def _load(reading: StoreyReading) -> np.ndarray | None:
    """Gravity loads above the effective base [kN], lowest first; None where none is given."""
    load = reading.numbers.get(GRAVITY, np.array([]))[: reading.above][::-1]
    return None if np.isnan(load).all() else load


def _mass(reading: StoreyReading) -> np.ndarray | None:
    """Masses above the effective base [t], lowest first; None where neither table nor take-off has them."""
    if "mass" in reading.taken:
        return reading.taken["mass"].numbers[: reading.above][::-1]
    for key, factor in (("mass", 1.0), ("weight", 1.0 / STANDARD_GRAVITY)):
        if key in reading.numbers:
            return np.asarray(reading.numbers[key][: reading.above][::-1] * factor)
    return None


def _unit(reading: StoreyReading, key: str, quantity: str, system: str) -> Display:
    """The unit of a given column, for what is calculated from it; else the system's."""
    usual = display(quantity, system)
    for column in reading.columns:
        if column.key == key and column.unit is not None:
            return Display(column.unit.symbol, column.unit.factor, usual.digits)
    return usual


def _taken(reading: StoreyReading, system: str) -> list[Computed]:
    """The columns that take-offs give, also for levels at and below the effective base, in the system's units."""
    columns = []
    for key, taken in reading.taken.items():
        how = display(QUANTITIES.get(key, "stiffness"), system)
        values = taken.numbers[::-1]
        name, decimals = f"{key} from {taken.file}", _digits(values, how)
        columns.append(_column(reading, name, values, how, key=key, decimals=decimals))
    return columns


def _digits(values: np.ndarray, how: Display) -> int:
    """Decimals for what is calculated, with far more digits than it is worth."""
    return decimals_for([float(v) for v in values / how.factor if np.isfinite(v)], how.digits)


def _column(
    reading: StoreyReading, name: str, values: np.ndarray, how: Display, *, key: str = "", decimals: int | None = None
) -> Computed:
    """A column from its values, lowest level first: they belong to the first rows of the table.

    Without `decimals` it has those that its digits ask for, since sums of what was typed have no more than that.
    """
    numbers = values[::-1] / how.factor
    known = [float(v) for v in numbers if np.isfinite(v)]
    places = min(decimals_given(known), DECIMALS.get(how.symbol, 3)) if decimals is None else decimals
    cells = {row: text(float(v), places) for row, v in zip(reading.used, numbers, strict=False) if np.isfinite(v)}
    return Computed(f"={key or name}", f"{name} [{how.symbol}]" if how.symbol else name, cells)
