"""An earlier revision: its facts, kept in the present record so that what changed can be printed from it alone."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from pathlib import Path
from typing import Any

from calcsheet.job.errors import InputError
from calcsheet.job.issued import issued_record
from calcsheet.steps.compare import EARLIER as KIND
from calcsheet.steps.compare import Facts, facts_of
from calcsheet.steps.step import Caution, Outcome, Payload, Step, calculated, plain

SIGNED = ("CHECKED", "APPROVED")
"""Statuses whose signatures a reader may take to hold for the next revision too."""


@dataclass(frozen=True)
class Earlier:
    """An earlier revision of the calculation.

    Parameters
    ----------
    revision : str
        Its revision; empty where this is the first issue.
    date : str
        Its day, as ISO 8601 has it.
    status : str
        Its status word.
    fingerprints : mapping of str to str
        Its fingerprints, as it states them.
    signatures : tuple of str
        Who signed it, such as "checked by A. Name, 2026-01-31".
    facts : Facts
        What can be said of it.
    drafts : tuple of str
        Revisions of the drafts issued after it.
    """

    revision: str
    date: str
    status: str
    fingerprints: Mapping[str, str]
    signatures: tuple[str, ...]
    facts: Facts
    drafts: tuple[str, ...] = ()


NOTHING = Earlier("", "", "", {}, (), Facts((), (), (), ()))
"""Stands where nothing was issued before."""


@dataclass(frozen=True)
class Held:
    """What is held of the earlier revision.

    Parameters
    ----------
    first : bool
        Whether there is none: this is the first issue.
    inputs, headlines, conclusions : int
        Numbers of its facts.
    """

    first: bool
    inputs: int
    headlines: int
    conclusions: int


def run(earlier: Earlier) -> Outcome:
    facts = earlier.facts
    cautions = []
    if earlier.status in SIGNED:
        who = f" ({'; '.join(earlier.signatures)})" if earlier.signatures else ""
        text = f"Revision {earlier.revision} was {earlier.status}{who}: its signatures do not cover this revision."
        cautions.append(Caution("lapsed-signatures", plain(text)))
    held = Held(not earlier.revision, len(facts.inputs), len(facts.headlines), len(facts.conclusions))
    return Outcome(held, cautions=tuple(cautions))


def earlier_of(record: Mapping[str, Any], called: str = "record") -> Earlier:
    """What a later revision keeps of a record.

    Parameters
    ----------
    record : mapping
        An issued record of any format, as plain JSON; it may hold anything.
    called : str
        Its name, for messages.

    Raises
    ------
    InputError
        It is no record.
    """
    try:
        job = record["payloads"]["card"]["inputs"]["job"]
        signed = record.get("signatures", [])
        return Earlier(
            revision=str(job["revision"]),
            date=str(job["date"]),
            status=str(record["status"]),
            fingerprints={str(k): str(v) for k, v in record["fingerprints"].items()},
            signatures=tuple(f"{s['role']} by {s['name']}, {s['date']}" for s in signed),
            facts=facts_of(record["payloads"]),
        )
    except (KeyError, TypeError, ValueError, IndexError, AttributeError, OverflowError, RecursionError):
        allowed = "must be a record whose steps hold what steps of their kind do"
        raise InputError(called, "", "no record that can be compared", allowed) from None


def last_issued(folder: Path, revision: str, against: str | None = None) -> Earlier:
    """The issued revision that the present one is held against, `NOTHING` where there is none.

    Arguments and errors are those of `calcsheet.job.issued.issued_record`.
    """
    found = issued_record(folder, revision, against)
    return NOTHING if found is None else replace(earlier_of(found.record, found.path.name), drafts=found.drafts)


def earlier_payload(folder: Path, revision: str) -> Payload | None:
    """Payload of this step for a job whose notebook doesn't ask for one; None at the first issue.

    Parameters
    ----------
    folder : Path
        The job folder.
    revision : str
        The revision that is being issued.
    """
    earlier = last_issued(folder, revision)
    return calculated(EARLIER, {}, earlier, ()) if earlier.revision else None


EARLIER = Step(KIND, 1, "Earlier revision", Earlier, Held, (), run)
