"""The plan of rigid floors: plan.csv, a row a level, and lines.csv, a row a line of resistance."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from calcsheet.core.lateral import LATERALS, Lateral
from calcsheet.core.storeys import Plan, PlanLine
from calcsheet.job.cells import ANY, POSITIVE, read_cell
from calcsheet.job.errors import InputError
from calcsheet.job.headings import LEVEL, heading_unit, split_heading
from calcsheet.job.numbers import decimal_mark
from calcsheet.job.table import TextTable
from calcsheet.units import Unit

PLAN, LINES = "plan.csv", "lines.csv"
CENTRE = ("centre of mass x", "centre of mass y")
GYRATION = "radius of gyration"
EXTENT = ("plan x from", "plan x to", "plan y from", "plan y to")
PLACE = ("x", "y")
NAME, DIRECTION, FILE = "line", "direction", "file"
QUANTITY = {DIRECTION: "angle"}
"""Columns that are no lengths."""


@dataclass(frozen=True)
class LineRow:
    """A row of lines.csv: the line, and the file of its matrix where it has one."""

    line: PlanLine
    file: str


class _Sheet:
    """A table of named rows with columns of numbers, and all that is wrong with it."""

    def __init__(self, table: TextTable, key: str, needed: Sequence[str], optional: Sequence[str] = ()) -> None:
        self.table, self.key = table, key
        self.problems: list[InputError] = []
        self.places: dict[str, int] = {}
        self.units: dict[str, Unit] = {}
        self.rows = [i for i, cells in enumerate(table.rows) if any(cell.strip() for cell in cells)]
        texts = (key, FILE)
        for place, heading in enumerate(table.headings):
            name, unit = split_heading(heading)
            name = name.casefold()
            if name not in (*texts, *needed, *optional):
                continue
            if name in self.places:
                self.refuse(f'heading "{heading}"', "given twice", "must be given once")
                continue
            self.places[name] = place
            if name not in texts:
                try:
                    self.units[name] = heading_unit(table.file, heading, unit, QUANTITY.get(name, "length"))
                except InputError as error:
                    self.problems.append(error)
        for name in (key, *needed):
            if name not in self.places:
                self.refuse("", f'no column "{name}"', "must have one")
        names = self.texts(key)
        for row, name in zip(self.rows, names, strict=True):
            if not name:
                self.refuse(f"row {table.row_number(row)}", f"{key} is blank", "must have a name")
            elif names.count(name) > 1 and names.index(name) == self.rows.index(row):
                self.refuse(f'{key} "{name}"', "named in more than one row", f"each {key} needs its own name")

    def refuse(self, where: str, found: str, allowed: str) -> None:
        self.problems.append(InputError(self.table.file, where, found, allowed))

    def texts(self, name: str) -> list[str]:
        """The texts of a column, a cell a row; blank where there is none."""
        place = self.places.get(name)
        return [" ".join(self.table.rows[row][place].split()) if place is not None else "" for row in self.rows]

    def numbers(self, name: str, allowed: str = ANY, may_be_blank: bool = False) -> list[float]:
        """The numbers of a column in core units, a cell a row; NaN where there is none, or it is refused."""
        if name not in self.units:
            return [math.nan] * len(self.rows)
        place = self.places[name]
        mark = decimal_mark((self.table.rows[row][place] for row in self.rows), self.table.delimiter)
        found = []
        for row, said in zip(self.rows, self.texts(self.key), strict=True):
            where, cell = f'{self.key} "{said}"', self.table.rows[row][place]
            try:
                number = read_cell(cell, self.table.file, where, name, self.units[name], mark, allowed, may_be_blank)
            except InputError as error:
                self.problems.append(error)
                number = math.nan
            found.append(number)
        return found


def read_lines(table: TextTable) -> tuple[tuple[LineRow, ...], list[InputError]]:
    """Read the lines of resistance.

    Parameters
    ----------
    table : TextTable
        Columns ``line``, ``x [m]``, ``y [m]``, ``direction [°]`` from x towards y, and, where a line's stiffness is a
        matrix, ``file``.

    Returns
    -------
    lines : tuple of LineRow
        In the order of the rows.
    problems : list of InputError
        Every problem.
    """
    sheet = _Sheet(table, NAME, (*PLACE, DIRECTION))
    x, y, angle = (sheet.numbers(name) for name in (*PLACE, DIRECTION))
    names, files = sheet.texts(NAME), sheet.texts(FILE)
    for name in names:
        if set(name) & set("[]"):
            sheet.refuse(f'line "{name}"', "a square bracket", "must have a name without any")
    if not sheet.rows:
        sheet.refuse("", "no lines", "must have a row for each line of resistance")
    made = [PlanLine(*values) for values in zip(names, x, y, angle, strict=True)]
    return tuple(LineRow(line, file) for line, file in zip(made, files, strict=True)), sheet.problems


def read_plan(
    floors: TextTable, lines: Sequence[LineRow], levels: Sequence[str]
) -> tuple[Plan | None, list[InputError]]:
    """Read the plan of the floors.

    Parameters
    ----------
    floors : TextTable
        Columns ``level``, ``centre of mass x [m]``, ``centre of mass y [m]``, ``radius of gyration [m]`` and, all or
        none, ``plan x from [m]``, ``plan x to [m]``, ``plan y from [m]``, ``plan y to [m]``.
    lines : sequence of LineRow
        The lines of resistance.
    levels : sequence of str
        The levels of the model, lowest first; a row for each of them is asked for, others are left.

    Returns
    -------
    plan : Plan or None
        None where there is any problem.
    problems : list of InputError
        Every problem.
    """
    sheet = _Sheet(floors, LEVEL, (*CENTRE, GYRATION), EXTENT)
    x, y = (sheet.numbers(name) for name in CENTRE)
    gyration = sheet.numbers(GYRATION, POSITIVE)
    extent = [sheet.numbers(name) for name in EXTENT]
    given = [name for name in EXTENT if name in sheet.places]
    if given and len(given) < len(EXTENT):
        missing = next(name for name in EXTENT if name not in given)
        sheet.refuse("", f'no column "{missing}"', "must have all four columns of the plan's extent, or none")
    names = sheet.texts(LEVEL)
    for level in levels:
        if level not in names:
            sheet.refuse(f'level "{level}"', "no row", "must have a row for each level of the model")
    if sheet.problems:
        return None, sheet.problems
    order = [names.index(level) for level in levels]
    edges = np.array(extent).T[order] if given else None
    if edges is not None:
        for level, row in zip(levels, edges, strict=True):
            if not (row[0] < row[1] and row[2] < row[3]):
                found = f"plan from {row[0]:g} to {row[1]:g} m in x and from {row[2]:g} to {row[3]:g} m in y"
                sheet.refuse(f'level "{level}"', found, "must run upwards in x and in y")
    if sheet.problems:
        return None, sheet.problems
    centre = np.array([x, y]).T[order]
    return Plan(centre, np.array(gyration)[order], tuple(row.line for row in lines), edges), []


def laterals_of(
    table: TextTable, lines: Sequence[LineRow], own: Sequence[str]
) -> tuple[Mapping[str, type[Lateral]], list[InputError]]:
    """The lateral model of each line that has no file: which one its columns in the storey table make.

    Parameters
    ----------
    table : TextTable
        The storey table.
    lines : sequence of LineRow
        The lines.
    own : sequence of str
        Names of the stiffness sets that have columns of their own.
    """
    names = {split_heading(heading)[0].casefold() for heading in table.headings}
    by_columns = [lateral for lateral in LATERALS if lateral.columns]
    found: dict[str, type[Lateral]] = {}
    problems = []
    for row in lines:
        if row.file:
            continue
        name = row.line.name
        headings = {lateral: f"{lateral.columns[0].heading} {name}" for lateral in by_columns}
        there = [
            lateral
            for lateral, heading in headings.items()
            if names & {" ".join(f"{heading} {of}".split()).casefold() for of in ("", *own)}
        ]
        if len(there) != 1:
            wanted = " or ".join(f'"{heading}"' for heading in headings.values())
            what = "no column of its stiffness" if not there else "columns of two kinds of stiffness"
            allowed = f"must have one of {wanted}, or a file in {LINES}"
            problems.append(InputError(table.file, f'line "{name}"', what, allowed))
        else:
            found[name] = there[0]
    return found, problems
