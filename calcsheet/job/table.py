"""A delimited text table that is rewritten line by line: what is not changed keeps its very bytes.

Every function returns a new table.
"""

from __future__ import annotations

import csv
import io
import re
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cached_property

from calcsheet.job.errors import InputError
from calcsheet.job.textfile import Encoding, TextFile

DELIMITERS = ("\t", ";", ",")
_LINE = re.compile(r"[^\r\n]*(?:\r\n|\r|\n)|[^\r\n]+")


@dataclass(frozen=True)
class Line:
    """A record of the file: its cells (none where it is blank), its text, and the line ending after it."""

    cells: tuple[str, ...]
    text: str
    end: str


@dataclass(frozen=True)
class TextTable:
    """A table as its file gives it.

    Parameters
    ----------
    file : str
        Name of the file, for messages.
    encoding : Encoding
        How the text is held in bytes.
    delimiter : str
        Comma, semicolon or tab.
    newline : str
        The line ending of the heading's line, which new lines get.
    heading : int
        Index of the heading's line.
    lines : tuple of Line
        Every line, blank ones too.
    """

    file: str
    encoding: Encoding
    delimiter: str
    newline: str
    heading: int
    lines: tuple[Line, ...]

    @property
    def headings(self) -> tuple[str, ...]:
        """The headings, as written."""
        return self.lines[self.heading].cells

    @cached_property
    def rows(self) -> tuple[tuple[str, ...], ...]:
        """The cells of each row, as written: as many as there are headings, or more."""
        width = len(self.headings)
        rows = (self.lines[i].cells for i in self._places)
        return tuple(cells + ("",) * (width - len(cells)) for cells in rows)

    @cached_property
    def _places(self) -> tuple[int, ...]:
        """Index of each row's line."""
        return tuple(i for i, line in enumerate(self.lines) if i > self.heading and line.cells)

    def row_number(self, row: int) -> int:
        """The row's number as a spreadsheet shows it: the line of the file, from 1."""
        return self._places[row] + 1

    def content(self) -> bytes:
        """The bytes of the file."""
        last = len(self.lines) - 1
        ends = (line.end if line.end or i == last else self.newline for i, line in enumerate(self.lines))
        text = "".join(line.text + end for line, end in zip(self.lines, ends, strict=True))
        return self.encoding.encode(text, self.file)


def parse_table(source: TextFile, file: str) -> TextTable:
    """Read a table from its text.

    Parameters
    ----------
    source : TextFile
        Text and encoding.
    file : str
        Name of the file, for messages.

    Raises
    ------
    InputError
        There is no heading, or a quotation mark is left open.
    """
    delimiter = _delimiter(source.text)
    lines = tuple(_lines(source.text, delimiter, file))
    heading = next((i for i, line in enumerate(lines) if line.cells), None)
    if heading is None:
        raise InputError(file, "", "the file is empty", "must have a line of headings")
    return TextTable(file, source.encoding, delimiter, lines[heading].end or "\n", heading, lines)


def set_cell(table: TextTable, row: int, column: int, text: str) -> TextTable:
    """Return the table with one cell changed; setting what is there already changes nothing."""
    return set_cells(table, {row: {column: text}})


def set_cells(table: TextTable, texts: Mapping[int, Mapping[int, str]]) -> TextTable:
    """Return the table with cells changed, by row and column; setting what is there already changes nothing."""
    lines = list(table.lines)
    for row, changes in texts.items():
        before = table.rows[row]
        cells = tuple(changes.get(column, text) for column, text in enumerate(before))
        if cells != before:
            place = table._places[row]
            lines[place] = replace(lines[place], cells=cells, text=_write(cells, table.delimiter, lines[place]))
    return table if lines == list(table.lines) else replace(table, lines=tuple(lines))


def insert_row(table: TextTable, row: int, cells: Iterable[str] = ()) -> TextTable:
    """Return the table with a row before row `row` (its length: after the last); missing cells are blank."""
    cells = tuple(cells)
    cells += ("",) * (len(table.headings) - len(cells))
    place = _place(table, row)
    like = table.lines[place - 1]
    line = Line(cells, _write(cells, table.delimiter, like), table.newline)
    return replace(table, lines=(*table.lines[:place], line, *table.lines[place:]))


def add_column(table: TextTable, heading: str, cells: Sequence[str]) -> TextTable:
    """Return the table with a column more on the right: its heading, and a cell for each row."""
    places, width = dict(zip(table._places, cells, strict=True)), len(table.headings)
    lines = list(table.lines)
    for place, text in {table.heading: heading, **places}.items():
        old = lines[place]
        kept = (*old.cells, *("",) * (width - len(old.cells)))
        new = (*kept[:width], text, *kept[width:])
        lines[place] = replace(old, cells=new, text=_write(new, table.delimiter, old))
    return replace(table, lines=tuple(lines))


def delete_row(table: TextTable, row: int) -> TextTable:
    """Return the table without a row."""
    place = table._places[row]
    return replace(table, lines=table.lines[:place] + table.lines[place + 1 :])


def move_row(table: TextTable, row: int, to: int) -> TextTable:
    """Return the table with row `row` moved so that it becomes row `to`; its text is kept."""
    line = table.lines[table._places[row]]
    rest = delete_row(table, row)
    place = _place(rest, to)
    line = replace(line, end=line.end or table.newline)
    return replace(rest, lines=(*rest.lines[:place], line, *rest.lines[place:]))


def _place(table: TextTable, row: int) -> int:
    """Index of the line before which a row `row` is inserted."""
    if row < len(table._places):
        return table._places[row]
    return (table._places[-1] if table._places else table.heading) + 1


def _write(cells: tuple[str, ...], delimiter: str, like: Line) -> str:
    """One record as text, every cell quoted where those of the line `like` are."""
    quoted = bool(like.cells) and record(like.cells, delimiter, quoted=True) == like.text
    return record(cells, delimiter, quoted)


class _Quoted(csv.excel):
    quoting = csv.QUOTE_ALL


def record(cells: tuple[str, ...], delimiter: str, quoted: bool = False) -> str:
    """Return cells as one record of text, without a line ending; `quoted` puts each in quotation marks."""
    out = io.StringIO()
    dialect = _Quoted if quoted else csv.excel
    csv.writer(out, dialect, delimiter=delimiter).writerow(cells)
    return out.getvalue().removesuffix("\r\n")


def _delimiter(text: str) -> str:
    """The delimiter that parts the first line that isn't blank into the most cells."""
    head = next((line for line in _LINE.findall(text) if line.strip()), "")

    def parts(delimiter: str) -> int:
        try:
            return len(next(csv.reader([head], delimiter=delimiter), []))
        except csv.Error:
            return 0

    most = max(DELIMITERS, key=parts)
    return most if parts(most) > 1 else ","


def _lines(text: str, delimiter: str, file: str) -> Iterator[Line]:
    pieces = _LINE.findall(text)
    reader = csv.reader(pieces, delimiter=delimiter, strict=True)
    start = 0
    while True:
        try:
            cells = next(reader, None)
        except csv.Error as error:
            found, allowed = f"can't be read as cells ({error})", 'must have its quotation marks (") in pairs'
            raise InputError(file, f"line {start + 1}", found, allowed) from None
        if cells is None:
            return
        raw = "".join(pieces[start : reader.line_num])
        body = re.sub(r"(?:\r\n|\r|\n)\Z", "", raw)
        # a line of nothing but delimiters, even tabs, is a row of blank cells
        blank = not body.strip() and len(cells) < 2
        yield Line(() if blank else tuple(cells), body, raw[len(body) :])
        start = reader.line_num
