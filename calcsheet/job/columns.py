"""A table whose columns are known beforehand: its cells read, every problem gathered."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass, replace

from calcsheet.job.cells import POSITIVE, read_cell
from calcsheet.job.errors import CellProblem, InputError
from calcsheet.job.headings import heading_unit, split_heading
from calcsheet.job.numbers import decimal_mark
from calcsheet.job.table import TextTable
from calcsheet.units import Unit, display


@dataclass(frozen=True)
class Column:
    """A column that a table may have.

    Parameters
    ----------
    key : str
        Its heading without unit.
    quantity : str or None
        Its quantity in the unit table; None where it holds texts.
    allowed : str
        What a number must be, as in `calcsheet.job.cells`.
    optional : bool
        Whether it may be left out.
    blank : bool
        Whether a cell may be blank: a number is NaN then.
    unit : Unit or None
        The unit that its heading gives, once it is read.
    heading : str
        The heading as written, once it is read.
    """

    key: str
    quantity: str | None = None
    allowed: str = POSITIVE
    optional: bool = False
    blank: bool = False
    unit: Unit | None = None
    heading: str = ""


@dataclass(frozen=True, eq=False)
class Columns:
    """What the known columns of a table hold.

    Parameters
    ----------
    table : TextTable
        The table.
    rows : tuple of int
        Its rows that aren't blank.
    names : tuple of str
        The first column's text of each of these rows.
    texts : dict of str to list of str
        The cells by column, row by row.
    numbers : dict of str to list of float
        Those of columns of numbers, in core units; NaN where blank or refused.
    problems : tuple of CellProblem
        All that is wrong.
    notices : tuple of str
        Columns that aren't known, a sentence each.
    """

    table: TextTable
    rows: tuple[int, ...]
    names: tuple[str, ...]
    texts: dict[str, list[str]]
    numbers: dict[str, list[float]]
    problems: tuple[CellProblem, ...]
    notices: tuple[str, ...]

    def where(self, i: int, word: str) -> str:
        """The place of a row in words: its name where it has one of its own."""
        return place(self.table, self.rows[i], self.names[i], self.names.count(self.names[i]), word)


def place(table: TextTable, row: int, name: str, uses: int, word: str) -> str:
    """The place of a row in words: `level "3"`, or its number where the name isn't its own."""
    return f'{word} "{name}"' if name and uses == 1 else f"row {table.row_number(row)}"


def known(name: str, wanted: Sequence[Column]) -> Column | None:
    """The column that a heading's name stands for, whatever its capitals; None where it's not known."""
    return next((column for column in wanted if column.key.casefold() == name.casefold()), None)


def read_columns(table: TextTable, wanted: Sequence[Column], word: str, system: str, once: bool = True) -> Columns:
    """Read the known columns of a table.

    Parameters
    ----------
    table : TextTable
        The table.
    wanted : sequence of Column
        Its columns in any order; the first names the rows.
    word : str
        What a row is, for messages, such as "level".
    system : {"SI", "US"}
        Whose units are named where a column is missing.
    once : bool
        Whether each name may stand once only.
    """
    problems: list[CellProblem] = []
    found, notices = _headings(table, wanted, system, problems)
    rows = tuple(i for i, cells in enumerate(table.rows) if any(cell.strip() for cell in cells))
    first = wanted[0].key
    at = found[first][0] if first in found else None
    names = tuple("" if at is None else " ".join(table.rows[row][at].split()) for row in rows)
    uses, width = Counter(names), len(table.headings)

    def refuse(row: int, column: str | None, where: str, what: str, allowed: str) -> None:
        problems.append(CellProblem(row, column, str(InputError(table.file, where, what, allowed))))

    for row, name in zip(rows, names, strict=True):
        number = f"row {table.row_number(row)}"
        if any(cell.strip() for cell in table.rows[row][width:]):
            refuse(row, None, number, f"{len(table.rows[row])} cells", f"must be {width}, one for each heading")
        if not name and at is not None:
            refuse(row, first, number, f"{first} is blank", "must have a name")
        elif once and uses[name] > 1 and at is not None:
            refuse(row, first, number, f'{word} "{name}" stands in {uses[name]} rows', "must stand in one")
    texts: dict[str, list[str]] = {}
    numbers: dict[str, list[float]] = {}
    for key, (i, column) in found.items():
        cells = [table.rows[row][i] for row in rows]
        texts[key] = [" ".join(cell.split()) for cell in cells]
        if column.unit is not None:
            mark = decimal_mark(cells, table.delimiter)
            numbers[key] = []
            for row, name, cell in zip(rows, names, cells, strict=True):
                where = place(table, row, name, uses[name], word)
                try:
                    value = read_cell(
                        cell, table.file, where, key, column.unit, mark, column.allowed, may_be_blank=column.blank
                    )
                except InputError as error:
                    problems.append(CellProblem(row, key, str(error)))
                    value = float("nan")
                numbers[key].append(value)
    return Columns(table, rows, names, texts, numbers, tuple(problems), tuple(notices))


def _headings(
    table: TextTable, wanted: Sequence[Column], system: str, problems: list[CellProblem]
) -> tuple[dict[str, tuple[int, Column]], list[str]]:
    """The columns found, each with its index and unit, and what isn't known."""
    found: dict[str, tuple[int, Column]] = {}
    notices = []
    for i, heading in enumerate(table.headings):
        name, unit = split_heading(heading)
        column = known(name, wanted)
        try:
            if column is None:
                if heading.strip() or any(cells[i].strip() for cells in table.rows):
                    notices.append(f'{table.file}, column "{heading}" isn\'t known: not used, and kept')
                continue
            if column.key in found:
                what = f"given in columns {found[column.key][0] + 1} and {i + 1}"
                raise InputError(table.file, f'heading "{heading}"', what, "must be given once")
            found[column.key] = i, replace(column, heading=heading)
            if column.quantity is not None:
                given = heading_unit(table.file, heading, unit, column.quantity)
                found[column.key] = i, replace(column, heading=heading, unit=given)
            elif unit is not None:
                allowed = f'must be "{column.key}" alone'
                raise InputError(table.file, f'heading "{heading}"', f"a unit, [{unit}]", allowed)
        except InputError as error:
            problems.append(CellProblem(None, column.key if column else None, str(error)))
    for column in wanted:
        if column.key not in found and not column.optional:
            written = _written(column, system)
            problems.append(CellProblem(None, None, f"{table.file}: no column {written}; must have one"))
    return found, notices


def _written(column: Column, system: str) -> str:
    """A heading as it should be written."""
    return (
        f'"{column.key}"' if column.quantity is None else f'"{column.key} [{display(column.quantity, system).symbol}]"'
    )
