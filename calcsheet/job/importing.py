"""Levels of a spreadsheet's sheet brought into a table of the job: headings found and mapped, errors by cell address."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import Protocol

from calcsheet.job import table as text_table
from calcsheet.job.card import FILE as CARD
from calcsheet.job.errors import InputError
from calcsheet.job.headings import LEVEL, heading_unit, split_heading
from calcsheet.job.numbers import decimal_mark, format_number, is_ambiguous, parse_number
from calcsheet.job.table import TextTable, parse_table
from calcsheet.job.textfile import Encoding, Stamp, TextFile
from calcsheet.job.wording import dotted, shorten
from calcsheet.job.workbook import Cell, Sheet, address
from calcsheet.units import Unit

SEARCHED = 50
"""Rows in which the headings are looked for."""


class Known(Protocol):
    """What a heading stands for in the table of the job."""

    @property
    def key(self) -> str:
        """Its name."""

    @property
    def quantity(self) -> str | None:
        """Its quantity in the unit table; None for a text."""


Knows = Callable[[str], Known | None]
"""From a heading's name, without its unit, to the column that it stands for."""


@dataclass(frozen=True)
class Source:
    """A column of the sheet that is brought in.

    Parameters
    ----------
    place : int
        Its index in the sheet.
    heading : str
        Its heading in this program's words.
    key : str
        Name of the job's column.
    unit : Unit or None
        Its unit; None where it holds texts.
    """

    place: int
    heading: str
    key: str
    unit: Unit | None


@dataclass(frozen=True)
class Found:
    """The table found on a sheet.

    Parameters
    ----------
    sheet : Sheet
        The sheet.
    heading : int
        Row of the headings, from 0.
    sources : tuple of Source
        The columns that are known, the level's first.
    rows : tuple of int
        The rows of levels, from 0.
    levels : tuple of str
        Their names.
    notices : tuple of str
        What is left out, a sentence each.
    """

    sheet: Sheet
    heading: int
    sources: tuple[Source, ...]
    rows: tuple[int, ...]
    levels: tuple[str, ...]
    notices: tuple[str, ...]

    def where(self, level: str, key: str | None) -> str:
        """The address of a cell by level and column, or that of its row's first or its column's heading."""
        source = next((s for s in self.sources if s.key == key), self.sources[0])
        row = self.rows[self.levels.index(level)] if level in self.levels else self.heading
        return f"cell {address(row, source.place)}"


def find_table(
    sheets: Sequence[Sheet], name: str, mapping: Mapping[str, str], knows: Knows, key: Sequence[str] = ("imports",)
) -> Found:
    """Find the table of levels in a file.

    Parameters
    ----------
    sheets : sequence of Sheet
        The file's sheets.
    name : str
        The sheet wanted; "" for the only one that has such a table.
    mapping : mapping of str to str
        The file's headings to this program's, with units.
    knows : callable
        What a heading of the job's table stands for.
    key : sequence of str
        Where the job card keeps the mapping, for messages.

    Raises
    ------
    InputError
        There is no such sheet, none or several with headings, or a heading, name or cell that can't be used.
    """
    file = sheets[0].file if sheets else ""
    named = ", ".join(f'"{sheet.name}"' for sheet in sheets)
    wanted = [sheet for sheet in sheets if not name or sheet.name == name]
    if name and not wanted:
        raise InputError(file, "", f'no sheet "{name}"', f"must be one of {named}")
    levelled = {" ".join(theirs.split()): ours for theirs, ours in mapping.items()}
    for theirs, ours in levelled.items():
        if knows(split_heading(ours)[0]) is None:
            where = dotted([*key, "columns", theirs])
            raise InputError(CARD, where, f'got "{ours}"', "must be a heading of the job's table, with its unit")
    found = [(sheet, row) for sheet in wanted if (row := _heading_row(sheet, levelled, knows)) is not None]
    if len(found) > 1:
        both = ", ".join(f'"{sheet.name}"' for sheet, _ in found)
        raise InputError(file, "", f"tables of levels in sheets {both}", "choose one with --sheet")
    if not found:
        place = wanted[0].place if len(wanted) == 1 else file
        what = f'no row with the heading "{LEVEL}" and another that is known in the first {SEARCHED} rows'
        raise InputError(place, "", what, "name the file's headings with --map")
    return _read(*found[0], levelled, knows)


