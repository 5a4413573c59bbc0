"""The tables of a record as CSV: numbers in full, from the data, in the unit that is printed."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from bs4 import BeautifulSoup, Tag

from calcsheet.job.csvfile import csv_bytes
from calcsheet.record.check.numbers import FACTORS, resolved
from calcsheet.record.errors import RecordError

FOLDER = "tables"
INDEX = "index.csv"
COVER = "Cover"
UNIT = "unit"
WIDEST = 1000
"""Columns that a cell may span, as in the HTML standard."""
LONGEST = 60
"""Characters of a file's name without its ending."""
HEADINGS = ("h1", "h2", "h3", "h4", "h5", "h6")
POWER = re.compile("(.*)\u00b710\\^(.*)")


@dataclass(frozen=True)
class Cell:
    """A cell: its text, or its number in full; and the number's unit where its heading doesn't give it."""

    text: str
    unit: str = ""


@dataclass(frozen=True)
class CsvTable:
    """A table of a record.

    Parameters
    ----------
    file : str
        Name of its CSV file.
    section, heading, caption : str
        Where it stands in the record.
    headings : int
        Rows that are headings.
    rows : tuple of tuples of str
        All rows, of one length.
    """

    file: str
    section: str
    heading: str
    caption: str
    headings: int
    rows: tuple[tuple[str, ...], ...]


def csv_files(html: str, record: Mapping[str, Any]) -> dict[str, bytes]:
    """CSV files of a record's tables by name, and index.csv, which lists them.

    Parameters
    ----------
    html : str
        The record's HTML, made from it by this program.
    record : mapping
        The record.

    Raises
    ------
    RecordError
        As `tables_of`.
    """
    tables = tables_of(html, record["payloads"])
    listed = [(t.file, t.section, t.heading, t.caption, str(t.headings), str(len(t.rows) - t.headings)) for t in tables]
    index = csv_bytes([("file", "section", "heading", "caption", "heading rows", "rows"), *listed])
    return {t.file: csv_bytes(t.rows) for t in tables} | {INDEX: index}


def tables_of(html: str, payloads: Mapping[str, Any]) -> tuple[CsvTable, ...]:
    """The tables of a record in their order.

    A cell that is one number gets it from the payloads as it is, or to 15 digits where the printed unit is another. Where
    the column's heading doesn't give that unit, a column "unit" follows. A cell over several rows or columns is repeated in
    each. All else is text as printed.

    Parameters
    ----------
    html : str
        The record's HTML, made by this program.
    payloads : mapping of str to payload
        Its data.

    Raises
    ------
    RecordError
        A number whose pointer leads to none, or that is not printed as the data have it.
    """
    soup = BeautifulSoup(html, "html.parser")
    for tag in soup.find_all(["svg", "style", "script"]):
        tag.decompose()
    for tag in soup.find_all("sup"):
        tag.insert(0, "^")
    for tag in soup.find_all(["br", "p", "li", "div"]):
        tag.insert_before(" ")
    found = soup.find_all("table")
    digits = max(2, len(str(len(found))))
    return tuple(_table(table, f"{i:0{digits}}", payloads) for i, table in enumerate(found, 1))


def _table(table: Tag, number: str, payloads: Mapping[str, Any]) -> CsvTable:
    section, heading = _place(table)
    caption = _text(table.caption) if table.caption else ""
    file = f"{number}-{_slug(f'{section} {caption or heading}')}"[:LONGEST]
    rows = [tr for tr in table.find_all("tr") if tr.find_parent("table") is table]
    heads = sum(tr.parent is not None and tr.parent.name == "thead" for tr in rows)
    try:
        grid = _grid(rows, payloads)
    except RecordError as error:
        raise RecordError(f'table "{caption or heading or section}": {error}') from None
    return CsvTable(
        f"{file.rstrip('-')}.csv", section, heading, caption, heads, tuple(zip(*_columns(grid, heads), strict=True))
    )


def _place(table: Tag) -> tuple[str, str]:
    """Section and, below it, heading under which a table stands."""
    over = table.find_previous("h2")
    if over is None:
        return COVER, ""
    last = table.find_previous(HEADINGS)
    section = "" if over.find_parent("nav") else _text(over)  # the contents head no section
    return section, "" if last is None or last is over else _text(last)


