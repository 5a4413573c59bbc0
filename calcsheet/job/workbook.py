"""Sheets of XLSX and CSV files as plain cells, and tables written to XLSX. No macro runs, no link is followed."""

from __future__ import annotations

import datetime as dt
import math
import warnings
import zipfile
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import openpyxl
from openpyxl.styles import Alignment, Font
from openpyxl.utils import get_column_letter
from openpyxl.utils.exceptions import IllegalCharacterError

from calcsheet.job import textfile
from calcsheet.job.errors import InputError
from calcsheet.job.headings import split_heading
from calcsheet.job.numbers import decimal_mark, is_ambiguous, parse_number
from calcsheet.job.table import TextTable, parse_table

LARGEST, UNPACKED = 20_000_000, 200_000_000
"""Bytes that a file may have, as it is and unpacked."""
ROWS, COLUMNS = 5000, 200
"""Rows and columns of a sheet that are read."""
WIDEST = 40
"""Width of a column, in characters, that its text may ask for."""


@dataclass(frozen=True)
class Cell:
    """A cell: its value, "" where it is blank; why it can't be used, where it can't; whether it is part of one above."""

    value: str | float = ""
    problem: str = ""
    merged: bool = False

    @property
    def text(self) -> str:
        """The value as a text, its spaces levelled; whole numbers without decimals."""
        if isinstance(self.value, str):
            return " ".join(self.value.split())
        return str(int(self.value)) if self.value.is_integer() else repr(self.value)

    @property
    def blank(self) -> bool:
        """Whether there is nothing in it, not even a problem."""
        return not self.problem and self.text == ""


@dataclass(frozen=True)
class Sheet:
    """A sheet.

    Parameters
    ----------
    file, name : str
        Name of the file, and of the sheet; empty for a CSV file.
    delimiter : str
        What parts the cells of a CSV file; empty where numbers are numbers.
    rows : tuple of tuple of Cell
        Its cells from the first row and column.
    """

    file: str
    name: str
    delimiter: str
    rows: tuple[tuple[Cell, ...], ...]

    @property
    def place(self) -> str:
        """File and sheet in words."""
        return f'{self.file}, sheet "{self.name}"' if self.name else self.file


def address(row: int, column: int) -> str:
    """The address of a cell, its row and column counted from 0: "D7"."""
    return f"{get_column_letter(column + 1)}{row + 1}"


def read_sheets(path: Path) -> tuple[Sheet, ...]:
    """Read every sheet of an XLSX file, or the one of a CSV file.

    Parameters
    ----------
    path : Path
        The file. Formulas give the values that were stored with them.

    Raises
    ------
    InputError
        The file is of another kind, too large, or can't be read.
    """
    kind = path.suffix.lower()
    if kind not in (".xlsx", ".csv"):
        raise InputError(path.name, "", "of another kind", "must be an .xlsx or a .csv file")
    try:
        size = path.stat().st_size
    except OSError as error:
        raise InputError(
            path.name, "", f"can't be read ({error.strerror})", "must be a file that can be opened"
        ) from None
    if size > LARGEST:
        raise InputError(path.name, "", f"{size / 1e6:.0f} MB", f"must be at most {LARGEST / 1e6:.0f} MB")
    return (_csv(path),) if kind == ".csv" else _xlsx(path)


def _csv(path: Path) -> Sheet:
    table = parse_table(textfile.read(path), path.name)
    rows = tuple(tuple(Cell(text) for text in line.cells) for line in table.lines[:ROWS])
    return Sheet(path.name, "", table.delimiter, rows)


def _xlsx(path: Path) -> tuple[Sheet, ...]:
    try:
        with zipfile.ZipFile(path) as packed:
            unpacked = sum(part.file_size for part in packed.infolist())
        if unpacked > UNPACKED:
            allowed = f"must be at most {UNPACKED / 1e6:.0f} MB"
            raise InputError(path.name, "", f"{unpacked / 1e6:.0f} MB unpacked", allowed)
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")  # of styles and rules that are not read
            stored = openpyxl.load_workbook(path, data_only=True, keep_links=False)
            typed = openpyxl.load_workbook(path, data_only=False, keep_links=False)
    except InputError:
        raise
    except Exception as error:  # the library raises whatever its parsers met
        raise InputError(path.name, "", f"can't be read ({type(error).__name__})", "must be an XLSX file") from None
    return tuple(_sheet(path.name, sheet, typed[sheet.title]) for sheet in stored.worksheets)


