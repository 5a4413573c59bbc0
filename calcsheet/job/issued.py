"""The records that a job has issued, as plain data: the folder issued/ read, newest revision last."""

from __future__ import annotations

import json
import math
import re
from collections.abc import Mapping
from dataclasses import dataclass, replace
from pathlib import Path
from typing import Any

from calcsheet.job.errors import InputError

FOLDER = "issued"
LARGEST = 32 * 1024 * 1024
"""Bytes of the largest file that is read."""
DRAFT = "DRAFT"
"""Status of a record that nobody is to rely on."""


@dataclass(frozen=True)
class IssuedRecord:
    """An issued record.

    Parameters
    ----------
    path : Path
        Its JSON file.
    revision, date : str
        Revision, and day as ISO 8601 has it, of its job card.
    record : mapping
        Its data: those of another program's file where somebody put one there, so trusted by nobody.
    drafts : tuple of str
        Revisions of the drafts issued after it, where a revision is held against it in their place.
    """

    path: Path
    revision: str
    date: str
    record: Mapping[str, Any]
    drafts: tuple[str, ...] = ()


def issued_records(folder: Path) -> tuple[IssuedRecord, ...]:
    """The issued records of a job, one a revision: the one with the most signatures.

    Parameters
    ----------
    folder : Path
        The job folder; one that has issued nothing yet gives none.

    Returns
    -------
    tuple of IssuedRecord
        By date, then by revision, "9" before "10".

    Raises
    ------
    InputError
        A JSON file that is none, is too large, or holds no record.
    """
    root = folder / FOLDER
    revisions = sorted(p for p in root.iterdir() if _is_revision(p)) if root.is_dir() else []
    found = [_most_signed(path) for path in revisions]
    return tuple(sorted(found, key=lambda record: (record.date, natural(record.revision))))


def issued_record(folder: Path, revision: str, against: str | None = None) -> IssuedRecord | None:
    """The issued record that a revision is held against.

    Parameters
    ----------
    folder : Path
        The job folder.
    revision : str
        The job's present revision, which is not held against itself.
    against : str, optional
        The revision asked for; where omitted, the newest other one that is no draft, or the newest draft if all are.

    Returns
    -------
    IssuedRecord or None
        None where no other one is issued and none is asked for.

    Raises
    ------
    InputError
        The one asked for is not issued, or as in `issued_records`.
    """
    records = issued_records(folder)
    if against is None:
        others = [r for r in records if r.revision != revision]
        firm = [i for i, r in enumerate(others) if r.record.get("status") != DRAFT]
        if not firm:
            return others[-1] if others else None
        return replace(others[firm[-1]], drafts=tuple(r.revision for r in others[firm[-1] + 1 :]))
    for found in records:
        if found.revision == against:
            return found
    names = ", ".join(f'"{r.revision}"' for r in records)
    there = f"must be one of those issued: {names}" if names else "nothing is issued yet"
    raise InputError("", "against", f'got revision "{against}"', there)


def read_json(path: Path) -> Any:
    """Read a file of plain JSON.

    Raises
    ------
    InputError
        Larger than `LARGEST`, no UTF-8, no JSON, a key twice in one object, or a number that is not finite.
    """
    with path.open("rb") as file:
        content = file.read(LARGEST + 1)
    if len(content) > LARGEST:
        raise InputError(path.name, "", "too large", f"must be at most {LARGEST // 2**20} MB")
    try:
        text = content.decode("utf-8-sig")
        return json.loads(text, object_pairs_hook=_once, parse_constant=_finite, parse_float=_finite)
    except RecursionError:
        raise InputError(path.name, "", "nested too deeply", "must be the JSON of a record") from None
    except ValueError as error:
        raise InputError(path.name, "", f"no plain JSON: {error}", "must be the JSON of a record") from None


def natural(name: str) -> tuple[tuple[int, int, str], ...]:
    """A name as it is sorted: its numbers by value, before letters."""
    parts = re.findall(r"\d+|\D+", name, re.ASCII)
    return tuple((0, int(p), "") if p.isdigit() and p.isascii() else (1, 0, p.casefold()) for p in parts)


def _is_revision(path: Path) -> bool:
    """A folder with JSON files; one that begins with a point is still being built."""
    return path.is_dir() and not path.name.startswith(".") and any(path.glob("*.json"))


def _most_signed(folder: Path) -> IssuedRecord:
    records = [_record(path) for path in sorted(folder.glob("*.json"))]
    return max(records, key=lambda r: len(r.record.get("signatures", ())))


def _record(path: Path) -> IssuedRecord:
    data = read_json(path)
    try:
        job = data["payloads"]["card"]["inputs"]["job"]
        revision, date, signatures = job["revision"], job["date"], data.get("signatures", [])
    except (KeyError, TypeError, IndexError, AttributeError):
        revision = date = signatures = None
    if not (isinstance(revision, str) and isinstance(date, str) and isinstance(signatures, list)):
        raise InputError(path.name, "", "no record", "must be the JSON of an issued record")
    return IssuedRecord(path, revision, date, data)


def _once(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    found = dict(pairs)
    if len(found) != len(pairs):
        raise ValueError("a key stands twice in one object")
    return found


def _finite(text: str) -> float:
    number = float(text)
    if not math.isfinite(number):
        raise ValueError(f"{text[:40]} is no finite number")
    return number
