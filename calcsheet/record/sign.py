"""Signing an issued record: a new file beside it, one signature more."""

from __future__ import annotations

import datetime
import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from calcsheet.job.card import FILE as CARD_FILE
from calcsheet.job.comment import Comment, Named, brought, identity
from calcsheet.job.comments import file_of, read_comments
from calcsheet.record.check.report import checked
from calcsheet.record.document import settled
from calcsheet.record.errors import RecordError
from calcsheet.record.files import KINDS, files_of
from calcsheet.record.layout import layout_of
from calcsheet.record.opened import opened
from calcsheet.record.pdf import FULL, NoEngine, choose_engine
from calcsheet.record.place import placed_beside
from calcsheet.record.register import note_of
from calcsheet.record.rules import asked_of, why_not
from calcsheet.record.signature import signature
from calcsheet.record.status import APPROVED_ROLE, CHECKED_ROLE, PREPARED, ROLES, held, open_comments, valid
from calcsheet.steps.serial import from_json, to_json

ALL = "all"
SIGNED = re.compile(rf"-({'|'.join(ROLES)})$")


@dataclass(frozen=True)
class Signed:
    """What signing made.

    Parameters
    ----------
    files : tuple of Path
        The new files, beside the ones signed.
    status : str
        Status of the record now.
    note : str
        What was not made, and why; empty where nothing is missing.
    """

    files: tuple[Path, ...]
    status: str
    note: str


def sign(
    path: Path,
    role: str,
    *,
    name: str,
    initials: str = "",
    qualification: str = "",
    registration: str = "",
    date: datetime.date | None = None,
    scope: str = "",
    remark: str = "",
    agree: Iterable[str] = (),
) -> Signed:
    """Sign a record.

    Parameters
    ----------
    path : Path
        HTML, PDF or JSON of the record. Its siblings of the same name are made anew too.
    role : {"prepared", "checked", "approved"}
        What the signer answers for.
    name, initials, qualification, registration, scope, remark : str
        As for `signature.signature`.
    date : date, optional
        Day of signing; today where omitted.
    agree : iterable of str
        Keys of the answered cautions that the checker agrees to; "all" for all of them.

    Raises
    ------
    RecordError
        The record doesn't agree with itself, is held back, was made by another version, or the role is not this
        signer's to take now.
    """
    if checked(path).differs:
        raise RecordError(f"{path.name} can't be signed: it does not agree with itself; `calcsheet check` says where")
    record = _with_comments(opened(path), path)
    keys = _agreed(record, role, tuple(agree))
    who = {"name": name, "initials": initials, "qualification": qualification, "registration": registration}
    day = date or datetime.date.today()
    if day > datetime.date.today():
        raise RecordError(f"date {day.isoformat()}; must not be after today")
    made = signature(record, role, **who, date=day.isoformat(), scope=scope, remark=remark, agreed=keys)
    if why := why_not(record, tuple(valid(record).values()), made) or _not_yet(record, role):
        raise RecordError(why)
    new = settled({**record, "signatures": [*record["signatures"], made]})
    kinds, note = _kinds(path, new)
    stem = f"{SIGNED.sub('', path.stem)}-{role}"
    files = placed_beside(path.parent, files_of(new, stem, kinds))
    job = file_of(path).parent
    if (job / CARD_FILE).is_file():
        note = "; ".join(filter(None, (note, note_of(job))))
    return Signed(tuple(files), new["status"], note)


def _with_comments(record: Mapping[str, Any], path: Path) -> dict[str, Any]:
    """The record with its comments as they stand now, and those made on its revision since."""
    card = record["payloads"]["card"]["inputs"]
    held_in = tuple(from_json(Comment, comment) for comment in record["comments"])
    now = read_comments(file_of(path), card["people"]["prepared"]["name"])
    known = set(map(identity, held_in))
    since = [c for c in now if c.revision == card["job"]["revision"] or identity(c) in known]
    merged, *_ = brought(held_in, since, Named.of(card["people"]))
    return {**record, "comments": [to_json(comment) for comment in merged]}


def _agreed(record: Mapping[str, Any], role: str, agree: tuple[str, ...]) -> tuple[str, ...]:
    keys = asked_of(record)
    if agree and role != CHECKED_ROLE:
        raise RecordError(f"only who checks agrees to answers; leave --agree out for role {role}")
    if agree == (ALL,):
        return keys
    if strange := [key for key in agree if key not in keys]:
        there = f"there are {', '.join(keys)}" if keys else "there are none"
        raise RecordError(f"no caution that needs an answer is called {', '.join(strange)}; {there}")
    return agree


def _not_yet(record: Mapping[str, Any], role: str) -> str:
    """Why a record can't be signed as it stands, beyond the rules that a signature keeps ever after.

    The job card's own signature may stand on a draft; nobody signs one by command. A comment may be opened later.
    """
    if role == PREPARED and (because := held(record)):
        return f"it is a draft: {'; '.join(because)}"
    if role == APPROVED_ROLE and (left := open_comments(record)):
        return f"open comments: {', '.join(str(c['number']) for c in left)}; close them before approval"
    return ""


def _kinds(path: Path, record: Mapping[str, Any]) -> tuple[list[str], str]:
    """Kinds of files to make: those that lie beside the one signed. The body must come out as it was signed."""
    layout = record["layout"]
    here = layout_of(layout["paper"], layout["engine"])
    if layout != here:
        made_by = record["programme"]
        raise RecordError(
            f"it was laid out by another version ({made_by}); sign it with that version, or issue it anew"
        )
    kinds = [kind for kind in KINDS if path.with_suffix(f".{kind}").is_file()]
    if "pdf" not in kinds:
        return kinds, ""
    try:
        engine = str(choose_engine(layout["engine"].partition(" ")[0]))
    except NoEngine:
        engine = ""
    if engine != layout["engine"] or not engine.startswith(FULL):
        kinds.remove("pdf")
        return (
            kinds,
            f"no PDF was made: signing asks for {FULL}, and for the version that made the record ({layout['engine']})",
        )
    return kinds, ""
