"""CSV files that are made for spreadsheets, with no cell that one of them would take for a formula."""

from __future__ import annotations

import codecs
import csv
import io
import re
from collections.abc import Iterable, Sequence

_NUMBER = re.compile(r"[+-]?[0-9]+(\.[0-9]+)?([eE][+-]?[0-9]+)?")
_FORMULA = re.compile(r"[=+\-@\t\r\n＝＋－＠]")


def csv_bytes(rows: Iterable[Sequence[str]]) -> bytes:
    """Rows of cells as a CSV file (RFC 4180), in UTF-8 with the byte-order mark that spreadsheets ask for.

    Parameters
    ----------
    rows : iterable of sequences of str
        The cells, made `harmless` here.
    """
    out = io.StringIO()
    csv.writer(out).writerows([harmless(cell) for cell in row] for row in rows)
    return codecs.BOM_UTF8 + out.getvalue().encode()


def harmless(text: str) -> str:
    """A cell that spreadsheets show as it is: an apostrophe goes before what would begin a formula.

    These are = + - @, their wide forms, tabs and line ends, after any apostrophes. Plain numbers stay.
    """
    return f"'{text}" if _FORMULA.match(text.lstrip("'")) and not _NUMBER.fullmatch(text) else text


def as_meant(cell: str) -> str:
    """The text that `harmless` made a cell from."""
    return cell[1:] if cell.startswith("'") and _FORMULA.match(cell.lstrip("'")) else cell
