"""What a check found, and the report of all that it found."""

from __future__ import annotations

from dataclasses import asdict, dataclass
from typing import Any

AGREES, DIFFERS, NOT_ASSESSED = "agrees", "differs", "not assessed"
PARTS = ("data", "print", "replay", "second route", "signatures")
"""Parts of a check, in the order of the report."""
SHOWN = 20
"""Differences of a part that the report in words prints."""


@dataclass(frozen=True)
class Finding:
    """One thing found.

    Parameters
    ----------
    part : str
        Part of the check, one of `PARTS`.
    verdict : {"agrees", "differs", "not assessed"}
        The outcome.
    text : str
        What was compared and found, in one sentence without its full stop.
    place : str
        Where: section, row, page, step, or JSON pointer; empty where it is the whole record.
    """

    part: str
    verdict: str
    text: str
    place: str = ""

    def __str__(self) -> str:
        return f"{self.place}: {self.text}" if self.place else self.text


@dataclass(frozen=True)
class Report:
    """All that a check found.

    Parameters
    ----------
    file : str
        Name of the file.
    title : str
        What it is: calculation, revision, status, by its data.
    findings : tuple of Finding
        In the order of `PARTS`.
    """

    file: str
    title: str
    findings: tuple[Finding, ...]

    @property
    def differs(self) -> bool:
        """Whether anything differs."""
        return any(finding.verdict == DIFFERS for finding in self.findings)

    @property
    def exit_code(self) -> int:
        """1 where anything differs, else 0."""
        return int(self.differs)

    def verdict_of(self, part: str) -> str:
        """The outcome of a part: that it differs counts most, then that something of it agrees."""
        found = {finding.verdict for finding in self.findings if finding.part == part}
        return next((verdict for verdict in (DIFFERS, AGREES) if verdict in found), NOT_ASSESSED)

    def words(self) -> str:
        """The report in words: a line a part, then what was found; of differences at most `SHOWN` a part."""
        lines = [f"{self.file}: {self.title}"]
        for part in PARTS:
            found = [finding for finding in self.findings if finding.part == part]
            differing = [finding for finding in found if finding.verdict == DIFFERS]
            lines.append(f"{part}: {self.verdict_of(part)}")
            lines += [f"    differs: {finding}" for finding in differing[:SHOWN]]
            if len(differing) > SHOWN:
                lines.append(f"    differs: and {len(differing) - SHOWN} more, {len(differing)} in all")
            lines += [f"    {finding.verdict}: {finding}" for finding in found if finding.verdict != DIFFERS]
        said = "The record differs from itself" if self.differs else "Nothing differs"
        if any(finding.verdict == NOT_ASSESSED for finding in self.findings):
            said += "; not everything was assessed"
        return "\n".join([*lines, f"{said}."])

    def as_json(self) -> dict[str, Any]:
        """The report as plain JSON."""
        parts = {part: self.verdict_of(part) for part in PARTS}
        verdict = DIFFERS if self.differs else AGREES
        found = [asdict(finding) for finding in self.findings]
        return {"file": self.file, "title": self.title, "verdict": verdict, "parts": parts, "findings": found}
