"""Edits of a storey table, as a person makes them: each returns the new table, to be read again.

A row is given by its index, roof first, or by its level; a column by its key.
"""

from __future__ import annotations

import csv
import math
from collections.abc import Mapping
from dataclasses import replace

from calcsheet.job import table as text_table
from calcsheet.job.errors import InputError
from calcsheet.job.numbers import decimal_mark, format_number
from calcsheet.job.storeyfile import StoreyReading
from calcsheet.job.table import TextTable

DIGITS = 6
"""Significant digits of numbers that the program writes into a table of the engineer's."""


def set_text(reading: StoreyReading, row: int | str, column: str, text: str) -> TextTable:
    """Return the table with a cell's text changed.

    Raises
    ------
    InputError
        There is no such row or column.
    """
    return text_table.set_cell(reading.table, row_index(reading, row), column_index(reading, column), text)


def set_number(reading: StoreyReading, row: int | str, column: str, value: float) -> TextTable:
    """Return the table with a cell set to a number, in the heading's unit and with the table's decimal mark.

    Raises
    ------
    InputError
        There is no such row or column, or the number isn't finite.
    """
    if not math.isfinite(value):
        raise InputError(reading.table.file, f'column "{column}"', f"got {value}", "must be a finite number")
    place = column_index(reading, column)
    columns = list(zip(*reading.rows, strict=True))
    # the column itself decides, else the first other column that does
    marks = (decimal_mark(cells, reading.table.delimiter) for cells in (columns[place : place + 1] + columns))
    mark = next((mark for mark in marks if mark), ".")
    return set_text(reading, row, column, format_number(value, mark))


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


def insert_row(reading: StoreyReading, below: int | str | None) -> TextTable:
    """Return the table with a blank row below a row, or (None) above all rows."""
    place = 0 if below is None else row_index(reading, below) + 1
    return text_table.insert_row(reading.table, place)


def delete_row(reading: StoreyReading, row: int | str) -> TextTable:
    """Return the table without a row."""
    return text_table.delete_row(reading.table, row_index(reading, row))


def move_row(reading: StoreyReading, row: int | str, to: int) -> TextTable:
    """Return the table with a row moved to another place among the rows."""
    if not 0 <= to < len(reading.rows):
        raise InputError(reading.table.file, "", f"no row {to}", f"must be from 0 to {len(reading.rows) - 1}")
    return text_table.move_row(reading.table, row_index(reading, row), to)


def paste(reading: StoreyReading, row: int | str, column: str, text: str) -> TextTable:
    """Return the table with a block pasted from a cell to the right and down; rows are added as needed.

    Parameters
    ----------
    reading : StoreyReading
        The table as read.
    row, column : int or str, str
        The block's first cell.
    text : str
        Rows of cells separated by tabs, as a spreadsheet copies them.

    Raises
    ------
    InputError
        There is no such row or column, or the block is wider than the columns from there on.
    """
    first, left = row_index(reading, row), column_index(reading, column)
    lines = text.removesuffix("\n").removesuffix("\r").splitlines(keepends=True)
    try:
        block = [cells or [""] for cells in csv.reader(lines, delimiter="\t")]
    except csv.Error as error:
        raise InputError("", "pasted cells", f"can't be read ({error})", "must be rows of cells") from None
    room = len(reading.columns) - left
    if (widest := max(map(len, block), default=0)) > room:
        found = f"{widest} columns pasted from {column}"
        raise InputError(reading.table.file, "", found, f"must be at most {room}, the columns from there on")
    table = reading.table
    for i, cells in enumerate(block, first):
        if i == len(table.rows):
            table = text_table.insert_row(table, i)
        for j, cell in enumerate(cells, left):
            table = text_table.set_cell(table, i, j, cell)
    return table


def row_index(reading: StoreyReading, row: int | str) -> int:
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
