"""A lateral stiffness or flexibility matrix from its file: level names along the top and down the side."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from calcsheet.core.arrays import Array
from calcsheet.core.matrix import FlexibilityMatrix, StiffnessMatrix
from calcsheet.job.cells import ANY, read_cell
from calcsheet.job.errors import InputError
from calcsheet.job.headings import heading_unit, split_heading
from calcsheet.job.numbers import decimal_mark
from calcsheet.job.table import TextTable
from calcsheet.units import UnitError, parse_unit


def read_matrix(table: TextTable, levels: Sequence[str], quantity: str) -> tuple[Array, list[InputError]]:
    """Read a matrix.

    Parameters
    ----------
    table : TextTable
        The first heading gives the unit, such as ``[kN/m]``, the others name the levels; so do the rows'
        first cells, in the same order: roof first or base first.
    levels : sequence of str
        The n levels of the model, lowest first.
    quantity : str
        "stiffness" or "flexibility".

    Returns
    -------
    matrix : (n, n) array
        In core units, lowest level first; zero where a cell is refused.
    problems : list of InputError
        Every problem.
    """
    n = len(levels)
    matrix = np.zeros((n, n))
    problems: list[InputError] = []
    rows = [cells for cells in table.rows if any(cell.strip() for cell in cells)]
    width = max(_width(cells) for cells in (table.headings, *rows))
    columns = [_name(cell) for cell in (*table.headings, *("",) * width)[1:width]]
    sides = {"columns": columns, "rows": [_name(cells[0]) for cells in rows]}
    first = table.headings[0]
    try:
        unit = heading_unit(table.file, first, split_heading(first)[1], quantity)
    except InputError as error:
        return matrix, [error, *_wrong_names(table.file, sides, levels)]
    problems += _wrong_names(table.file, sides, levels)
    if problems:
        return matrix, problems
    step = 1 if sides["rows"] == list(levels) else -1
    mark = decimal_mark((cell for cells in rows for cell in cells[1 : n + 1]), table.delimiter)
    for i, cells in zip(range(n)[::step], rows, strict=True):
        for j, text in zip(range(n)[::step], cells[1 : n + 1], strict=True):
            where = f'row "{levels[i]}", column "{levels[j]}"'
            try:
                matrix[i, j] = read_cell(text, table.file, where, quantity, unit, mark, ANY)
            except InputError as error:
                problems.append(error)
    return matrix, problems


def matrix_kind(table: TextTable) -> type[StiffnessMatrix] | type[FlexibilityMatrix]:
    """The matrix that a table holds, by the unit of its first heading: a stiffness, else a flexibility or deflections."""
    try:
        parse_unit(split_heading(table.headings[0])[1] or "", "stiffness")
    except UnitError:
        return FlexibilityMatrix
    return StiffnessMatrix


def _width(cells: Sequence[str]) -> int:
    """Number of cells up to the last that isn't blank."""
    return max((i for i, cell in enumerate(cells, 1) if cell.strip()), default=0)


def _name(cell: str) -> str:
    return " ".join(cell.split())


def _wrong_names(file: str, sides: dict[str, list[str]], levels: Sequence[str]) -> list[InputError]:
    wanted = _quoted(levels[::-1])
    for side, names in sides.items():
        if names not in (list(levels), list(levels[::-1])):
            found = f"named {_quoted(names)}" if names else "none"
            allowed = f"must be the levels of the model, {wanted}, in this order or its reverse"
            return [InputError(file, side, found, allowed)]
    if sides["rows"] != sides["columns"]:
        return [InputError(file, "rows and columns", "in opposite orders", "must be in the same order")]
    return []


def _quoted(names: Sequence[str]) -> str:
    return ", ".join(f'"{name}"' for name in names)
