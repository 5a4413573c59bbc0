"""The tables of the mass take-off: floors.csv, loads.csv and, where there is one, masses.csv."""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from calcsheet.core.arrays import Array
from calcsheet.core.floors import KINDS, PERMANENT, PLACES, Floors, Load, OtherMass
from calcsheet.job.card import FILE as CARD
from calcsheet.job.card import Card
from calcsheet.job.cardtables import LoadShare
from calcsheet.job.cells import ANY, NOT_NEGATIVE
from calcsheet.job.columns import Column, Columns, read_columns
from calcsheet.job.errors import CellProblem, InputError
from calcsheet.job.headings import AREA, LEVEL
from calcsheet.job.storeycells import FILE as STOREYS
from calcsheet.job.storeycells import Frame
from calcsheet.job.table import TextTable
from calcsheet.job.wording import shorten
from calcsheet.units import STANDARD_GRAVITY

FLOORS, LOADS, MASSES = "floors.csv", "loads.csv", "masses.csv"
FILES = (FLOORS, LOADS, MASSES)
"""The take-off's files; the last may be missing."""

PER_AREA, PER_VOLUME = "load per area", "unit weight"
LOAD_COLUMNS = (
    Column("load"),
    Column("kind"),
    Column("place"),
    Column(PER_AREA, "pressure", NOT_NEGATIVE, optional=True, blank=True),
    Column(PER_VOLUME, "unit weight", NOT_NEGATIVE, optional=True, blank=True),
)
FLOOR_COLUMNS = (
    Column(LEVEL),
    Column(AREA, "area"),
    Column("plan x", "length"),
    Column("plan y", "length"),
    Column("centre x", "length", ANY, optional=True),
    Column("centre y", "length", ANY, optional=True),
    Column("radius of gyration", "length", optional=True, blank=True),
)
MASS_COLUMNS = (
    Column(LEVEL),
    Column("item"),
    Column("mass", "mass", NOT_NEGATIVE, optional=True),
    Column("weight", "weight", NOT_NEGATIVE, optional=True),
    Column("x", "length", ANY),
    Column("y", "length", ANY),
    Column("plan x", "length", NOT_NEGATIVE, optional=True, blank=True),
    Column("plan y", "length", NOT_NEGATIVE, optional=True, blank=True),
)
_Refuse = Callable[[str, str, str], None]


@dataclass(frozen=True, eq=False)
class FloorReading:
    """What the tables of the mass take-off hold: every problem with them, or the floors.

    Parameters
    ----------
    problems : mapping of str to tuple of CellProblem
        All that is wrong, by file.
    floors : Floors or None
        In core units; None where there is any problem.
    """

    problems: Mapping[str, tuple[CellProblem, ...]]
    floors: Floors | None

    @property
    def messages(self) -> tuple[str, ...]:
        """All that is wrong, a sentence each."""
        return tuple(problem.message for found in self.problems.values() for problem in found)


def read_floors(tables: Mapping[str, TextTable | InputError], card: Card, frame: Frame | None) -> FloorReading:
    """Read the tables of the mass take-off.

    Parameters
    ----------
    tables : mapping of str to TextTable or InputError
        By file, those of `FILES` that there are, or why one is no table; others are left alone.
    card : Card
        The job card: mass basis and system of units.
    frame : Frame or None
        Levels and storey heights; None where the storey table doesn't give them.

    Returns
    -------
    FloorReading
        With every problem; nothing is raised for one.
    """
    problems: dict[str, list[CellProblem]] = {name: [] for name in (*FILES, STOREYS)}
    given: dict[str, TextTable] = {}
    for name in FILES:
        match tables.get(name):
            case InputError() as error:
                problems[name].append(CellProblem(None, None, str(error)))
            case TextTable() as table:
                given[name] = table
    for name, allowed in ((FLOORS, "a row for each level"), (LOADS, "a row for each load")):
        if name not in tables:
            what = f"no {name} in the job folder; the mass take-off needs one with {allowed}"
            problems[name].append(CellProblem(None, None, what))
    if frame is None:
        what = f"{STOREYS}: its levels and storey heights can't be read; the mass take-off needs them"
        problems[STOREYS].append(CellProblem(None, None, what))
    unused: list[str] = []
    if any(problems.values()) or frame is None:
        return FloorReading({name: tuple(found) for name, found in problems.items()}, None)
    system = card.units.system
    columns = read_columns(given[LOADS], LOAD_COLUMNS, "load", system)
    loads = _loads(columns, card.mass_basis, problems[LOADS])
    rows = read_columns(given[FLOORS], _floor_columns(loads), "level", system)
    _levels(rows, frame, problems[FLOORS])
    others = None
    if MASSES in given:
        others = read_columns(given[MASSES], MASS_COLUMNS, "level", system, once=False)
        _masses(others, frame, problems[MASSES])
    for part in (columns, rows, others):
        if part is not None:
            problems[part.table.file][:0] = part.problems
            unused += part.notices
    floors = None if any(problems.values()) else replace(_floors(rows, loads, others, frame), unused=tuple(unused))
    return FloorReading({name: tuple(found) for name, found in problems.items()}, floors)


