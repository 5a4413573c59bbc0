"""What headings say: ``stiffness x cracked [kN/m]`` is a quantity, a direction, a set and a unit."""

from __future__ import annotations

import re
from collections.abc import Container, Iterator, Mapping
from dataclasses import dataclass, replace
from itertools import product

from calcsheet.core.given import Given
from calcsheet.core.lateral import LATERALS, Lateral
from calcsheet.job.card import Card
from calcsheet.job.cardtables import DIRECTIONS
from calcsheet.job.errors import InputError
from calcsheet.job.table import TextTable
from calcsheet.units import Unit, UnitError, allowed_units, display, parse_unit

LEVEL = "level"
GRAVITY, AREA = "gravity load", "floor area"
OPTIONAL = {GRAVITY: "weight", AREA: "area"}
"""Headings of columns that a table may leave out, and their quantity in the unit table."""
QUANTITIES = {
    "storey height": "length",
    "elevation": "elevation",
    "mass": "mass",
    "weight": "weight",
    **OPTIONAL,
}
"""The headings that stand for one quantity, and that quantity in the unit table."""

Ways = Mapping[str, type[Lateral]]
"""What resists along each direction, or along each line of resistance."""


@dataclass(frozen=True)
class Column:
    """One column of a storey table.

    Parameters
    ----------
    key : str
        The heading without its unit, spelled as this program spells it; "column 7" where it isn't known.
    heading : str
        The heading as written.
    quantity : str or None
        Its quantity in the unit table; None for names and for what isn't known.
    unit : Unit or None
        Its unit; None also where the heading's unit is refused.
    direction : str or None
        "x" or "y", or a line of resistance.
    set_name : str or None
        The stiffness set whose own values these are.
    used : bool
        Whether the calculation reads it.
    """

    key: str
    heading: str
    quantity: str | None = None
    unit: Unit | None = None
    direction: str | None = None
    set_name: str | None = None
    used: bool = False


@dataclass(frozen=True)
class Headings:
    """The columns of a table, what is wrong with them (by column key, if any), and what is worth knowing."""

    columns: tuple[Column, ...]
    problems: tuple[tuple[str | None, InputError], ...]
    notices: tuple[str, ...]


def split_heading(heading: str) -> tuple[str, str | None]:
    """Return a heading's name, its spaces levelled, and its unit, None where it has no square brackets."""
    found = re.fullmatch(r"([^\[\]]*)\[([^\[\]]*)\]\s*", heading)
    name, unit = found.groups() if found else (heading, None)
    return " ".join(name.split()), unit.strip() if unit is not None else None


def heading_unit(file: str, heading: str, unit: str | None, quantity: str) -> Unit:
    """Return the unit that a heading gives for a quantity, refusing (InputError) any other."""
    where = f'heading "{heading}"'
    if not unit:
        allowed = f"must give its unit in square brackets: {allowed_units(quantity)}"
        raise InputError(file, where, "no unit", allowed)
    try:
        return parse_unit(unit, quantity)
    except UnitError as error:
        raise InputError(file, where, error.found, error.allowed) from None


def read_headings(table: TextTable, card: Card, ways: Ways) -> Headings:
    """Return the columns of a storey table, every problem with them, and notices of what isn't used."""
    columns: list[Column] = []
    needed = needed_stiffness(card, ways)
    problems: list[tuple[str | None, InputError]] = []
    notices: list[str] = []
    for i, heading in enumerate(table.headings):
        name, unit = split_heading(heading)
        column = known(name, heading, card, ways, needed)
        if column is None:
            columns.append(Column(f"column {i + 1}", heading))
            if heading.strip() or any(cells[i].strip() for cells in table.rows):
                notices.append(f'{table.file}, column "{heading}" isn\'t known: not used, and kept')
            continue
        twin = next((k for k, other in enumerate(columns) if other.key == column.key), None)
        try:
            if twin is not None:
                column = replace(column, key=f"column {i + 1}", used=False)
                found = f"given in columns {twin + 1} and {i + 1}"
                raise InputError(table.file, f'heading "{heading}"', found, "must be given once")
            if column.quantity is not None:
                column = replace(column, unit=heading_unit(table.file, heading, unit, column.quantity))
            elif unit is not None:
                allowed = f'must be "{LEVEL}" alone'
                raise InputError(table.file, f'heading "{heading}"', f"a unit, [{unit}]", allowed)
        except InputError as error:
            problems.append((column.key, error))
        if not column.used and twin is None:
            notices.append(f'{table.file}, column "{heading}" isn\'t used by this model, and is kept')
        columns.append(column)
    problems += [(None, error) for error in _missing(table.file, {c.key for c in columns}, card, ways)]
    return Headings(tuple(columns), tuple(problems), tuple(notices))


