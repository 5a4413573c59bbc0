"""The cells of the storey table, storeys.csv, read with every problem; and the frame of levels and heights that they give."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass, replace
from itertools import pairwise

import numpy as np

from calcsheet.core.alongside import elevations, heights
from calcsheet.core.arrays import Array
from calcsheet.job import card as job_card
from calcsheet.job.card import Card
from calcsheet.job.cells import ANY, NOT_NEGATIVE, POSITIVE, read_cell
from calcsheet.job.errors import CellProblem, InputError
from calcsheet.job.headings import GRAVITY, LEVEL, OPTIONAL, Column, read_headings
from calcsheet.job.numbers import decimal_mark
from calcsheet.job.table import TextTable
from calcsheet.units import STANDARD_GRAVITY, display

FILE = "storeys.csv"
_FRAME, _MASS = (LEVEL, "storey height", "elevation"), ("mass", "weight")


@dataclass(frozen=True, eq=False)
class Frame:
    """What the storey table tells the take-offs, the lowest level first.

    Parameters
    ----------
    level : tuple of str
        Every level.
    below : int
        How many lie at or below the effective base.
    storey_height : (n,) array
        Height of the storey below each [m].
    stated : (n,) array or None
        Masses that the table itself gives [t].
    """

    level: tuple[str, ...]
    below: int
    storey_height: Array
    stated: Array | None


class StoreyCells:
    """The cells of a storey table: `values` by column key and row in core units, and every problem on the way to them.

    Parameters
    ----------
    table : TextTable
        The table of storeys.csv.
    card : Card
        The job card.
    columns : tuple of Column
        Its columns.
    optional : tuple of str
        Keys of the columns of stiffness that may be left out.
    lines_end : bool
        Whether columns of stiffness are those of lines of resistance, which may end below the top.
    """

    def __init__(
        self,
        table: TextTable,
        card: Card,
        columns: tuple[Column, ...],
        optional: tuple[str, ...] = (),
        lines_end: bool = False,
    ) -> None:
        self.table = table
        self.card = card
        self.optional = (*OPTIONAL, *optional)
        self.lines_end = lines_end
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
        self.check_rows()
        self.read_columns()

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
        return self.lines_end or not self.is_above(row)

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
        for key in OPTIONAL if self.lines_end else self.optional:
            self.check_whole(key)

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
        if blank and len(blank) == len(self.rows_above):
            heading = self.columns[key][1].heading
            self.notices.append(f'{self.table.file}, column "{heading}" is blank: not used, and kept')
            return
        for row in blank:
            allowed = "must be given for each level above the effective base, or for none"
            self.refuse(row, key, InputError(self.table.file, self.where(row), f"{key} is blank", allowed))

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

    def numbers(self) -> dict[str, Array]:
        """Every column's numbers, roof first, NaN where the cell is blank or wrong."""
        wrong = {(problem.row, problem.column) for problem in self.problems}
        return {
            key: np.array([np.nan if (row, key) in wrong else numbers.get(row, np.nan) for row in self.rows])
            for key, numbers in self.values.items()
        }

    def from_base(self, key: str) -> Array:
        """A column's numbers from the lowest row up, NaN where blank."""
        return np.array([self.values[key][row] for row in self.rows[::-1]])

    def if_given(self, key: str, below: int) -> Array | None:
        """The numbers of a column that may be left out, for the levels of the model."""
        numbers = self.from_base(key)[below:] if key in self.values else None
        return None if numbers is None or np.isnan(numbers).any() else numbers

    @property
    def below(self) -> int:
        """How many levels lie at or below the effective base."""
        return len(self.rows) - len(self.rows_above)

    @property
    def rows_above(self) -> list[int]:
        """The rows of the levels of the model."""
        return [row for row in self.rows if self.is_above(row)]

    @property
    def levels(self) -> tuple[str, ...]:
        """Names of all levels, the lowest first."""
        return tuple(self.names[row] for row in self.rows[::-1])

    def heights(self) -> tuple[Array, Array]:
        """Elevations and storey heights from the lowest level up [m]."""
        if "elevation" in self.values:
            elevation = self.from_base("elevation")
            return elevation, heights(elevation, self.foot)
        height = self.from_base("storey height")
        return elevations(height, self.foot), height

    def mass(self) -> Array:
        """Masses from the lowest level up [t], as mass or weight gives them."""
        if "weight" in self.values:
            return self.from_base("weight") / STANDARD_GRAVITY
        return self.from_base("mass")


def read_frame(table: TextTable, card: Card) -> Frame | None:
    """Read the levels and storey heights of a storey table, and the masses that it states, whatever else it lacks.

    Parameters
    ----------
    table : TextTable
        The table of storeys.csv.
    card : Card
        The job card.

    Returns
    -------
    Frame or None
        None where levels or storey heights can't be read; without masses where these can't be.
    """
    columns = read_headings(table, card, {}).columns
    cells = StoreyCells(table, card, tuple(replace(c, used=c.used and c.key in _FRAME + _MASS) for c in columns))
    wrong = {problem.column for problem in cells.problems}
    if not wrong <= {*_MASS} or LEVEL not in cells.columns or not cells.rows:
        return None
    if len({"storey height", "elevation"} & cells.values.keys()) != 1:
        return None
    stated = len({*_MASS} & cells.values.keys()) == 1 and not wrong
    return Frame(cells.levels, cells.below, cells.heights()[1], cells.mass() if stated else None)


def _listed(words: list[str]) -> str:
    return " and ".join(filter(None, [", ".join(words[:-1]), words[-1]]))