def floor_columns(loads: TextTable, card: Card) -> tuple[Column, ...]:
    """The columns that floors.csv may have: its own, and one for each load that can be read."""
    columns = read_columns(loads, LOAD_COLUMNS, "load", card.units.system)
    return _floor_columns(_loads(columns, card.mass_basis, []))


def _floor_columns(loads: Sequence[Load]) -> tuple[Column, ...]:
    amounts = (Column(load.name, PLACES[load.place].amount, NOT_NEGATIVE, blank=True) for load in loads)
    return (*FLOOR_COLUMNS, *amounts)


def _loads(columns: Columns, basis: Sequence[LoadShare], problems: list[CellProblem]) -> list[Load]:
    """The loads that can be read, with the shares of the mass basis."""
    table, loads = columns.table, []
    shares = {" ".join(entry.load.split()).casefold(): entry for entry in basis}
    stated = Counter(" ".join(entry.load.split()).casefold() for entry in basis)
    uses = Counter(name.casefold() for name in columns.names)
    taken = {column.key.casefold() for column in FLOOR_COLUMNS}
    if not columns.rows:
        problems.append(CellProblem(None, None, f"{table.file}: no load; must have a row for each load"))
    for i, (row, name) in enumerate(zip(columns.rows, columns.names, strict=True)):
        where, before = columns.where(i, "load"), len(problems)

        def refuse(column: str, found: str, allowed: str, row: int = row, where: str = where) -> None:
            problems.append(CellProblem(row, column, str(InputError(table.file, where, found, allowed))))

        kind = _choice("kind", i, columns, KINDS, refuse)
        place = _choice("place", i, columns, tuple(PLACES), refuse)
        if name.casefold() in taken or set(name) & set("[]"):
            refuse("load", "this name", f"must be no other heading of {FLOORS}, and without square brackets")
        elif uses[name.casefold()] > columns.names.count(name):
            refuse("load", "another row has this name but for capitals", "must have a name of its own")
        share = shares.get(name.casefold())
        if stated[name.casefold()] > 1:
            refuse("load", f"{stated[name.casefold()]} entries of [[mass_basis]] in {CARD}", "must have one at most")
        if kind == PERMANENT and share is not None and share.share != 1.0:
            refuse(
                "kind",
                f"permanent, with a share of {share.share:g} in [[mass_basis]] of {CARD}",
                "must have a share of 1",
            )
        value = _value(i, place, columns, refuse)
        if len(problems) == before and kind and place:
            counts = 1.0 if kind == PERMANENT else share.share if share else None
            loads.append(Load(name, kind, place, value, counts, share.clause if share else ""))
    return loads


def _choice(key: str, i: int, columns: Columns, choices: Sequence[str], refuse: _Refuse) -> str:
    """The choice that a cell makes, whatever its capitals; "" where it makes none."""
    if key not in columns.texts:
        return ""
    text = columns.texts[key][i]
    wanted = text.casefold().replace("facade", "façade")
    if wanted in choices:
        return wanted
    *most, last = choices
    refuse(key, f'{key} "{shorten(text)}"' if text else f"{key} is blank", f"must be {', '.join(most)} or {last}")
    return ""


