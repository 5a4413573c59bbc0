"""The rules of signing: asked before a signature is put on a record, and of every signature that a record carries."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from calcsheet.record.fingerprints import Record
from calcsheet.record.status import CHECKED_ROLE, PREPARED, ROLES, held
from calcsheet.render.answers import raised

Signature = Mapping[str, Any]


def why_not(record: Record, before: tuple[Signature, ...], signature: Signature) -> str:
    """Why a signature can't stand on a record; empty where it can.

    Parameters
    ----------
    record : mapping
        The record; its own signatures are not read.
    before : tuple of mapping
        The signatures that it carries already.
    signature : mapping
        The one that follows them.
    """
    role, name, card = signature["role"], signature["name"], record["payloads"]["card"]["inputs"]
    signed = {s["role"]: s for s in before}
    if not name.strip():
        return "name: got a blank; must be the signer's name"
    if role in signed:
        return f"it is signed already: {role} by {signed[role]['name']}; the next revision is signed anew"
    if missing := [other for other in ROLES[: ROLES.index(role)] if other not in signed]:
        return f"out of order: {role} comes after {missing[0]}, which nobody has signed"
    if role != PREPARED and (because := held(record)):
        return f"it is a draft: {'; '.join(because)}"
    author = signed.get(PREPARED)
    if author and not card["people"].get("same_person_may_check") and same_person(author, signature):
        who = "checker" if role == CHECKED_ROLE else "approver"
        return f"{name} prepared it; the {who} must be another person (people.same_person_may_check in job.toml)"
    if before and signature["date"] < before[-1]["date"]:
        earlier = before[-1]
        return f"date {signature['date']}; must not be before {earlier['date']}, when it was {earlier['role']}"
    left = sorted({*asked_of(record)} - {*signature["agreed"]}) if role == CHECKED_ROLE else []
    if left:
        return f"answers to cautions that the checker has yet to agree to: {', '.join(left)}; --agree KEY each, or --agree all"
    return ""


def asked_of(record: Record) -> tuple[str, ...]:
    """Keys of the cautions that ask for an answer, each of which the checker agrees to."""
    return tuple(one.key for one in raised(record["payloads"]) if one.caution["answer"])


def same_person(one: Signature, other: Signature) -> bool:
    """Whether two signers are one: by registration, by name, or by surname and an initial for the first name."""
    registrations = [_plain(who["registration"]) for who in (one, other)]
    if registrations[0] and registrations[0] == registrations[1]:
        return True
    names = [_plain(who["name"]).replace(".", " ").split() for who in (one, other)]
    if not all(names):
        return False
    initial = any(len(words) > 1 and len(words[0]) == 1 for words in names)
    return names[0] == names[1] or (
        initial and names[0][-1] == names[1][-1] and names[0][0][0] == names[1][0][0] and min(map(len, names)) > 1
    )


def _plain(text: str) -> str:
    return " ".join(text.split()).casefold()
