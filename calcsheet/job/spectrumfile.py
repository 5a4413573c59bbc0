"""A spectrum from its file: a row a point, `period [s]` and `ordinate [g]` or `ordinate [m/s²]`."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import pairwise

from calcsheet.job.cells import NOT_NEGATIVE, read_cell
from calcsheet.job.errors import InputError
from calcsheet.job.headings import heading_unit, split_heading
from calcsheet.job.numbers import decimal_mark
from calcsheet.job.table import TextTable

PERIOD, ORDINATE = "period", "ordinate"
Points = tuple[tuple[float, float], ...]


def read_points(table: TextTable) -> Points:
    """Read the points of a spectrum.

    Parameters
    ----------
    table : TextTable
        Two columns, in either order; periods rise from row to row.

    Returns
    -------
    tuple of (float, float)
        Period [s] and ordinate over g, at least two.

    Raises
    ------
    InputError
        The first thing wrong, by heading or row.
    """
    names = [split_heading(heading)[0].casefold() for heading in table.headings]
    if sorted(names) != sorted((PERIOD, ORDINATE)):
        found = "columns " + ", ".join(f'"{heading}"' for heading in table.headings)
        allowed = f'must be "{PERIOD} [s]" and "{ORDINATE} [g]" or "{ORDINATE} [m/s²]"'
        raise InputError(table.file, "", found, allowed)
    rows = [row for row, cells in enumerate(table.rows) if any(cell.strip() for cell in cells)]
    for row in rows:
        if any(cell.strip() for cell in table.rows[row][2:]):
            found = f"{len(table.rows[row])} cells"
            raise InputError(table.file, _where(table, row), found, "must be 2, one for each heading")
    period, ordinate = (list(_column(table, names.index(name), name, rows)) for name in (PERIOD, ORDINATE))
    if len(rows) < 2:
        found = f"{len(rows) or 'no'} point{'' if len(rows) == 1 else 's'}"
        raise InputError(table.file, "", found, "must have a row for each point, at least two")
    for (before, row), (earlier, later) in zip(pairwise(rows), pairwise(period), strict=True):
        if later <= earlier:
            above = f"must be above {earlier:g} s, that of {_where(table, before)}"
            raise InputError(table.file, _where(table, row), f"{PERIOD} {later:g} s", above)
    return tuple(zip(period, ordinate, strict=True))


def _column(table: TextTable, place: int, name: str, rows: list[int]) -> Iterator[float]:
    heading = table.headings[place]
    unit = heading_unit(table.file, heading, split_heading(heading)[1], name)
    mark = decimal_mark((table.rows[row][place] for row in rows), table.delimiter)
    for row in rows:
        yield read_cell(table.rows[row][place], table.file, _where(table, row), name, unit, mark, NOT_NEGATIVE)


def _where(table: TextTable, row: int) -> str:
    return f"row {table.row_number(row)}"
