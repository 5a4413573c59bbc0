"""What resists along each direction or line of resistance, from its columns or its matrix, set by set."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from calcsheet.core.arrays import Array
from calcsheet.core.errors import ModelError
from calcsheet.core.lateral import Lateral
from calcsheet.core.storeys import StiffnessSet
from calcsheet.job.card import Card
from calcsheet.job.deflectionfile import holds_deflections, read_deflections
from calcsheet.job.headings import Ways, stiffness_key
from calcsheet.job.matrixfile import matrix_kind, read_matrix
from calcsheet.job.planfile import LineRow
from calcsheet.job.table import TextTable

Problem = tuple[str | None, str]
"""Key of a column, or None, and the sentence."""


@dataclass(frozen=True, eq=False)
class Resisting:
    """All that the stiffness sets are made from.

    Parameters
    ----------
    card : Card
        The job card.
    ways : mapping of str to type
        The lateral model of each direction, or of each line that its columns describe.
    lines : sequence of LineRow
        The lines of resistance; none of planar models.
    levels : sequence of str
        The n levels of the model, lowest first.
    height : (n,) array
        Storey heights [m].
    column : callable
        From a column's key to its numbers, (n,), NaN where blank; None where there is no such column.
    file : str
        The file of the columns, for messages.
    tables : mapping of str to TextTable
        The tables of matrices, by direction or file.
    """

    card: Card
    ways: Ways
    lines: Sequence[LineRow]
    levels: Sequence[str]
    height: Array
    column: Callable[[str], Array | None]
    file: str
    tables: Mapping[str, TextTable]

    def sets(self) -> tuple[tuple[StiffnessSet, ...], list[Problem]]:
        """The stiffness sets and every problem; with any, they are not complete."""
        files = {row.line.name: row.file for row in self.lines if row.file}
        if self.card.model.by_file:
            files = {d: d for d in self.ways}
        problems: list[Problem] = []
        given: dict[str, Lateral | None] = {}
        for way, file in files.items():
            given[way], wrong = self._from_file(self.tables[file])
            problems += [(None, text) for text in wrong]
        sets = []
        for name, basis in self.card.stiffness.items():
            lateral: dict[str, Lateral] = {}
            for way in [row.line.name for row in self.lines] or self.ways:
                keys = {} if way in files else self._keys(way, name)
                try:
                    made = self._from_columns(way, keys) if keys else given[way]
                    if made is not None:
                        lateral[way] = made.times(basis.factor_of(way) or 1.0)
                except ModelError as error:
                    file = self.tables[files[way]].file if way in files else self.file
                    problems.append((next(iter(keys.values()), None), f"{file}, {error}"))
            sets.append(StiffnessSet(name, basis.ground, lateral))
        return tuple(sets), problems

    def _keys(self, way: str, set_name: str) -> dict[str, str]:
        """The columns of one direction or line in a set, by field of its lateral model."""
        own = set_name if self.card.stiffness[set_name].own else None
        return {given.field: stiffness_key(given, way, own) for given in self.ways[way].columns}

    def _from_columns(self, way: str, keys: Mapping[str, str]) -> Lateral:
        values: dict[str, Array | None] = {}
        ends = 0
        for field, key in keys.items():
            numbers = self.column(key)
            if numbers is None or (values and np.isnan(numbers).all()):
                values[field] = None  # the first column is needed, others may be left out
                continue
            there = int((~np.isnan(numbers)).sum()) if self.lines else numbers.size  # only lines end below the top
            if self.lines and (np.isnan(numbers[:there]).any() or there == 0 or (values and there != ends)):
                allowed = (
                    "must be given from the lowest storey up, and be blank only above the level where the line ends"
                )
                raise ModelError(f"column {key}", f"{there} of {numbers.size} storeys in no such order", allowed)
            ends = ends or there
            values[field] = numbers[:there]
        return self.ways[way].of(values, self.height[:ends])

    def _from_file(self, table: TextTable) -> tuple[Lateral | None, list[str]]:
        kind = self.card.model.lateral or matrix_kind(table)
        rows = sum(any(cell.strip() for cell in cells) for cells in table.rows)
        levels = self.levels[:rows] if self.lines else self.levels  # a line may end below the top
        if kind.table == "flexibility" and holds_deflections(table):
            matrix, problems = read_deflections(table, levels)
        else:
            matrix, problems = read_matrix(table, levels, kind.table)
        if problems:
            return None, [str(error) for error in problems]
        try:
            return kind.of({"matrix": matrix}, np.empty(0)), []
        except ModelError as error:
            return None, [f"{table.file}, {error}"]
