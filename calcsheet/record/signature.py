"""Signatures of a record: declared by name, covering its inputs, notebook and results; and how they are printed."""

from __future__ import annotations

import datetime
from collections.abc import Iterable, Mapping
from html import escape
from typing import Any

from calcsheet.record.fingerprints import SHORT, Record, covered, fingerprints_of
from calcsheet.record.page import spoken
from calcsheet.record.status import valid
from calcsheet.render.comments import comments
from calcsheet.render.table import Column, table, words

DECLARED = (
    "<p>Signatures are declared by name and date; they are not cryptographic. Each covers the inputs, the notebook and the "
    "results by their fingerprint, and holds as long as these stay as they were signed.</p>"
)


def signature(
    record: Record,
    role: str,
    *,
    name: str,
    date: str,
    initials: str = "",
    qualification: str = "",
    registration: str = "",
    scope: str = "",
    remark: str = "",
    agreed: Iterable[str] = (),
) -> dict[str, Any]:
    """A signature on a record as it is now.

    Parameters
    ----------
    record : mapping
        The record; its signatures, comments, status and fingerprints do not matter.
    role : str
        "prepared", "checked" or "approved".
    name, initials, qualification, registration : str
        Who signs; initials are made from the name where omitted.
    date : str
        Day, as ISO 8601 has it.
    scope, remark : str
        What was checked, and anything else to be said.
    agreed : iterable of str
        Keys of the cautions to whose answers the signer agrees.

    Returns
    -------
    dict
        Plain JSON: the above, and "covers", the fingerprint of those of inputs, notebook and results.
    """
    return {
        "role": role,
        "name": name,
        "initials": initials or "".join(word[0] for word in name.replace("-", " ").split()).upper(),
        "qualification": qualification,
        "registration": registration,
        "date": date,
        "scope": scope,
        "remark": remark,
        "agreed": sorted(agreed),
        "covers": covered(fingerprints_of(record)),
    }


def sign_off(record: Record) -> str:
    """HTML of the signatures in full, and of the comments."""
    return DECLARED + _signatures(record) + "<h3>Comments of the checkers</h3>" + comments(record["comments"])


def _signatures(record: Record) -> str:
    signed, holds = record["signatures"], valid(record)
    if not signed:
        return "<p>Nobody has signed.</p>"
    said = ((f"{s['scope']}. " if s["scope"] else "") + s["remark"] for s in signed)
    return table(
        (
            words("role", [s["role"] for s in signed]),
            Column("name", tuple(_named(s) for s in signed), numeric=False),
            words("date", [spoken(datetime.date.fromisoformat(s["date"])) for s in signed]),
            words("scope, remark", [text.strip() or "\u2013" for text in said]),
            words("covers", [s["covers"][:SHORT] for s in signed]),
            words("holds", ["yes" if holds.get(s["role"]) == s else "no longer" for s in signed]),
        ),
        kind="words",
    )


def _named(who: Mapping[str, Any]) -> str:
    held = ", ".join(who[k] for k in ("qualification", "registration") if who[k])
    return escape(who["name"]) + (f'<br><span class="below">{escape(held)}</span>' if held else "")
