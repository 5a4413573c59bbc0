"""`calcsheet check`: a record held against itself with only the file in hand."""

from __future__ import annotations

import warnings
from collections.abc import Callable, Iterator, Mapping
from pathlib import Path
from typing import Any

import numpy as np

from calcsheet.record.check.confirm import second_route
from calcsheet.record.check.data import data_findings
from calcsheet.record.check.finding import AGREES, DIFFERS, NOT_ASSESSED, Finding, Report
from calcsheet.record.check.given import said_twice
from calcsheet.record.check.layout import same_layout
from calcsheet.record.check.printed_html import html_findings
from calcsheet.record.check.printed_pdf import pdf_findings
from calcsheet.record.check.signatures import signature_findings
from calcsheet.record.errors import RecordError
from calcsheet.record.migrate import migrated
from calcsheet.record.recordfile import Read, read_record
from calcsheet.record.schema import refusal
from calcsheet.steps.replay import replay

MOST_LEVELS = 2000
MOST_WORK = 1e11
"""Steps times levels cubed: what solving them again may cost. Ten steps of 2000 levels stay below it."""


def checked(path: Path) -> Report:
    """Check a record.

    Parameters
    ----------
    path : Path
        HTML, PDF or JSON of a record.

    Returns
    -------
    Report

    Raises
    ------
    RecordError
        The file can't be read, or what it holds has not the structure of a record.
    """
    return report_on(read_record(path), path.name)


def report_on(read: Read, called: str) -> Report:
    """Check a record that is read; `called` is its file's name.

    Raises
    ------
    RecordError
        What it holds has not the structure of a record, or is larger than any.
    """
    record = _present(read.record, called)
    parts: tuple[tuple[str, Callable[[], Iterator[Finding]]], ...] = (
        ("data", lambda: data_findings(read, record)),
        ("data", lambda: said_twice(record["payloads"])),
        ("print", lambda: _print(read, record)),
        ("replay", lambda: _replay(record)),
        ("second route", lambda: second_route(record["payloads"])),
        ("signatures", lambda: signature_findings(read, record)),
    )
    with warnings.catch_warnings(), np.errstate(all="ignore"):
        warnings.simplefilter("ignore")  # of numbers that lead nowhere a finding tells
        found = [finding for part, find in parts for finding in _kept(part, find)]
    job = record["payloads"]["card"]["inputs"]["job"]
    title = f"{job['number']} revision {job['revision']}, {record['status']}, made by {record['programme']}"
    return Report(called, title, tuple(found))


def _present(given: Mapping[str, Any], called: str) -> dict[str, Any]:
    """The record in the present format, of the right structure and of a size that can be calculated."""
    try:
        record = migrated(given)
    except RecordError as error:
        raise RecordError(f"{called}: {error}") from None
    except Exception as error:  # an earlier format has no schema: whatever its migration meets
        raise RecordError(
            f"{called}: its data are no record of format {given.get('format')!r} ({type(error).__name__})"
        ) from None
    if why := refusal(record):
        raise RecordError(f"{called}: its data are not of a record's schema, {why}")
    levels = max(len(p["inputs"]["level"]) for p in record["payloads"].values() if p["kind"] == "storeys")
    if levels > MOST_LEVELS or len(record["payloads"]) * levels**3 > MOST_WORK:
        raise RecordError(
            f"{called}: {levels} levels in {len(record['payloads'])} steps; at most {MOST_LEVELS} can be checked"
        )
    return record


def _kept(part: str, find: Callable[[], Iterator[Finding]]) -> Iterator[Finding]:
    """Findings of a part; data that it can't work with are a finding too."""
    try:
        yield from find()
    except Exception as error:  # data of unknown origin can break any calculation or drawing
        said = " ".join(str(error).split())[:120]
        yield Finding(
            part, DIFFERS, f"the data can't be worked with ({type(error).__name__}{': ' if said else ''}{said})"
        )


def _print(read: Read, record: Mapping[str, Any]) -> Iterator[Finding]:
    if read.kind == "json":
        yield Finding("print", NOT_ASSESSED, "a JSON file has no print; check the record's HTML or PDF")
    else:
        yield from (html_findings if read.kind == "html" else pdf_findings)(read, record)


def _replay(record: Mapping[str, Any]) -> Iterator[Finding]:
    payloads, words = record["payloads"], same_layout(record)
    wrong = replay(payloads, words=words)
    unknown = [d for d in wrong if d.field == "version"]
    for difference in unknown:
        text = f"{difference.stored} is {difference.found} here; install {record['programme']} to have it run again"
        yield Finding("replay", NOT_ASSESSED, text, f"step {difference.step}")
    skipped = {d.step for d in unknown}
    for d in wrong:
        if d.field != "version":
            text = f"{d.field}: stored {d.stored}, run again {d.found}; {d.allowed}"
            yield Finding("replay", DIFFERS, text, f"step {d.step}")
    if len(wrong) == len(unknown) and len(skipped) < len(payloads):
        names = ", ".join(key for key in payloads if key not in skipped)
        text = f"{len(payloads) - len(skipped)} steps run again on their stored upstream results agree: {names}"
        yield Finding("replay", AGREES, text)
    if not words:
        text = "the wording of worked lines and cautions, which another version of the program put"
        yield Finding("replay", NOT_ASSESSED, text)
