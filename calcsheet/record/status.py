"""The status of a record and what keeps it a draft."""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator, Mapping
from typing import Any

from calcsheet.job.wording import dotted, shorten
from calcsheet.record.fingerprints import Record, covered, fingerprints_of
from calcsheet.render.answers import raised
from calcsheet.steps.step import Payload

DRAFT, FOR_CHECKING, CHECKED, APPROVED = "DRAFT", "FOR CHECKING", "CHECKED", "APPROVED"
ROLES = PREPARED, CHECKED_ROLE, APPROVED_ROLE = "prepared", "checked", "approved"
NOT_SIGNED = "not signed by who prepared it: people.prepared has no date"
UNANSWERED = "cautions that need an answer"
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
    unanswered = [f"{one.key} ({one.said})" for one in raised(payloads) if one.waits]
    if unanswered:
        reasons.append(f"{UNANSWERED}: {', '.join(unanswered)}")
    left = [*_left_in_card(card), *_left_in_words(words)]
    if left:
        reasons.append(f"texts of the template: {', '.join(left)}")
    return tuple(reasons)


def reasons(record: Record) -> tuple[str, ...]:
    """What keeps a record a DRAFT, its originator's missing signature too."""
    return held(record) if PREPARED in valid(record) else (*held(record), NOT_SIGNED)


def held(record: Record) -> tuple[str, ...]:
    """What keeps a record a DRAFT whoever signs."""
    return held_back(record["payloads"], [part["words"] for part in record["notebook"] if "words" in part])


def status_of(record: Record) -> str:
    """DRAFT, FOR CHECKING, CHECKED or APPROVED.

    What holds a record back keeps it a DRAFT whoever signed; an open comment keeps it from APPROVED.
    """
    signed = valid(record)
    if reasons(record):
        return DRAFT
    if APPROVED_ROLE in signed and CHECKED_ROLE in signed and not open_comments(record):
        return APPROVED
    return CHECKED if CHECKED_ROLE in signed else FOR_CHECKING


def valid(record: Record) -> dict[str, Mapping[str, Any]]:
    """By role, the signatures that cover this record's inputs, notebook and results as they are."""
    now = covered(fingerprints_of(record))
    return {s["role"]: s for s in record["signatures"] if s["covers"] == now}


def open_comments(record: Record) -> list[Mapping[str, Any]]:
    """Comments that nobody has closed."""
    return [comment for comment in record["comments"] if not comment["closed_by"]]


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
