"""The comments of those who check, comments.csv: read strictly, and written back, changed cells only."""

from __future__ import annotations

import datetime as dt
import re
from collections.abc import Callable, Mapping
from dataclasses import fields
from pathlib import Path
from typing import Any

from calcsheet.job import card as job_card
from calcsheet.job import textfile
from calcsheet.job.card import parse_card
from calcsheet.job.comment import ANSWERED, CLOSED, Comment, conflict
from calcsheet.job.csvfile import as_meant, csv_bytes, harmless
from calcsheet.job.errors import ConflictError, InputError
from calcsheet.job.issued import FOLDER as ISSUED
from calcsheet.job.table import TextTable, insert_row, parse_table, set_cell
from calcsheet.job.textfile import Stamp
from calcsheet.job.wording import shorten

FILE = "comments.csv"
TRIES = 20
"""How often a file that others write to at the same time is read again."""


NAMES = tuple(f.name for f in fields(Comment))
COLUMNS = tuple(name.replace("_", " ") for name in NAMES)
_FILLED = ("revision", "by", "date", "comment")
_UNPRINTABLE = re.compile(r"[\x00-\x08\x0b\x0c\x0e-\x1f\x7f]")
_DATES = ("date", "replied_on", "closed_on")


def comments_of(folder: Path) -> tuple[Comment, ...]:
    """The comments of a job folder, or of the folder of a record that stands alone; none where it has no such file.

    Raises
    ------
    InputError
        As in `read_comments`.
    """
    card = folder / job_card.FILE
    named = parse_card(textfile.read(card).text).people.prepared.name if card.is_file() else ""
    return read_comments(folder / FILE, named)


def file_of(place: Path) -> Path:
    """The file of comments that belongs to a job folder or a record's file.

    A record in a job's issued folder is commented on in the job folder, a record alone beside itself.

    Parameters
    ----------
    place : Path
        A folder, or a file.
    """
    if place.is_dir():
        return place / FILE
    revision = place.resolve().parent
    job = revision.parent.parent
    in_job = revision.parent.name == ISSUED and (job / job_card.FILE).is_file()
    return job / FILE if in_job else place.with_name(FILE)


def read_comments(path: Path, originator: str = "") -> tuple[Comment, ...]:
    """The comments of a file, in its order, none where there is no such file.

    Parameters
    ----------
    path : Path
        The file.
    originator : str
        Who prepared the calculation.

    Raises
    ------
    InputError
        The file can't be read, a cell is wrong, or a comment was closed by one who may not close it: who replied to it,
        or the originator, unless it is their own.
    """
    return _read(path, originator)[1] if path.is_file() else ()


def edited(
    path: Path, change: Callable[[tuple[Comment, ...]], tuple[Comment, ...]], start: tuple[Comment, ...] = ()
) -> tuple[Comment, ...]:
    """Change the comments of a file: cells that stay the same keep their very bytes.

    Parameters
    ----------
    path : Path
        The file; made where it isn't there.
    change : callable
        From all comments to all comments, none left out; called again where others wrote meanwhile.
    start : tuple of Comment
        What a file that isn't there yet begins with.

    Raises
    ------
    InputError
        The file can't be read, or not be written (NotSavedError, ConflictError).
    """
    tries = 0
    while True:
        there = path.is_file()
        table, before, stamp = _read(path) if there else (_new(), (), None)
        after = change(before if there else start)
        if after == before:
            return after
        try:
            textfile.write(path, _written(table, after).content(), stamp)
            return after
        except ConflictError:
            tries += 1
            if tries == TRIES:
                raise


def _new() -> TextTable:
    content = csv_bytes([COLUMNS])
    text, encoding = textfile.decode(content, FILE)
    return parse_table(textfile.TextFile(text, encoding, Stamp.of(content)), FILE)


def _read(path: Path, originator: str = "") -> tuple[TextTable, tuple[Comment, ...], Stamp]:
    source = textfile.read(path)
    table = parse_table(source, path.name)
    places, seen = _places(table), dict[int, Comment]()
    for row in _filled_rows(table):
        comment = _comment(table, row, places)
        reason = conflict(comment, comment.closed_by, originator) if comment.closed_by else ""
        if reason:
            raise _wrong(table, row, "closed_by", reason, f"{comment.by}, or a checker who did not reply")
        if comment.number in seen:
            raise _wrong(table, row, "number", f"{comment.number} stands there twice", "a number of its own")
        seen[comment.number] = comment
    return table, tuple(seen.values()), source.stamp


def _filled_rows(table: TextTable) -> list[int]:
    return [row for row, cells in enumerate(table.rows) if any(cell.strip() for cell in cells)]


def _places(table: TextTable) -> dict[str, int]:
    """Index of each column by field; columns of the engineer's own are kept and not read."""
    heads = [" ".join(heading.split()).casefold() for heading in table.headings]
    for column in COLUMNS:
        if heads.count(column) != 1:
            found = f'{"no" if column not in heads else "more than one"} column "{column}"'
            raise InputError(table.file, "", found, f"must have one each of: {', '.join(COLUMNS)}")
    return {name: heads.index(column) for name, column in zip(NAMES, COLUMNS, strict=True)}


def _wrong(table: TextTable, row: int, name: str, found: str, allowed: str) -> InputError:
    where = f'row {table.row_number(row)}, column "{name.replace("_", " ")}"'
    return InputError(table.file, where, found, f"must be {allowed}")


def _comment(table: TextTable, row: int, places: Mapping[str, int]) -> Comment:
    cells = table.rows[row]
    if len(cells) > len(table.headings):
        found = f"{len(cells)} cells under {len(table.headings)} headings"
        raise InputError(table.file, f"row {table.row_number(row)}", found, "must have a cell for each heading")
    given: dict[str, Any] = {name: _text(cells[place]) for name, place in places.items()}
    for name, text in given.items():
        if _UNPRINTABLE.search(text):
            raise _wrong(table, row, name, "a character that can't be printed", "text")
    if not re.fullmatch(r"[1-9][0-9]{0,5}", given["number"]):
        raise _wrong(table, row, "number", f'got "{shorten(given["number"])}"', "a whole number from 1 to 999999")
    for name in _FILLED:
        if not given[name]:
            raise _wrong(table, row, name, "is blank", "filled in")
    for group in (ANSWERED, CLOSED):
        filled = [name for name in group if given[name]]
        blank = next((name for name in group if filled and not given[name]), None)
        if blank:
            raise _wrong(table, row, blank, "is blank", f'filled in, as "{filled[0].replace("_", " ")}" is')
    for name in _DATES:
        if given[name] and not _is_date(given[name]):
            raise _wrong(table, row, name, f'got "{shorten(given[name])}"', "a date such as 2026-01-31")
    return Comment(**{**given, "number": int(given["number"])})


def _text(cell: str) -> str:
    return re.sub(r"\r\n?", "\n", as_meant(cell)).strip()


def _is_date(text: str) -> bool:
    try:
        return dt.date.fromisoformat(text).isoformat() == text
    except ValueError:
        return False


def _written(table: TextTable, comments: tuple[Comment, ...]) -> TextTable:
    places, rows = _places(table), _filled_rows(table)
    for i, comment in enumerate(comments):
        if i == len(rows):
            last = rows[-1] + 1 if rows else 0
            table = insert_row(table, last)
            rows.append(last)
        for name, place in places.items():
            value = str(getattr(comment, name))
            if _text(table.rows[rows[i]][place]) != value:
                table = set_cell(table, rows[i], place, harmless(value))
    return table