def _ours(cell: Cell, mapping: Mapping[str, str]) -> str:
    return mapping.get(cell.text, cell.text)


def _heading_row(sheet: Sheet, mapping: Mapping[str, str], knows: Knows) -> int | None:
    for i, cells in enumerate(sheet.rows[:SEARCHED]):
        keys = {known.key for cell in cells if (known := knows(split_heading(_ours(cell, mapping))[0])) is not None}
        if LEVEL in keys and len(keys) > 1:
            return i
    return None


def _read(sheet: Sheet, heading: int, mapping: Mapping[str, str], knows: Knows) -> Found:
    sources: list[Source] = []
    notices: list[str] = []
    for j, cell in enumerate(sheet.rows[heading]):
        ours, where = _ours(cell, mapping), f"{sheet.place}, cell {address(heading, j)}"
        name, symbol = split_heading(ours)
        column = knows(name)
        if column is None:
            if any(not _at(row, j).blank for row in sheet.rows[heading:]):
                notices.append(f'{where}: "{shorten(ours)}" isn\'t known, its column is left out')
            continue
        twin = next((source for source in sources if source.key == column.key), None)
        if twin is not None:
            what = f'"{shorten(ours)}" is given in {address(heading, twin.place)} as well'
            raise InputError(where, "", what, "must be given once")
        unit = None if column.quantity is None else heading_unit(where, ours, symbol, column.quantity)
        sources.append(Source(j, ours, column.key, unit))
    sources.sort(key=lambda source: source.key != LEVEL)
    rows = _data_rows(sheet, heading, [source.place for source in sources], notices)
    if not rows:
        raise InputError(
            sheet.place, "", f"no row below the headings in row {heading + 1}", "must have one for each level"
        )
    return Found(sheet, heading, tuple(sources), rows, _levels(sheet, rows, sources[0].place), tuple(notices))


def _at(row: Sequence[Cell], column: int) -> Cell:
    return row[column] if column < len(row) else Cell()


def _data_rows(sheet: Sheet, heading: int, used: Sequence[int], notices: list[str]) -> tuple[int, ...]:
    """Rows from the headings to the first blank one; what follows it is told."""
    first = heading + 1
    while first < len(sheet.rows) and all(_at(sheet.rows[first], j).merged for j in used):
        first += 1  # headings two rows high
    blank = [i for i in range(first, len(sheet.rows)) if all(_at(sheet.rows[i], j).blank for j in used)]
    end = blank[0] if blank else len(sheet.rows)
    left = [i for i in range(end, len(sheet.rows)) if i not in blank]
    if left:
        notices.append(f"{sheet.place}, rows {left[0] + 1} to {left[-1] + 1}: below a blank row, left out")
    return tuple(range(first, end))


def _levels(sheet: Sheet, rows: Sequence[int], place: int) -> tuple[str, ...]:
    levels: list[str] = []
    for row in rows:
        cell, where = _at(sheet.rows[row], place), f"{sheet.place}, cell {address(row, place)}"
        if cell.problem:
            raise InputError(where, "", *cell.problem.split("; ", 1))
        if cell.blank:
            raise InputError(where, "", f"{LEVEL} is blank", "must have a name, or a blank row before what is no level")
        if cell.text in levels:
            there = address(rows[levels.index(cell.text)], place)
            raise InputError(where, "", f'level "{cell.text}" stands in {there} as well', "must stand in one row")
        levels.append(cell.text)
    return tuple(levels)


def _column(found: Found, source: Source) -> list[str | float]:
    """The cells of a column: numbers in its unit, "" where blank; texts as they stand."""
    sheet, cells = found.sheet, [_at(found.sheet.rows[row], source.place) for row in found.rows]
    mark = decimal_mark([c.value for c in cells if isinstance(c.value, str)], sheet.delimiter)
    values: list[str | float] = []
    for row, cell in zip(found.rows, cells, strict=True):
        where = f"{sheet.place}, cell {address(row, source.place)}"
        if cell.problem:
            raise InputError(where, "", *cell.problem.split("; ", 1))
        if source.unit is None or cell.blank:
            values.append(cell.text)
        elif isinstance(cell.value, float):
            values.append(cell.value)
        else:
            values.append(_number(cell.text, mark, where, source))
    return values


