"""The storey table, storeys.csv: roof first, a row a level, read into core units from the base up."""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from calcsheet.core.chain import Chain
from calcsheet.core.lateral import Lateral
from calcsheet.core.springs import BaseSprings
from calcsheet.core.storeys import LevelBelow, Storeys
from calcsheet.job import card as job_card
from calcsheet.job.card import Card
from calcsheet.job.cells import ANY, NOT_NEGATIVE, POSITIVE, read_cell
from calcsheet.job.errors import InputError
from calcsheet.job.headings import (
    AREA,
    GRAVITY,
    LEVEL,
    OPTIONAL,
    Column,
    Ways,
    needed_stiffness,
    read_headings,
)
from calcsheet.job.numbers import decimal_mark
from calcsheet.job.planfile import LINES, PLAN, LineRow, laterals_of, read_lines, read_plan
from calcsheet.job.resisting import Resisting
from calcsheet.job.table import TextTable
from calcsheet.units import STANDARD_GRAVITY, display

FILE = "storeys.csv"


@dataclass(frozen=True)
class CellProblem:
    """One thing that is wrong.

    Parameters
    ----------
    row : int or None
        Index of the table's row, roof first; None for a heading, a whole column or another file.
    column : str or None
        Key of the column; None for a row or a file as a whole.
    message : str
        The sentence.
    """

    row: int | None
    column: str | None
    message: str


@dataclass(frozen=True, eq=False)
class StoreyReading:
    """What a storey table holds: every problem with it, or the storeys.

    Parameters
    ----------
    table : TextTable
        The table read.
    columns : tuple of Column
        Its columns.
    levels : tuple of str
        The level of each row; "" where it has no name.
    problems : tuple of CellProblem
        All that is wrong.
    notices : tuple of str
        What is left out, a sentence each.
    storeys : Storeys or None
        In core units; None where there is any problem.
    """

    table: TextTable
    columns: tuple[Column, ...]
    levels: tuple[str, ...]
    problems: tuple[CellProblem, ...]
    notices: tuple[str, ...]
    storeys: Storeys | None

    @property
    def rows(self) -> tuple[tuple[str, ...], ...]:
        """The cells of each row, a cell a column."""
        return tuple(cells[: len(self.columns)] for cells in self.table.rows)


def read_storeys(table: TextTable, card: Card, matrices: Mapping[str, TextTable] | None = None) -> StoreyReading:
    """Read a storey table.

    Parameters
    ----------
    table : TextTable
        The table of storeys.csv.
    card : Card
        The job card: base, directions, kind of model and stiffness sets.
    matrices : mapping of str to TextTable, optional
        The tables beside it: of the matrices that the card names, by direction; of rigid floors by file.

    Returns
    -------
    StoreyReading
        With every problem; nothing is raised for one.
    """
    beside = matrices or {}
    lines, wrong = read_lines(beside[LINES]) if card.model.lateral is None else ((), [])
    ways: dict[str, type[Lateral]] = dict.fromkeys(card.directions.analysed, card.model.lateral or Chain)
    if card.model.lateral is None:
        found, missing = laterals_of(table, lines, [name for name, basis in card.stiffness.items() if basis.own])
        ways, wrong = dict(found), [*wrong, *missing]
    headings = read_headings(table, card, ways)
    reader = _Reader(table, card, headings.columns, ways, lines)
    reader.problems += [CellProblem(None, None, str(error)) for error in wrong]
    reader.problems += [CellProblem(None, key, str(error)) for key, error in headings.problems]
    reader.check_rows()
    reader.read_columns()
    storeys = None
    if not reader.problems:
        with np.errstate(over="ignore"):  # what overflows is refused as infinite
            storeys = reader.build(beside)
    return StoreyReading(
        table,
        headings.columns,
        reader.names,
        tuple(reader.problems),
        (*headings.notices, *reader.notices),
        None if reader.problems else storeys,
    )


