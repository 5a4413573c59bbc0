"""Edits of a storey table, as a person makes them: each returns the new table, to be read again.

A row is given by its index, roof first, or by its level; a column by its key.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import replace

from calcsheet.job import table as text_table
from calcsheet.job.amounts import as_written
from calcsheet.job.clipboard import mark_of, read_block
from calcsheet.job.errors import InputError
from calcsheet.job.numbers import decimal_mark, format_number
from calcsheet.job.storeyreading import StoreyReading
from calcsheet.job.table import TextTable

DIGITS = 6
"""Significant digits of numbers that the program writes into a table of the engineer's."""

Row = int | str


def set_text(reading: StoreyReading, row: Row, column: str, text: str) -> TextTable:
    """Return the table with a cell set to a text as typed; a number is written as its column writes numbers.

    Raises
    ------
    InputError
        There is no such row or column.
    """
    place, at = column_index(reading, column), row_index(reading, row)
    mark, usual = _marks(reading, place, {at})
    text = as_written(text, reading.columns[place], mark, usual)
    return text_table.set_cell(reading.table, at, place, text)


def set_number(reading: StoreyReading, row: Row, column: str, value: float) -> TextTable:
    """Return the table with a cell set to a number, in the heading's unit and with the table's decimal mark.

    Raises
    ------
    InputError
        There is no such row or column, or the number isn't finite.
    """
    if not math.isfinite(value):
        raise InputError(reading.table.file, f'column "{column}"', f"got {value}", "must be a finite number")
    place = column_index(reading, column)
    text = format_number(value, _marks(reading, place)[1])
    return text_table.set_cell(reading.table, row_index(reading, row), place, text)


def set_columns(reading: StoreyReading, numbers: Mapping[str, Mapping[str, float]]) -> TextTable:
    """Return the table with numbers written into whole columns, in one edit.

    Parameters
    ----------
    reading : StoreyReading
        The table as read.
    numbers : mapping of str to mapping of str to float
        By column key and level, numbers in core units; they are written to `DIGITS` significant digits in the heading's unit.

    Raises
    ------
    InputError
        There is no such column, or its heading gives no unit.
    """
    for key, by_level in numbers.items():
        column = reading.columns[column_index(reading, key)]
        if column.unit is None:
            raise InputError(reading.table.file, f'heading "{column.heading}"', "no unit", "must give one")
        for level, number in by_level.items():
            written = float(f"{number / column.unit.factor:.{DIGITS}g}")
            reading = replace(reading, table=set_number(reading, level, key, written))
    return reading.table


def insert_rows(reading: StoreyReading, below: Row | None, count: int = 1) -> TextTable:
    """Return the table with blank rows below a row, or (None) above all rows."""
    place = 0 if below is None else row_index(reading, below) + 1
    table = reading.table
    for _ in range(count):
        table = text_table.insert_row(table, place)
    return table


def delete_rows(reading: StoreyReading, first: Row, last: Row) -> TextTable:
    """Return the table without the rows from `first` to `last`, both included."""
    table, top = reading.table, row_index(reading, first)
    for _ in range(top, row_index(reading, last) + 1):
        table = text_table.delete_row(table, top)
    return table


def move_rows(reading: StoreyReading, first: Row, last: Row, by: int) -> TextTable:
    """Return the table with the rows from `first` to `last` one place up (`by` -1) or down (1), where there is one."""
    top, bottom = row_index(reading, first), row_index(reading, last)
    over = top - 1 if by < 0 else bottom + 1
    if not 0 <= over < len(reading.rows):
        return reading.table
    return text_table.move_row(reading.table, over, bottom if by < 0 else top)


def clear(reading: StoreyReading, first: Row, last: Row, columns: Iterable[str]) -> TextTable:
    """Return the table with the cells of some columns blank, from row `first` to `last`, both included."""
    blank = dict.fromkeys((column_index(reading, key) for key in columns), "")
    rows = range(row_index(reading, first), row_index(reading, last) + 1)
    return text_table.set_cells(reading.table, dict.fromkeys(rows, blank))


