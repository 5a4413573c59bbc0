"""The status of a record and what keeps it a draft."""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator, Mapping
from typing import Any

from calcsheet.job.card import dotted, shorten
from calcsheet.steps.step import Payload

DRAFT, FOR_CHECKING = "DRAFT", "FOR CHECKING"
TEMPLATE_TEXT = re.compile(r"Project name|Name of the engineer|0000-S-001|Say (what|where|which|why)\b.*", re.DOTALL)
"""A text of a new job's card that waits for the engineer's own."""


def held_back(payloads: Mapping[str, Payload], words: Iterable[str] = ()) -> tuple[str, ...]:
    """What keeps a record a DRAFT, a clause each; nothing where it may go for checking.

    Parameters
    ----------
    payloads : mapping of str to payload
        The job's steps, by key.
    words : iterable of str
        Sources of the notebook's markdown cells.
    """
    card, reasons = payloads["card"]["inputs"], []
    beyond = [e["what"] for p in payloads.values() for e in p["evidence"] if not e["within"]]
    if beyond:
        reasons.append(f"evidence beyond its limit: {'; '.join(beyond)}")
    unanswered = [
        c["key"]
        for p in payloads.values()
        for c in p["cautions"]
        if c["answer"] and not card["answers"].get(c["key"], "").strip()
    ]
    if unanswered:
        reasons.append(f"cautions that need an answer: {', '.join(unanswered)}")
    if not card["people"]["prepared"]["date"]:
        reasons.append("not signed by who prepared it: people.prepared has no date")
    left = [*_left_in_card(card), *_left_in_words(words)]
    if left:
        reasons.append(f"texts of the template: {', '.join(left)}")
    return tuple(reasons)


def status_of(payloads: Mapping[str, Payload], words: Iterable[str] = ()) -> str:
    """DRAFT or FOR CHECKING: further words are for those who check and approve the issued record."""
    return DRAFT if held_back(payloads, words) else FOR_CHECKING


def _left_in_card(value: Any, *keys: str | int) -> Iterator[str]:
    """Keys of the card that hold a text of the template."""
    if isinstance(value, str):
        if TEMPLATE_TEXT.fullmatch(value.strip()):
            yield dotted(keys)
    elif isinstance(value, Mapping | list):
        for key, item in value.items() if isinstance(value, Mapping) else enumerate(value):
            yield from _left_in_card(item, *keys, key)


def _left_in_words(words: Iterable[str]) -> Iterator[str]:
    """Markdown cells, by their first line, that hold a sentence of the template."""
    for source in words:
        lines = source.strip().splitlines()
        if any(TEMPLATE_TEXT.fullmatch(line.strip()) for line in lines):
            yield f'cell "{shorten(lines[0].lstrip("# "))}"'
