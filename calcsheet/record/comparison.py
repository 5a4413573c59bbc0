"""Two issued records held against each other."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from calcsheet.job.errors import InputError
from calcsheet.job.issued import issued_record
from calcsheet.record.errors import RecordError
from calcsheet.record.recordfile import read_record
from calcsheet.render.changes_text import as_text
from calcsheet.steps.compare import Changes, compared
from calcsheet.steps.earlier import Earlier, earlier_of
from calcsheet.steps.serial import to_json

SYSTEMS = ("SI", "US")


@dataclass(frozen=True)
class Comparison:
    """Two records and what changed from one to the other.

    Parameters
    ----------
    before, now : Earlier
        What can be said of each.
    changes : Changes
        What changed.
    """

    before: Earlier
    now: Earlier
    changes: Changes

    @property
    def text(self) -> str:
        """The comparison in words, in the units of the later record."""
        sides = [f"revision {e.revision} of {e.date}, {e.status}" for e in (self.before, self.now)]
        return as_text(self.changes, _system(self.now), title=f"{sides[0]} → {sides[1]}")

    @property
    def data(self) -> dict[str, Any]:
        """The comparison as plain JSON."""
        identity = ("revision", "date", "status", "fingerprints", "signatures")
        before, now = ({k: to_json(getattr(side, k)) for k in identity} for side in (self.before, self.now))
        return {"same": self.changes.same, "before": before, "now": now, "changes": to_json(self.changes)}


def comparison(places: Sequence[str]) -> Comparison:
    """Compare two records.

    Parameters
    ----------
    places : sequence of str
        Two records' files, each HTML, PDF or JSON; or a job folder and two of its issued revisions.

    Raises
    ------
    RecordError
        Neither of the two, or a file that can't be read.
    InputError
        A revision that is not issued, or a file that holds no record.
    """
    if len(places) == 3 and Path(places[0]).is_dir():
        folder, *revisions = places
        before, now = (_issued(Path(folder), revision) for revision in revisions)
    elif len(places) == 2:
        before, now = (earlier_of(read_record(Path(p)).record, Path(p).name) for p in places)
    else:
        found = " ".join(places) or "nothing"
        raise RecordError(f"got {found}; must be two records, or a job folder and two of its issued revisions")
    for side in (before, now):
        _system(side)
    return Comparison(before, now, compared(before.facts, now.facts))


def _issued(folder: Path, revision: str) -> Earlier:
    found = issued_record(folder, "", revision)
    assert found is not None  # one that is asked for is there, or refused
    return earlier_of(found.record, found.path.name)


def _system(side: Earlier) -> str:
    """The record's system of units."""
    system = next((g.text for g in side.facts.inputs if g.key == "units.system"), "")
    if system not in SYSTEMS:
        raise InputError(f"revision {side.revision}", "units.system", f'got "{system[:20]}"', 'must be "SI" or "US"')
    return system