def _number(text: str, mark: str | None, where: str, source: Source) -> float:
    unit = source.unit.symbol if source.unit else ""
    if mark is None and is_ambiguous(text):
        raise InputError(where, "", f"{source.key} {text} can be read in two ways", "must be a number, not a text")
    try:
        value = parse_number(text, mark or ".")
    except ValueError:
        value = math.nan
    if not math.isfinite(value):
        raise InputError(where, "", f'{source.key} "{shorten(text)}"', f"must be a number in {unit}")
    return value


def merged(found: Found, table: TextTable, knows: Knows) -> TextTable:
    """Return a table of the job with the columns found set, level by level; what else it holds is kept.

    A number of the same unit is carried over to its last digit; one of another unit is converted.

    Parameters
    ----------
    found : Found
        The table found in the file.
    table : TextTable
        The job's table.
    knows : callable
        What its headings stand for.

    Raises
    ------
    InputError
        The levels are not those of the job's table, or a cell can't be used.
    """
    keys = [known.key if (known := knows(split_heading(h)[0])) else "" for h in table.headings]
    rows = [i for i, cells in enumerate(table.rows) if any(cell.strip() for cell in cells)]
    place = keys.index(LEVEL) if LEVEL in keys else None
    names = {" ".join(table.rows[i][place].split()): i for i in rows} if place is not None else {}
    _same_levels(found, list(names), table.file)
    for source in found.sources[1:]:
        values = dict(zip(found.levels, _column(found, source), strict=True))
        if source.key in keys:
            j = keys.index(source.key)
            heading = table.headings[j]
        else:
            j, heading = len(table.headings), source.heading
            table = text_table.add_column(table, heading, [""] * len(table.rows))
            keys.append(source.key)
        unit = None
        if source.unit is not None and (known := knows(source.key)) is not None and known.quantity is not None:
            unit = heading_unit(table.file, heading, split_heading(heading)[1], known.quantity)
        mark = decimal_mark([cells[j] for cells in table.rows], table.delimiter) or _mark(table)
        for level, value in values.items():
            table = text_table.set_cell(table, names[level], j, _written(value, source.unit, unit, mark))
    return table


def _same_levels(found: Found, names: Sequence[str], file: str) -> None:
    remedy = f"must have the levels of {file}; --replace takes the sheet as the whole table"
    extra = next((level for level in found.levels if level not in names), None)
    if extra is not None:
        where = f"{found.sheet.place}, {found.where(extra, LEVEL)}"
        raise InputError(where, "", f'level "{extra}" is not in {file}', remedy)
    missing = [f'"{name}"' for name in names if name not in found.levels]
    if missing:
        raise InputError(found.sheet.place, "", f"no row for level {', '.join(missing)}", remedy)


def _mark(table: TextTable) -> str:
    """The decimal mark of the first column that tells it."""
    columns = zip(*(cells[: len(table.headings)] for cells in table.rows), strict=True)
    marks = (decimal_mark(cells, table.delimiter) for cells in columns)
    return next((mark for mark in marks if mark), "." if table.delimiter == "," else ",")


def _written(value: str | float, given: Unit | None, unit: Unit | None, mark: str) -> str:
    if isinstance(value, str):
        return value
    if given is not None and unit is not None and given.factor != unit.factor:
        value = value * given.factor / unit.factor
    return format_number(value, mark)


def whole(found: Found, file: str, like: TextTable | None = None) -> TextTable:
    """Return the table found as a table of the job of its own.

    Parameters
    ----------
    found : Found
        The table found in the file.
    file : str
        Name of the job's file.
    like : TextTable, optional
        The table that it replaces, whose delimiter, line endings and encoding it keeps.
    """
    delimiter, newline = (like.delimiter, like.newline) if like else (",", "\n")
    encoding = like.encoding if like else Encoding()
    mark = _mark(like) if like else "."
    columns = [[_written(v, None, None, mark) for v in _column(found, source)] for source in found.sources]
    rows = [[source.heading for source in found.sources], *map(list, zip(*columns, strict=True))]
    text = "".join(text_table.record(tuple(cells), delimiter) + newline for cells in rows)
    return parse_table(TextFile(text, encoding, Stamp.of(b"")), file)