def _sheet(file: str, stored: Any, typed: Any) -> Sheet:
    """A sheet from the values stored, with what only the formulas and merged cells tell."""
    merged = {
        place: area.coord for area in typed.merged_cells.ranges for place in area.cells if place[0] > area.min_row
    }
    height, width = min(stored.max_row, ROWS), min(stored.max_column, COLUMNS)
    rows = []
    for cells in stored.iter_rows(max_row=height, max_col=width):
        row = []
        for cell in cells:
            if (area := merged.get((cell.row, cell.column))) is not None:
                row.append(Cell(problem=f"merged with others in {area}; must be a cell of its own", merged=True))
            elif cell.value is None and typed.cell(cell.row, cell.column).data_type == "f":
                what = "a formula without a stored value; open the file in a spreadsheet program and save it"
                row.append(Cell(problem=what))
            else:
                row.append(_cell(cell))
        rows.append(tuple(row))
    return Sheet(file, stored.title, "", tuple(rows))


def _cell(cell: Any) -> Cell:
    match cell.value:
        case None:
            return Cell()
        case _ if cell.data_type == "e":
            return Cell(problem=f"the error {cell.value}; must be a number or a text")
        case bool():
            return Cell(problem=f"{str(cell.value).upper()}; must be a number or a text")
        case int() | float() if math.isfinite(cell.value):
            return Cell(float(cell.value))
        case str():
            return Cell(cell.value)
        case dt.date() | dt.time() | dt.timedelta():
            return Cell(problem=f"a date or time, {cell.value}; must be a number or a text, formatted as one")
        case _:
            return Cell(problem="neither a number nor a text; must be one of them")


def write_workbook(path: Path, tables: Mapping[str, TextTable]) -> None:
    """Write tables to a new XLSX file, a sheet each: headings in a frozen row, numbers as numbers.

    Parameters
    ----------
    path : Path
        The file; it must not be there yet.
    tables : mapping of str to TextTable
        The tables by the name of their sheet. Columns whose heading gives a unit hold numbers, to 16 digits.

    Raises
    ------
    InputError
        The file is there, is of another kind, or a text can't be held in XLSX.
    """
    if path.suffix.lower() != ".xlsx":
        raise InputError(path.name, "", "of another kind", "must be an .xlsx file")
    if path.exists():
        raise InputError(path.name, "", "is there already", "name a new file")
    book = openpyxl.Workbook()
    book.remove(book.active)
    for name, table in tables.items():
        _write_sheet(book.create_sheet(name), table)
    book.save(path)


def _write_sheet(sheet: Any, table: TextTable) -> None:
    sheet.freeze_panes = "B2"
    rows = [cells for cells in table.rows if any(cell.strip() for cell in cells)]
    for j, heading in enumerate(table.headings):
        cells = [row[j] for row in rows]
        numeric = split_heading(heading)[1] is not None
        mark = decimal_mark(cells, table.delimiter)
        _put(sheet, table, 1, j + 1, heading).font = Font(bold=True)
        sheet.cell(1, j + 1).alignment = Alignment(
            wrap_text=True, vertical="top", horizontal="right" if numeric else "left"
        )
        for i, text in enumerate(cells, 2):
            _put(sheet, table, i, j + 1, _number(text, mark) if numeric else text.strip())
        longest = max(map(len, [*cells, *heading.split()]), default=0)
        sheet.column_dimensions[get_column_letter(j + 1)].width = 2 + min(longest, WIDEST)


def _number(text: str, mark: str | None) -> float | str:
    """The number that a text is; the text where it is none, or may be two."""
    if mark is None and is_ambiguous(text):
        return text.strip()
    try:
        value = parse_number(text, mark or ".")
    except ValueError:
        return text.strip()
    return value if math.isfinite(value) else text.strip()


def _put(sheet: Any, table: TextTable, row: int, column: int, value: str | float) -> Any:
    cell = sheet.cell(row, column)
    if value != "":
        try:
            cell.value = value
        except IllegalCharacterError:
            what = "characters that XLSX can't hold"
            raise InputError(table.file, f"cell {address(row - 1, column - 1)}", what, "must be printable") from None
        if isinstance(value, str):
            cell.data_type = "s"  # a text that begins with "=" is no formula
    return cell
