"""Comments of those who check, as a table."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from html import escape
from typing import Any

from calcsheet.render.table import Column, table

NONE = "\u2013"
OPEN = '<span class="word">open</span>'


def comments(found: Sequence[Mapping[str, Any]]) -> str:
    """HTML of comments, with their reply and who closed them.

    Parameters
    ----------
    found : sequence of mapping
        As a record holds them; those that are open are marked.
    """
    if not found:
        return "<p>None.</p>"
    columns = (
        Column("", tuple(str(c["number"]) for c in found)),
        Column("revision", tuple(escape(c["revision"]) for c in found), numeric=False),
        Column("comment", tuple(_said(c["comment"], c["by"], c["date"], c["where"]) for c in found), numeric=False),
        Column("reply", tuple(_said(c["reply"], c["replied_by"], c["replied_on"]) for c in found), numeric=False),
        Column("closed by", tuple(_closed(c) for c in found), numeric=False),
    )
    return table(columns, kind="words comments", marked=[i for i, c in enumerate(found) if not c["closed_by"]])


def _said(text: str, by: str, date: str, where: str = "") -> str:
    """HTML of a text, line by line, above who said it."""
    if not text:
        return NONE
    place = f"<b>{escape(where)}:</b> " if where else ""
    who = f'<span class="below">{escape(by)}, <time>{escape(date)}</time></span>'
    return f"{place}{'<br>'.join(map(escape, text.splitlines()))}<br>{who}"


def _closed(comment: Mapping[str, Any]) -> str:
    if not comment["closed_by"]:
        return OPEN
    return f'{escape(comment["closed_by"])}<br><time class="below">{escape(comment["closed_on"])}</time>'