def _value(i: int, place: str, columns: Columns, refuse: _Refuse) -> float:
    """The value of a load: of columns a unit weight, else a load per area."""
    needed, other = PER_AREA, PER_VOLUME
    if place and PLACES[place].value == "unit weight":
        needed, other = other, needed
    given = {key: columns.numbers[key][i] for key in (needed, other) if key in columns.numbers}
    blank = {key: not columns.texts[key][i] for key in given}
    if place and not blank.get(other, True):
        refuse(
            other,
            f"{other} given with place {place}",
            f"must be blank: a load with place {place} is given by its {needed}",
        )
    if place and blank.get(needed, True):
        refuse(needed, f"{needed} is blank", f"must be a number with place {place}")
    return given.get(needed, math.nan)


def _levels(rows: Columns, frame: Frame, problems: list[CellProblem]) -> None:
    """The rows of the floors are the levels of the storey table, in the same order."""
    file, wanted = rows.table.file, frame.level[::-1]
    both = {"centre x", "centre y"} & rows.numbers.keys()
    if len(both) == 1:
        (one,) = both
        problems.append(
            CellProblem(None, one, f"{file}: only {one} is given; must have centre x and centre y, or neither")
        )
    if LEVEL not in rows.texts or rows.names == wanted:
        return
    for i, name in enumerate(rows.names):
        if name and name not in wanted:
            error = InputError(file, rows.where(i, "level"), f"not in {STOREYS}", f"must be one of {_quoted(wanted)}")
            problems.append(CellProblem(rows.rows[i], LEVEL, str(error)))
    missing = [name for name in wanted if name not in rows.names]
    if missing:
        error = InputError(
            file, "", f"no row for level {_quoted(missing)}", f"must have a row for each level of {STOREYS}"
        )
        problems.append(CellProblem(None, LEVEL, str(error)))
    elif set(rows.names) == set(wanted) and len(rows.names) == len(wanted):
        error = InputError(file, "", f"levels in the order {_quoted(rows.names)}", f"must be in that of {STOREYS}")
        problems.append(CellProblem(None, LEVEL, f"{error}, {_quoted(wanted)}"))


def _masses(others: Columns, frame: Frame, problems: list[CellProblem]) -> None:
    """Each mass is on a level of the building, and given as mass or as weight."""
    file = others.table.file
    if len({"mass", "weight"} & others.numbers.keys()) != 1:
        what = f"{file}: columns mass and weight; must have exactly one of them"
        problems.append(CellProblem(None, None, what))
    for i, name in enumerate(others.names):
        if name and name not in frame.level:
            allowed = f"must be one of {_quoted(frame.level[::-1])}"
            error = InputError(file, f"row {others.table.row_number(others.rows[i])}", f'level "{name}"', allowed)
            problems.append(CellProblem(others.rows[i], LEVEL, str(error)))


def _floors(rows: Columns, loads: Sequence[Load], others: Columns | None, frame: Frame) -> Floors:
    n = len(rows.rows)

    def up(key: str) -> Array:
        """A column from the lowest level up, 0 where it is left out or blank."""
        return np.nan_to_num(np.array(rows.numbers.get(key, [0.0] * n))[::-1])

    radius = rows.numbers.get("radius of gyration", [math.nan] * n)[::-1]
    return Floors(
        level=frame.level,
        below=frame.below,
        storey_height=frame.storey_height,
        area=up(AREA),
        plan_x=up("plan x"),
        plan_y=up("plan y"),
        centre_x=up("centre x"),
        centre_y=up("centre y"),
        own_radius=tuple(None if math.isnan(r) else r for r in radius),
        load=tuple(loads),
        amount=np.stack([up(load.name) for load in loads], axis=1),
        other=() if others is None else tuple(_other(others, i) for i in range(len(others.rows))),
        stated=frame.stated,
    )


def _other(others: Columns, i: int) -> OtherMass:
    def number(key: str) -> float:
        value = others.numbers[key][i] if key in others.numbers else 0.0
        return 0.0 if math.isnan(value) else value

    weight = number("weight") if "weight" in others.numbers else number("mass") * STANDARD_GRAVITY
    sides = number("plan x"), number("plan y")
    return OtherMass(others.names[i], others.texts["item"][i], weight, number("x"), number("y"), *sides)


def _quoted(names: Sequence[str]) -> str:
    return ", ".join(f'"{name}"' for name in names)
