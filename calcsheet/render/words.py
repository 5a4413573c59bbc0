"""Worked lines and evidence as tables, and texts with numbers in them: the parts that every step's payload has."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from html import escape
from typing import Any

from calcsheet.render.numbers import exponent, number
from calcsheet.render.symbols import symbols
from calcsheet.render.table import Column, table, words

Located = tuple[str, dict[str, Any]]
"""A part of a payload with the JSON pointer of its step."""


def filled(template: str, numbers: Iterable[Mapping[str, Any]], system: str, step: str, own: bool = False) -> str:
    """HTML of a text with places ``{0}`` … for numbers of the step at JSON pointer `step`.

    Where the text is the program's `own`, its symbols are set.
    """
    shown = [number(n["value"], n["quantity"], system, f"{step}/{n['at']}") for n in numbers]
    text = symbols(template) if own else escape(template, quote=False)
    return text.format(*shown)


def worked(lines: Iterable[Located], system: str) -> str:
    """Table of worked lines."""
    rows = list(lines)
    results = (
        number(n["value"], n["quantity"], system, f"{at}/{n['at']}") for at, line in rows for n in [line["result"]]
    )
    return table(
        (
            Column("quantity", tuple(symbols(line["quantity"]) for _, line in rows), numeric=False),
            Column("relation", tuple(symbols(line["relation"]) for _, line in rows), numeric=False),
            Column(
                "with values",
                tuple(filled(line["substitution"], line["numbers"], system, at, own=True) for at, line in rows),
                numeric=False,
            ),
            Column("result", tuple(results)),
            Column("reference", tuple(symbols(line["reference"]) for _, line in rows), numeric=False),
        ),
        kind="lines",
    )


def evidence(found: Iterable[Located]) -> str:
    """Table of evidence; `found` holds each figure with its own JSON pointer."""
    rows = list(found)
    verdicts = [outcome("passes" if e["within"] else "exceeds") for _, e in rows]
    return table(
        (
            words("evidence", [e["what"] for _, e in rows]),
            words("measure", [e["relation"] for _, e in rows]),
            Column("figure", tuple(exponent(e["value"], f"{at}/value") for at, e in rows)),
            Column("limit", tuple(exponent(e["limit"], f"{at}/limit") for at, e in rows)),
            Column("judged", tuple(verdicts), numeric=False),
        ),
        kind="evidence",
        marked=[i for i, (_, e) in enumerate(rows) if not e["within"]],
    )


def outcome(word: str) -> str:
    """HTML of one of the four outcomes: passes, exceeds, judgement, not assessed."""
    return f'<span class="{word.replace(" ", "-")}">{word}</span>'
