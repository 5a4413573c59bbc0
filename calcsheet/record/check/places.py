"""Where a token of a record's HTML stands: under which heading, in which row, at which JSON pointer."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from html import unescape

from calcsheet.record.tokens import attributes, name_of

HEADINGS = ("h1", "h2", "h3", "h4", "caption")
CLOSING = tuple(f"/{name}" for name in HEADINGS)


@dataclass(frozen=True, slots=True)
class Located:
    """A token with its place.

    Parameters
    ----------
    token : str
        A tag, a comment or text.
    heading, row, column : str
        The last heading or caption; first cell of the table row; heading of the column, as text.
    pointer, unit : str
        What the ``<data>`` around it says: the JSON pointer into the payloads, and the unit.
    inside : str
        "svg", "script", "style", or empty.
    """

    token: str
    heading: str
    row: str
    column: str
    pointer: str
    unit: str
    inside: str

    @property
    def place(self) -> str:
        """The place in words."""
        parts = (self.heading, f"row {self.row}" if self.row else "", self.column, self.pointer)
        return ", ".join(part for part in parts if part)


def located(tokens: Iterable[str]) -> Iterator[Located]:
    """Tokens with their places, in order."""
    heading = row = pointer = unit = inside = ""
    words: list[str] = []
    in_heading = in_head = in_row_label = False
    columns: list[str] = []
    cell = -1
    for token in tokens:
        name = name_of(token)
        if name in ("svg", "script", "style") and not inside:
            inside = name
        elif name and inside and name == f"/{inside}":
            inside = ""
        elif not inside:
            if name in HEADINGS:
                in_heading, words = True, []
                row, columns = "", columns if name != "caption" else []
            elif name in CLOSING and in_heading:
                in_heading, heading = False, _plain(words)
            elif name == "table":
                row, columns, cell = "", [], -1
            elif name == "/table":
                row, columns = "", []
            elif name in ("thead", "/thead"):
                in_head = name == "thead"
            elif name == "tr":
                row, cell = "", -1
            elif name in ("th", "td"):
                cell += 1
                if cell == 0 or in_head:
                    words, in_row_label = [], True
            elif name in ("/th", "/td") and in_row_label:
                in_row_label = False
                if in_head:
                    columns.append(_plain(words))
                else:
                    row = _plain(words)
            elif name == "data":
                said = attributes(token)
                pointer, unit = said.get("value", ""), said.get("data-unit", "")
        if not name and (in_heading or in_row_label) and not inside:
            words.append(token)
        column = columns[cell] if 0 <= cell < len(columns) and not in_head else ""
        yield Located(token, heading, row, column, pointer, unit, inside)
        if name == "/data":
            pointer = unit = ""


def _plain(words: Iterable[str]) -> str:
    text = " ".join(unescape("".join(words)).split())
    return text if len(text) <= 60 else f"{text[:59]}…"