def _grid(rows: list[Tag], payloads: Mapping[str, Any]) -> list[list[Cell]]:
    """Cells row by row, as many in each."""
    placed: dict[tuple[int, int], Cell] = {}
    for r, row in enumerate(rows):
        c = 0
        for tag in row.find_all(["th", "td"], recursive=False):
            while (r, c) in placed:
                c += 1
            cell = _cell(tag, payloads)
            wide = min(_span(tag, "colspan"), WIDEST)
            for below in range(min(_span(tag, "rowspan"), len(rows) - r)):
                placed |= {(r + below, c + right): cell for right in range(wide)}
            c += wide
    width = max((c for _, c in placed), default=-1) + 1
    return [[placed.get((r, c), Cell("")) for c in range(width)] for r in range(len(rows))]


def _span(tag: Tag, name: str) -> int:
    given = str(tag.get(name, "1"))
    return int(given) if re.fullmatch(r"[1-9][0-9]{0,5}", given, re.ASCII) else 1


def _columns(grid: list[list[Cell]], heads: int) -> Iterator[list[str]]:
    """The columns' texts; after one whose numbers have units that no heading of it gives, a column of these."""
    for column in zip(*grid, strict=True):
        yield [cell.text for cell in column]
        given = {cell.text.rpartition("[")[2].removesuffix("]") for cell in column[:heads] if cell.text.endswith("]")}
        units = ["" if cell.unit in given else cell.unit for cell in column[heads:]]
        if any(units):
            yield [UNIT] * heads + units


def _cell(tag: Tag, payloads: Mapping[str, Any]) -> Cell:
    numbers, text = tag.find_all("data"), _text(tag)
    if len(numbers) != 1:
        return Cell(text)
    (number,) = numbers
    shown, unit = _text(number), str(number.get("data-unit", ""))
    if text.removeprefix(shown).strip() not in ("", unit):
        return Cell(text)
    value = resolved(payloads, str(number["value"]))
    if type(value) not in (int, float) or unit not in FACTORS:
        raise RecordError(f'printed "{shown}", and {number["value"]} leads to no number in "{unit}"')
    full = value / FACTORS[unit] if FACTORS[unit] != 1.0 else value
    if not _prints(shown, full):
        raise RecordError(f'printed "{shown}", and {number["value"]} leads to {full!r} {unit}'.rstrip())
    return Cell(repr(value) if full is value else f"{full:.15g}", unit)


def _prints(shown: str, full: float) -> bool:
    """Whether a printed number is a number in full, rounded."""
    power = POWER.fullmatch(shown)
    plain, exponent = power.groups() if power else (shown, "0")
    try:
        mantissa, ten = float(_ascii(plain)), int(_ascii(exponent))
    except ValueError:
        return False
    half = 0.5 * 10.0 ** (ten - len(plain.partition(".")[2]))
    return abs(full - mantissa * 10.0**ten) <= half * (1 + 1e-6)


def _ascii(number: str) -> str:
    return number.replace("\u2212", "-").replace(" ", "")


def _text(tag: Tag) -> str:
    """Text in one line; narrow and unbreakable spaces become common ones."""
    return " ".join(tag.get_text().split())


def _slug(text: str) -> str:
    """Text as part of a file name on every system: small letters, digits, hyphens."""
    plain = unicodedata.normalize("NFKD", text).encode("ascii", "ignore").decode().lower()
    return re.sub(r"[^a-z0-9]+", "-", plain).strip("-")


def write_tables(html: str, record: Mapping[str, Any], folder: Path) -> tuple[Path, ...]:
    """Write `csv_files` into a new folder.

    Parameters
    ----------
    html : str
        The record's HTML, made from it by this program.
    record : mapping
        The record.
    folder : Path
        The folder; made where it isn't there.

    Raises
    ------
    RecordError
        There is something in it, or as `csv_files`.
    """
    if folder.exists() and (not folder.is_dir() or any(folder.iterdir())):
        raise RecordError(f"{folder} is there already and not empty; name a new folder")
    files = csv_files(html, record)
    folder.mkdir(parents=True, exist_ok=True)
    for name, content in files.items():
        (folder / name).write_bytes(content)
    return tuple(folder / name for name in files)