class _Reader:
    """One pass over a table: gathers problems on the way to the storeys."""

    def __init__(
        self, table: TextTable, card: Card, columns: tuple[Column, ...], ways: Ways, lines: Sequence[LineRow]
    ) -> None:
        self.table = table
        self.card = card
        self.ways = ways
        self.lines = lines
        optional = [key for key, (given, _, _) in needed_stiffness(card, ways).items() if given.optional]
        self.optional = (*OPTIONAL, *optional)
        self.columns = {column.key: (i, column) for i, column in enumerate(columns) if column.used}
        self.problems: list[CellProblem] = []
        self.notices: list[str] = []
        self.values: dict[str, dict[int, float]] = {}
        self.rows = [i for i, cells in enumerate(table.rows) if any(cell.strip() for cell in cells)]
        place = self.columns[LEVEL][0] if LEVEL in self.columns else None
        self.names = tuple("" if place is None else " ".join(cells[place].split()) for cells in table.rows)
        self.uses = Counter(self.names)
        base = " ".join(card.levels.effective_base.split())
        self.base_row = next((row for row in self.rows if base and self.names[row] == base), None)

    def refuse(self, row: int | None, column: str | None, error: InputError) -> None:
        self.problems.append(CellProblem(row, column, str(error)))

    def where(self, row: int) -> str:
        name = self.names[row]
        return f'level "{name}"' if name and self.uses[name] == 1 else f"row {self.number(row)}"

    def number(self, row: int) -> str:
        """A row's number as a spreadsheet shows it."""
        return str(self.table.row_number(row))

    def may_end(self, row: int) -> bool:
        """Whether a row needs no stiffness: below the effective base, or where a line of resistance may end."""
        return not self.is_above(row) or bool(self.lines)

    def is_above(self, row: int) -> bool:
        """Whether a row's level is above the effective base, so in the model."""
        return self.base_row is None or row < self.base_row

    def check_rows(self) -> None:
        file, width = self.table.file, len(self.table.headings)
        blank = [self.number(row) for row in sorted({*range(len(self.table.rows))} - {*self.rows})]
        if blank:
            plural = "s" if len(blank) > 1 else ""
            self.notices.append(f"{file}, row{plural} {_listed(blank)}: blank, not a level, and kept")
        if not self.rows:
            allowed = "must have a row for each level, roof first"
            self.refuse(None, None, InputError(file, "", "no levels", allowed))
        for row in self.rows:
            cells = self.table.rows[row]
            if any(cell.strip() for cell in cells[width:]):
                found = f"{len(cells)} cells"
                allowed = f"must be {width}, one for each heading"
                self.refuse(row, None, InputError(file, f"row {self.number(row)}", found, allowed))
        if LEVEL in self.columns:
            self.check_names()

    def check_names(self) -> None:
        for row in self.rows:
            name = self.names[row]
            if not name:
                error = InputError(self.table.file, self.where(row), "level is blank", "must have a name")
                self.refuse(row, LEVEL, error)
            elif row != self.names.index(name):
                same = [self.number(i) for i in self.rows if self.names[i] == name]
                found = f"named in rows {_listed(same)}"
                allowed = "each level needs its own name"
                self.refuse(row, LEVEL, InputError(self.table.file, f'level "{name}"', found, allowed))
        base = self.card.levels.effective_base
        if base.strip() and self.base_row is None:
            names = ", ".join(f'"{self.names[i]}"' for i in self.rows)
            self.refuse_base(f'got "{base}"', f'must be "" or a level of {self.table.file}: {names}')
        elif self.rows and self.base_row == self.rows[0]:
            self.refuse_base(f'got "{base}", the top level', "must have at least one level above it")

    def refuse_base(self, found: str, allowed: str) -> None:
        self.refuse(None, LEVEL, InputError(job_card.FILE, "levels.effective_base", found, allowed))

    def read_columns(self) -> None:
        for key, (place, column) in self.columns.items():
            if column.unit is None:
                continue
            mark = decimal_mark((self.table.rows[row][place] for row in self.rows), self.table.delimiter)
            numbers = self.values[key] = {}
            for row in self.rows:
                try:
                    numbers[row] = read_cell(
                        self.table.rows[row][place],
                        self.table.file,
                        self.where(row),
                        key,
                        column.unit,
                        mark,
                        self.allowed(row, key),
                        may_be_blank=key in self.optional or (column.direction is not None and self.may_end(row)),
                    )
                except InputError as error:
                    self.refuse(row, key, error)
        self.check_elevations()
        for key in OPTIONAL if self.lines else self.optional:
            self.check_whole(key)
        self.check_gravity()

    def allowed(self, row: int, key: str) -> str:
        """What a number of a column must be in a row."""
        if key == "elevation":
            return ANY
        if key == GRAVITY or (key in ("mass", "weight") and not self.is_above(row)):
            return NOT_NEGATIVE
        return POSITIVE

    def check_whole(self, key: str) -> None:
        """A column that may be left out is given for all levels of the model, or for none."""
        above = {row: number for row, number in self.values.get(key, {}).items() if self.is_above(row)}
        blank = [row for row, number in above.items() if np.isnan(number)]
        if blank and len(blank) == sum(map(self.is_above, self.rows)):
            heading = self.columns[key][1].heading
            self.notices.append(f'{self.table.file}, column "{heading}" is blank: not used, and kept')
            return
        for row in blank:
            allowed = "must be given for each level above the effective base, or for none"
            self.refuse(row, key, InputError(self.table.file, self.where(row), f"{key} is blank", allowed))

    def check_gravity(self) -> None:
        """Gravity loads are given where they are to be in the stiffness."""
        numbers = [self.values.get(GRAVITY, {}).get(row, math.nan) for row in self.rows if self.is_above(row)]
        if self.second_order and all(map(math.isnan, numbers)):
            allowed = f'must be false, or {self.table.file} must have a column "{GRAVITY}"'
            error = InputError(
                job_card.FILE, "basis.second_order_in_stiffness", "got true without gravity loads", allowed
            )
            self.refuse(None, None, error)

    @property
    def second_order(self) -> bool:
        """Whether the gravity loads are to be in the stiffness."""
        return (self.card.basis or {}).get("second_order_in_stiffness") is True

    def check_elevations(self) -> None:
        """Elevations fall from row to row, and stay above the foot of the lowest storey."""
        numbers = self.values.get("elevation", {})
        if not numbers:
            return
        place, column = self.columns["elevation"]
        symbol = column.unit.symbol if column.unit else ""

        def written(row: int) -> str:
            return f"{self.table.rows[row][place].strip()} {symbol}"

        def refuse(row: int, allowed: str) -> None:
            found = f"elevation {written(row)}"
            self.refuse(row, "elevation", InputError(self.table.file, self.where(row), found, allowed))

        rows = list(numbers)
        for above, row in pairwise(rows):
            if numbers[row] >= numbers[above]:
                refuse(row, f"must be below {written(above)}, that of {self.where(above)} above it")
        if rows[-1] == self.rows[-1] and numbers[rows[-1]] <= self.foot:
            unit = display("elevation", self.card.units.system).symbol
            given = f"{self.card.levels.base_elevation:g} {unit}"
            refuse(rows[-1], f"must be above {given}, levels.base_elevation in {job_card.FILE}")

    @property
    def foot(self) -> float:
        """Elevation of the foot of the lowest storey [m]."""
        return self.card.levels.base_elevation * display("elevation", self.card.units.system).factor

    def from_base(self, key: str) -> np.ndarray:
        """A column's numbers from the lowest row up, NaN where blank."""
        return np.array([self.values[key][row] for row in self.rows[::-1]])

    def if_given(self, key: str, below: int) -> np.ndarray | None:
        """The numbers of a column that may be left out, for the levels of the model."""
        numbers = self.from_base(key)[below:] if key in self.values else None
        return None if numbers is None or np.isnan(numbers).any() else numbers

    def build(self, matrices: Mapping[str, TextTable]) -> Storeys | None:
        """Put the storeys together, with the last problems that only the whole shows."""
        levels = [self.names[row] for row in self.rows[::-1]]
        if "elevation" in self.values:
            elevation = self.from_base("elevation")
            height = np.diff(elevation, prepend=self.foot)
        else:
            height = self.from_base("storey height")
            elevation = self.foot + np.cumsum(height)
        weight = "weight" in self.values
        mass = self.from_base("weight") / STANDARD_GRAVITY if weight else self.from_base("mass")
        n = sum(not self.is_above(row) for row in self.rows)
        plan = None
        if self.lines:
            plan, problems = read_plan(matrices[PLAN], self.lines, levels[n:])
            self.problems += [CellProblem(None, None, str(error)) for error in problems]

        def column(key: str) -> np.ndarray | None:
            return self.from_base(key)[n:] if key in self.values else None

        resisting = Resisting(
            self.card, self.ways, self.lines, levels[n:], height[n:], column, self.table.file, matrices
        )
        stiffness, wrong = resisting.sets()
        self.problems += [CellProblem(None, key, text) for key, text in wrong]
        if self.problems:
            return None
        return Storeys(
            base=levels[n - 1] if n else "base",
            base_elevation=float(elevation[n - 1]) if n else self.foot,
            level=tuple(levels[n:]),
            elevation=elevation[n:],
            storey_height=height[n:],
            mass=mass[n:],
            below=tuple(LevelBelow(levels[i], float(elevation[i]), float(mass[i])) for i in range(n)),
            stiffness=stiffness,
            forces=self.card.serves.forces,
            drifts=self.card.serves.drifts,
            given="mass" if "mass" in self.values else "weight",
            gravity=self.if_given(GRAVITY, n),
            area=self.if_given(AREA, n),
            springs=self.springs(),
            second_order=self.second_order,
            plan=plan,
        )

    def springs(self) -> dict[str, BaseSprings]:
        """The springs at the base of each direction that has any."""
        system = self.card.units.system
        units = [display(quantity, system).factor for quantity in ("stiffness", "rotational stiffness", "ratio")]
        found = {}
        for d in self.card.directions.analysed:
            given = [None if v is None else v * unit for v, unit in zip(self.card.base.of(d), units, strict=True)]
            if any(v is not None for v in given):
                found[d] = BaseSprings(*given)
        return found


def _listed(words: list[str]) -> str:
    return " and ".join(filter(None, [", ".join(words[:-1]), words[-1]]))
