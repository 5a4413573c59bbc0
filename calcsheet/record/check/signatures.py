"""Signatures of a record and its status held against its data."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

from calcsheet.record.check.finding import AGREES, DIFFERS, NOT_ASSESSED, Finding
from calcsheet.record.check.layout import same_layout
from calcsheet.record.fingerprints import SHORT, covered, fingerprints_of
from calcsheet.record.recordfile import Read
from calcsheet.record.rules import why_not
from calcsheet.record.status import APPROVED, APPROVED_ROLE, CHECKED, CHECKED_ROLE, status_of, valid

PART = "signatures"
NEEDED = {CHECKED: CHECKED_ROLE, APPROVED: APPROVED_ROLE}
"""The signature without which there is no such status, in any version."""


def signature_findings(read: Read, record: Mapping[str, Any]) -> Iterator[Finding]:
    """What the signatures cover, and whether they keep the rules, and whether the status follows.

    Parameters
    ----------
    read : Read
        The file.
    record : mapping
        Its record in the present format.
    """
    if read.record["format"] < 2:
        yield Finding(PART, NOT_ASSESSED, "records of format 1 carry no signatures; the status is as stored")
        return
    now = covered(fingerprints_of(record))
    for i, signature in enumerate(record["signatures"]):
        who, place = f"{signature['role']} by {signature['name']}", f"/signatures/{i}"
        if signature["covers"] == now:
            text = (
                f"{who} on {signature['date']} covers these inputs, notebook and results (declared, not cryptographic)"
            )
            yield Finding(PART, AGREES, text, place)
        else:
            text = f"{who} covers {signature['covers'][:SHORT]}, the data are {now[:SHORT]}: it holds no longer"
            yield Finding(PART, DIFFERS, text, place)
        if why := why_not(record, tuple(record["signatures"][:i]), signature):
            yield Finding(PART, DIFFERS, f"{who} breaks the rules of signing: {why}", place)
    if not record["signatures"]:
        yield Finding(PART, NOT_ASSESSED, "nobody has signed")
    follows, asked = status_of(record), NEEDED.get(record["status"])
    if record["status"] == follows:
        yield Finding(PART, AGREES, f"the status {follows} follows from signatures, cautions, evidence and comments")
    elif same_layout(record) or (asked and asked not in valid(record)):
        text = f"the status is {record['status']}; from signatures, cautions, evidence and comments follows {follows}"
        yield Finding(PART, DIFFERS, text, "/status")
    else:
        yield Finding(
            PART, NOT_ASSESSED, f"the status {record['status']}, by the rules of {record['programme']}", "/status"
        )