def needed_stiffness(card: Card, ways: Ways) -> dict[str, tuple[Given, str, str | None]]:
    """Return the stiffness columns of the model: key -> what it gives, way, set (None: what factors apply to)."""
    if card.model.members is not None:
        return {}
    sets = dict.fromkeys(name if basis.own else None for name, basis in card.stiffness.items())
    return {
        stiffness_key(given, d, name): (given, d, name)
        for name in sets
        for d, lateral in ways.items()
        for given in lateral.columns
    }


def optional_stiffness(card: Card, ways: Ways) -> tuple[str, ...]:
    """Keys of the stiffness columns that the model can do without."""
    return tuple(key for key, (given, _, _) in needed_stiffness(card, ways).items() if given.optional)


def stiffness_key(given: Given, direction: str, set_name: str | None) -> str:
    """Return the key of a stiffness column."""
    return f"{given.heading} {direction}" + (f" {set_name}" if set_name else "")


def known(name: str, heading: str, card: Card, ways: Ways, needed: Container[str] = ()) -> Column | None:
    """Return the column that a heading's name stands for in a storey table, without its unit; None where it's not known."""
    wanted = name.casefold()
    if wanted == LEVEL:
        return Column(LEVEL, heading, used=True)
    if wanted in QUANTITIES:
        return Column(wanted, heading, QUANTITIES[wanted], used=True)
    sets = (None, *(name for name, basis in card.stiffness.items() if basis.own))
    givens = [given for lateral in LATERALS for given in lateral.columns]
    for given, d, set_name in product(givens, (*ways, *DIRECTIONS), sets):
        key = stiffness_key(given, d, set_name)
        if wanted == " ".join(key.split()).casefold():
            return Column(key, heading, given.heading, None, d, set_name, key in needed)
    return None


def _missing(file: str, keys: set[str], card: Card, ways: Ways) -> Iterator[InputError]:
    def written(key: str, quantity: str) -> str:
        return f'"{key} [{display(quantity, card.units.system).symbol}]"'

    if LEVEL not in keys:
        yield InputError(file, "", f'no column "{LEVEL}"', "must have one")
    pairs = [("storey height", "elevation"), ("mass", "weight")]
    if card.masses is not None:
        for key in keys & set(pairs.pop()):
            allowed = f"must be left out, since the masses come from {card.masses.source} (job.toml, masses.source)"
            yield InputError(file, "", f'column "{key}"', allowed)
    for pair in pairs:
        both = [written(key, QUANTITIES[key]) for key in pair]
        if keys.isdisjoint(pair):
            yield InputError(file, "", f"no column {' or '.join(both)}", "must have exactly one of them")
        elif keys.issuperset(pair):
            yield InputError(file, "", f"columns {' and '.join(both)}", "must have exactly one of them")
    for key, (given, d, name) in needed_stiffness(card, ways).items():
        if key not in keys and not given.optional:
            own = f" and stiffness.{name} has own values" if name else ""
            why = f"must have it, since {d} is {'analysed' if d in DIRECTIONS else 'a line of resistance'}{own} (job.toml)"
            yield InputError(file, "", f"no column {written(key, given.heading)}", why)
