"""The storey table, storeys.csv: roof first, a row a level, read into core units from the base up."""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping
from dataclasses import dataclass, replace
from itertools import pairwise

import numpy as np

from calcsheet.core.chain import Chain
from calcsheet.core.errors import ModelError
from calcsheet.core.masstakeoff import take_off
from calcsheet.core.matrix import FlexibilityMatrix, StiffnessMatrix
from calcsheet.core.storeys import Lateral, LevelBelow, StiffnessSet, Storeys
from calcsheet.job import card as job_card
from calcsheet.job.card import CHAIN, Card
from calcsheet.job.cells import ANY, NOT_NEGATIVE, POSITIVE, read_cell
from calcsheet.job.errors import CellProblem, InputError
from calcsheet.job.headings import AREA, GRAVITY, LEVEL, OPTIONAL, Column, read_headings, stiffness_key
from calcsheet.job.matrixfile import read_matrix
from calcsheet.job.numbers import decimal_mark
from calcsheet.job.table import TextTable
from calcsheet.job.takeofffile import Frame, TakeoffReading, read_takeoff
from calcsheet.units import STANDARD_GRAVITY, display

FILE = "storeys.csv"
TAKE_OFF = "take-off"
"""How the masses are said to be given where they come from the mass take-off."""
_FRAME, _MASS = (LEVEL, "storey height", "elevation"), ("mass", "weight")


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


def read_storeys(
    table: TextTable,
    card: Card,
    matrices: Mapping[str, TextTable] | None = None,
    takeoff: TakeoffReading | None = None,
) -> StoreyReading:
    """Read a storey table.

    Parameters
    ----------
    table : TextTable
        The table of storeys.csv.
    card : Card
        The job card: base, directions, kind of model and stiffness sets.
    matrices : mapping of str to TextTable, optional
        By direction, the tables of the matrices that the card names.
    takeoff : TakeoffReading, optional
        The mass take-off, needed where the card takes the masses from it.

    Returns
    -------
    StoreyReading
        With every problem; nothing is raised for one.
    """
    headings = read_headings(table, card)
    reader = _Reader(table, card, headings.columns, takeoff)
    reader.problems += [CellProblem(None, key, str(error)) for key, error in headings.problems]
    if card.masses is not None:
        takeoff = takeoff or read_takeoff({}, card, None)
        reader.problems += [CellProblem(None, None, message) for message in takeoff.messages]
    reader.check_rows()
    reader.read_columns()
    storeys = None
    if not reader.problems:
        with np.errstate(over="ignore"):  # what overflows is refused as infinite
            storeys = reader.build(matrices or {})
    return StoreyReading(
        table,
        headings.columns,
        reader.names,
        tuple(reader.problems),
        (*headings.notices, *reader.notices),
        None if reader.problems else storeys,
    )


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
    columns = read_headings(table, card).columns
    reader = _Reader(table, card, tuple(replace(c, used=c.used and c.key in _FRAME + _MASS) for c in columns))
    reader.check_rows()
    reader.read_columns()
    wrong = {problem.column for problem in reader.problems}
    if not wrong <= {*_MASS} or LEVEL not in reader.columns or not reader.rows:
        return None
    if len({"storey height", "elevation"} & reader.values.keys()) != 1:
        return None
    stated = len({*_MASS} & reader.values.keys()) == 1 and not wrong
    below = sum(not reader.is_above(row) for row in reader.rows)
    levels = tuple(reader.names[row] for row in reader.rows[::-1])
    return Frame(levels, below, reader.heights()[1], reader.mass() if stated else None)


class _Reader:
    """One pass over a table: gathers problems on the way to the storeys."""

    def __init__(
        self, table: TextTable, card: Card, columns: tuple[Column, ...], takeoff: TakeoffReading | None = None
    ) -> None:
        self.table = table
        self.card = card
        self.floors = None if card.masses is None or takeoff is None else takeoff.floors
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
                        may_be_blank=key in OPTIONAL or (column.quantity == "stiffness" and not self.is_above(row)),
                    )
                except InputError as error:
                    self.refuse(row, key, error)
        self.check_elevations()
        for key in OPTIONAL:
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
        if blank and len(blank) == sum(map(self.is_above, self.rows)):
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
        elevation, height = self.heights()
        try:
            mass = self.mass()
        except ModelError as error:
            self.problems.append(CellProblem(None, None, f"mass take-off, {error}"))
            return None
        n = sum(not self.is_above(row) for row in self.rows)
        stiffness = self.chains(n) if self.card.model.kind == CHAIN else self.matrices(levels[n:], matrices)
        if stiffness is None:
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
            given=TAKE_OFF if self.floors else "mass" if "mass" in self.values else "weight",
            gravity=self.if_given(GRAVITY, n),
            area=self.floors.area[n:] if self.floors and AREA not in self.values else self.if_given(AREA, n),
        )

    def heights(self) -> tuple[np.ndarray, np.ndarray]:
        """Elevations and storey heights from the lowest level up [m]."""
        if "elevation" in self.values:
            elevation = self.from_base("elevation")
            return elevation, np.diff(elevation, prepend=self.foot)
        height = self.from_base("storey height")
        return self.foot + np.cumsum(height), height

    def mass(self) -> np.ndarray:
        """Masses from the lowest level up [t], from the take-off where it gives them."""
        if self.floors is not None:
            return take_off(self.floors).mass
        if "weight" in self.values:
            return self.from_base("weight") / STANDARD_GRAVITY
        return self.from_base("mass")

    def chains(self, below: int) -> tuple[StiffnessSet, ...] | None:
        sets = []
        for name, basis in self.card.stiffness.items():
            lateral: dict[str, Lateral] = {}
            for d in self.card.directions.analysed:
                key = stiffness_key(d, name if basis.own else None)
                try:
                    lateral[d] = Chain(storey=self.from_base(key)[below:] * (basis.factor_of(d) or 1.0))
                except ModelError as error:
                    self.problems.append(CellProblem(None, key, f"{self.table.file}, {error}"))
            sets.append(StiffnessSet(name, basis.ground, lateral))
        return None if self.problems else tuple(sets)

    def matrices(self, levels: list[str], tables: Mapping[str, TextTable]) -> tuple[StiffnessSet, ...] | None:
        flexible = self.card.model.kind == FlexibilityMatrix.kind
        given = {}
        for d in self.card.directions.analysed:
            matrix, problems = read_matrix(tables[d], levels, "flexibility" if flexible else "stiffness")
            self.problems += [CellProblem(None, None, str(error)) for error in problems]
            given[d] = matrix
        if self.problems:
            return None
        sets = []
        for name, basis in self.card.stiffness.items():
            lateral: dict[str, Lateral] = {}
            for d, matrix in given.items():
                factor = basis.factor_of(d) or 1.0
                try:
                    if flexible:
                        lateral[d] = FlexibilityMatrix(matrix=matrix / factor)
                    else:
                        lateral[d] = StiffnessMatrix(matrix=matrix * factor)
                except ModelError as error:
                    self.problems.append(CellProblem(None, None, f"{tables[d].file}, {error}"))
            sets.append(StiffnessSet(name, basis.ground, lateral))
        return None if self.problems else tuple(sets)


def _listed(words: list[str]) -> str:
    return " and ".join(filter(None, [", ".join(words[:-1]), words[-1]]))
