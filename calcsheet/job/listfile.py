"""Tables that list things by name, a row each: texts and numbers by heading, every problem by row."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from calcsheet.job.cells import POSITIVE, read_cell
from calcsheet.job.errors import InputError
from calcsheet.job.headings import heading_unit, split_heading
from calcsheet.job.numbers import decimal_mark
from calcsheet.job.table import TextTable
from calcsheet.units import Unit

NONE = Unit("", 1.0)
"""The unit of a number that has none."""


@dataclass(frozen=True)
class ListColumn:
    """A column that a list may have.

    Parameters
    ----------
    key : str
        Its heading without a unit.
    quantity : str or None
        Its quantity in the unit table; "" for a number without a unit; None for a text.
    needed : bool
        Whether the list must have it, with no cell left blank.
    choices : tuple of str
        The texts that it may hold; any where empty.
    allowed : str
        What its numbers must be.
    several : bool
        Whether a cell may hold several numbers with plus signs between them.
    """

    key: str
    quantity: str | None = None
    needed: bool = False
    choices: tuple[str, ...] = ()
    allowed: str = POSITIVE
    several: bool = False

    def parts(self, cell: str) -> list[str]:
        """The numbers of a cell, as texts."""
        return cell.split("+") if self.several else [cell]


@dataclass(frozen=True)
class ListRow:
    """A row: its cells by the key of their column, blank ones left out.

    Parameters
    ----------
    file : str
        Name of the file.
    where : str
        The row in messages.
    texts : mapping of str to str
        Texts, spaces levelled.
    numbers : mapping of str to float
        Numbers in core units.
    several : mapping of str to tuple of float
        The same, of columns whose cells may hold several.
    """

    file: str
    where: str
    texts: Mapping[str, str]
    numbers: Mapping[str, float]
    several: Mapping[str, tuple[float, ...]]

    def refused(self, found: str, allowed: str) -> InputError:
        """The error of this row."""
        return InputError(self.file, self.where, found, allowed)


def read_list(table: TextTable, columns: Sequence[ListColumn]) -> tuple[list[ListRow], list[InputError]]:
    """Read a list.

    Parameters
    ----------
    table : TextTable
        The table; its first column known here names the rows.
    columns : sequence of ListColumn
        What it may have, the names first. A heading that isn't among them is refused, since what stands below it
        would silently not count; "note" is free.

    Returns
    -------
    rows : list of ListRow
        Every row that has no problem of its own.
    problems : list of InputError
        All problems.
    """
    places, units, problems = _headings(table, columns)
    if problems:
        return [], problems
    name = columns[0].key
    filled = [i for i, cells in enumerate(table.rows) if any(cell.strip() for cell in cells)]
    if not filled:
        problems.append(InputError(table.file, "", "no rows", f"must have a row for each {name}"))
    rows: list[ListRow] = []
    seen: dict[str, int] = {}
    for i in filled:
        found = _row(table, i, columns, places, units)
        if isinstance(found, InputError):
            problems.append(found)
            continue
        first = seen.setdefault(found.texts[name].casefold(), table.row_number(i))
        if first != table.row_number(i):
            where = f'row {table.row_number(i)}, {name} "{found.texts[name]}"'
            problems.append(InputError(table.file, where, f"named in row {first} too", "each needs its own name"))
        else:
            rows.append(found)
    return rows, problems


def _headings(
    table: TextTable, columns: Sequence[ListColumn]
) -> tuple[dict[str, int], dict[str, tuple[Unit, str | None]], list[InputError]]:
    """Place of each column, unit and decimal mark of those with numbers, and problems."""
    known = {column.key.casefold(): column for column in columns}
    places: dict[str, int] = {}
    units: dict[str, tuple[Unit, str | None]] = {}
    problems = []
    for i, heading in enumerate(table.headings):
        name, unit = split_heading(heading)
        if name.casefold() == "note" or not (name or any(cells[i].strip() for cells in table.rows)):
            continue
        try:
            column = known.get(name.casefold())
            if column is None:
                raise InputError(table.file, f'heading "{heading}"', "not known", f"must be {_listed(columns)} or note")
            if column.key in places:
                found = f"given in columns {places[column.key] + 1} and {i + 1}"
                raise InputError(table.file, f'heading "{heading}"', found, "must be given once")
            places[column.key] = i
            if column.quantity:
                read = heading_unit(table.file, heading, unit, column.quantity)
            elif unit is not None:
                raise InputError(
                    table.file, f'heading "{heading}"', f"a unit, [{unit}]", f'must be "{column.key}" alone'
                )
            else:
                read = NONE
            if column.quantity is not None:
                parts = (part for cells in table.rows for part in column.parts(cells[i]))
                units[column.key] = read, decimal_mark(parts, table.delimiter)
        except InputError as error:
            problems.append(error)
    for column in columns:
        if column.needed and column.key not in places:
            problems.append(InputError(table.file, "", f'no column "{column.key}"', "must have one"))
    return places, units, problems


def _row(
    table: TextTable,
    i: int,
    columns: Sequence[ListColumn],
    places: Mapping[str, int],
    units: Mapping[str, tuple[Unit, str | None]],
) -> ListRow | InputError:
    """A row read, or the first thing wrong with it."""
    cells, width = table.rows[i], len(table.headings)
    name = " ".join(cells[places[columns[0].key]].split())
    where = f"row {table.row_number(i)}" + (f', {columns[0].key} "{name}"' if name else "")
    if any(cell.strip() for cell in cells[width:]):
        return InputError(table.file, where, f"{len(cells)} cells", f"must be {width}, one for each heading")
    texts: dict[str, str] = {}
    numbers: dict[str, float] = {}
    several: dict[str, tuple[float, ...]] = {}
    try:
        for column in columns:
            text = " ".join(cells[places[column.key]].split()) if column.key in places else ""
            if not text:
                if column.needed:
                    allowed = f"must be {' or '.join(column.choices)}" if column.choices else "must be given"
                    raise InputError(table.file, where, f"{column.key} is blank", allowed)
            elif column.quantity is None:
                texts[column.key] = _chosen(text, column, table.file, where)
            else:
                unit, mark = units[column.key]
                read = tuple(
                    read_cell(part, table.file, where, column.key, unit, mark, column.allowed)
                    for part in column.parts(text)
                )
                if column.several:
                    several[column.key] = read
                else:
                    numbers[column.key] = read[0]
    except InputError as error:
        return error
    return ListRow(table.file, where, texts, numbers, several)


def _chosen(text: str, column: ListColumn, file: str, where: str) -> str:
    if not column.choices:
        return text
    for choice in column.choices:
        if choice.casefold() == text.casefold():
            return choice
    raise InputError(file, where, f'{column.key} "{text}"', f"must be {' or '.join(column.choices)}")


def _listed(columns: Sequence[ListColumn]) -> str:
    return ", ".join(column.key for column in columns)
