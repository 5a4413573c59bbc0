"""What a storey table holds, as read: every problem with it, or the storeys."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from calcsheet.core.storeys import Storeys
from calcsheet.job.errors import CellProblem
from calcsheet.job.headings import Column, Ways
from calcsheet.job.table import TextTable


@dataclass(frozen=True, eq=False)
class TakenOff:
    """What a take-off gives for a column that the storey table then doesn't have.

    Parameters
    ----------
    file : str
        The table of the take-off.
    numbers : (n,) array
        A number for each level in core units, roof first; NaN where the take-off gives none or can't be read.
    """

    file: str
    numbers: np.ndarray


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
    used : tuple of int
        Indices of the rows that are levels, roof first.
    above : int
        How many of these are above the effective base.
    foot : float
        Elevation of the foot of the lowest storey [m].
    numbers : mapping of str to (n,) array
        The numbers of the levels in core units, roof first, by column key; NaN where a cell is blank or wrong.
    ways : mapping of str to type
        What resists along each direction, or along each line of resistance that its columns describe.
    taken : mapping of str to TakenOff
        What comes from take-offs instead, by the key that its column would have.
    """

    table: TextTable
    columns: tuple[Column, ...]
    levels: tuple[str, ...]
    problems: tuple[CellProblem, ...]
    notices: tuple[str, ...]
    storeys: Storeys | None
    used: tuple[int, ...]
    above: int
    foot: float
    numbers: Mapping[str, np.ndarray]
    ways: Ways
    taken: Mapping[str, TakenOff]

    @property
    def rows(self) -> tuple[tuple[str, ...], ...]:
        """The cells of each row, a cell a column."""
        return tuple(cells[: len(self.columns)] for cells in self.table.rows)