def fill_down(reading: StoreyReading, first: Row, last: Row, columns: Iterable[str]) -> TextTable:
    """Return the table with the cells of row `first` copied into the rows below it up to `last`."""
    top, bottom = row_index(reading, first), row_index(reading, last)
    above = {(place := column_index(reading, key)): reading.rows[top][place] for key in columns}
    return text_table.set_cells(reading.table, dict.fromkeys(range(top + 1, bottom + 1), above))


def paste(reading: StoreyReading, row: Row, column: str, text: str, rows: int = 1, columns: int = 1) -> TextTable:
    """Return the table with a block pasted from a cell to the right and down; rows are added as needed.

    Parameters
    ----------
    reading : StoreyReading
        The table as read.
    row, column : int or str, str
        The block's first cell.
    text : str
        Rows of cells separated by tabs, as a spreadsheet copies them. Numbers may have units and another decimal mark
        than the table's: they are written as their column writes numbers.
    rows, columns : int
        Size of the range pasted into: where the block goes into it a whole number of times, it is repeated.

    Raises
    ------
    InputError
        There is no such row or column, or the block is wider than the columns from there on.
    """
    first, left = row_index(reading, row), column_index(reading, column)
    block = _repeated(read_block(text), rows, columns)
    room = len(reading.columns) - left
    if (widest := max(map(len, block), default=0)) > room:
        found = f"{widest} columns pasted from {column}"
        raise InputError(reading.table.file, "", found, f"must be at most {room}, the columns from there on")
    table = reading.table
    for _ in range(first + len(block) - len(table.rows)):
        table = text_table.insert_row(table, len(table.rows))
    own, covered = mark_of(block), range(first, first + len(block))
    marks = {left + j: _marks(reading, left + j, covered) for j in range(widest)}
    texts = {
        i: {j: as_written(cell, reading.columns[j], *marks[j], own) for j, cell in enumerate(cells, left)}
        for i, cells in enumerate(block, first)
    }
    return text_table.set_cells(table, texts)


def row_index(reading: StoreyReading, row: Row) -> int:
    """Return the index of a row that is given by index or level, refusing (InputError) what isn't there."""
    if isinstance(row, int):
        if 0 <= row < len(reading.rows):
            return row
        raise InputError(reading.table.file, "", f"no row {row}", f"must be from 0 to {len(reading.rows) - 1}")
    if row in reading.levels:
        return reading.levels.index(row)
    names = ", ".join(f'"{name}"' for name in reading.levels if name)
    raise InputError(reading.table.file, "", f'no level "{row}"', f"must be one of {names}")


def column_index(reading: StoreyReading, key: str) -> int:
    """Return the index of a column that is given by key, refusing (InputError) what isn't there."""
    keys = [column.key for column in reading.columns]
    if key in keys:
        return keys.index(key)
    names = ", ".join(f'"{name}"' for name in keys)
    raise InputError(reading.table.file, "", f'no column "{key}"', f"must be one of {names}")


def _marks(reading: StoreyReading, place: int, without: Iterable[int] = ()) -> tuple[str | None, str]:
    """The decimal mark that a column's rows but some tell, and the one to write: else that of the first column with one."""
    rows = [cells for i, cells in enumerate(reading.rows) if i not in {*without}]
    delimiter = reading.table.delimiter
    own = decimal_mark((cells[place] for cells in rows), delimiter)
    if own:
        return own, own
    others = (decimal_mark(column, delimiter) for column in zip(*rows, strict=True))
    return None, next(filter(None, others), "." if delimiter == "," else ",")


def _repeated(block: Sequence[Sequence[str]], rows: int, columns: int) -> list[list[str]]:
    """A block repeated to fill a range that it goes into a whole number of times; else the block alone."""
    width = max(map(len, block), default=0)
    down = rows // len(block) if block and rows % len(block) == 0 else 1
    across = columns // width if width and columns % width == 0 else 1
    if across > 1:
        block = [[*cells, *[""] * (width - len(cells))] * across for cells in block]
    return [list(cells) for _ in range(down) for cells in block]
