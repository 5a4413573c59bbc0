"""Tables of HTML: columns of one quantity each, aligned on the decimal point."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from html import escape

from calcsheet.render.numbers import decimals_for, decimals_given, heading, number
from calcsheet.units import display

SHORT = 15
"""Rows up to which a table is kept on one page."""
UNIT = re.compile(r"\[[^\]]+\]$")
"""The unit at the end of a heading, which is not to be broken."""


@dataclass(frozen=True)
class Column:
    """A column of a table.

    Parameters
    ----------
    heading : str
        Its heading, as text.
    cells : tuple of str
        HTML of its cells.
    numeric : bool
        Whether it is set as numbers.
    """

    heading: str
    cells: tuple[str, ...]
    numeric: bool = True


def words(name: str, texts: Sequence[str]) -> Column:
    """A column of plain texts, escaped here."""
    return Column(name, tuple(escape(t) for t in texts), numeric=False)


def values(
    name: str,
    numbers: Sequence[float | None],
    quantity: str,
    system: str,
    at: str | Sequence[str],
    *,
    order: Sequence[int] | None = None,
    digits: int | None = None,
    as_given: bool = False,
) -> Column:
    """A column of one quantity, all cells with the same decimals.

    Parameters
    ----------
    name : str
        Heading without its unit.
    numbers : sequence of float or None
        In core units; None leaves a cell blank.
    quantity, system : str
        As in `calcsheet.render.numbers.number`.
    at : str or sequence of str
        JSON pointer of the entries, with ``{}`` in the place of the index; of the array, where there is none; or the
        pointer of each entry.
    order : sequence of int, optional
        Indices in the order of the rows.
    digits : int, optional
        Significant digits of the largest; the quantity's own where omitted.
    as_given : bool
        Show every digit that was given, as inputs must be.
    """
    how = display(quantity, system)
    if isinstance(at, str):
        at = [(at if "{}" in at else f"{at}/{{}}").format(i) for i in range(len(numbers))]
    shown = [how.of(v) for v in numbers if v is not None]
    places = decimals_given(shown) if as_given else decimals_for(shown, digits or how.digits)
    if quantity == "share":
        places = 1
    cells = []
    for i in range(len(numbers)) if order is None else order:
        value = numbers[i]
        cell = "" if value is None else number(value, quantity, system, at[i], decimals=places, unit=False)
        cells.append(cell)
    return Column(heading(name, quantity, system), tuple(cells))


def table(
    columns: Sequence[Column], *, kind: str, caption: str = "", marked: Sequence[int] = (), foot: str = ""
) -> str:
    """HTML of a table.

    Parameters
    ----------
    columns : sequence of Column
        All of one length.
    kind : str
        Class of the table: "values", "lines", "evidence" …
    caption : str
        Caption, as text.
    marked : sequence of int
        Rows set off from the others.
    foot : str
        HTML of a last row's cells.
    """
    heads = "".join(
        _cell("th", ' scope="col"', c, UNIT.sub(r'<span class="unit">\g<0></span>', escape(c.heading))) for c in columns
    )
    rows = []
    for i in range(len(columns[0].cells)):
        first, *others = columns
        if kind == "values":  # its first column names the row
            cells = f'<th scope="row">{first.cells[i]}</th>'
        else:
            cells = _cell("td", "", first, first.cells[i])
        cells += "".join(_cell("td", "", c, c.cells[i]) for c in others)
        rows.append(f"<tr{' class=marked' if i in marked else ''}>{cells}</tr>")
    title = f"<caption>{escape(caption)}</caption>" if caption else ""
    tail = f"<tfoot><tr>{foot}</tr></tfoot>" if foot else ""
    size = " short" if len(rows) <= SHORT else ""
    return f'<table class="{kind}{size}">{title}<thead><tr>{heads}</tr></thead><tbody>{"".join(rows)}</tbody>{tail}</table>'


def _cell(tag: str, attributes: str, column: Column, html: str) -> str:
    kind = "" if column.numeric else ' class="text"'
    return f"<{tag}{attributes}{kind}>{html}</{tag}>"


def facts(rows: Sequence[tuple[str, str]]) -> str:
    """HTML of a two-column table of labels (text) and values (HTML)."""
    body = "".join(f'<tr><th scope="row">{escape(label)}</th><td>{value}</td></tr>' for label, value in rows)
    return f'<table class="facts"><tbody>{body}</tbody></table>'
