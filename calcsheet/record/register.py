"""The register of a job's issued revisions, issued/register.csv: rebuilt from the records, never edited."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import astuple, dataclass, fields, replace
from pathlib import Path
from typing import Any

from calcsheet.job import textfile
from calcsheet.job.csvfile import csv_bytes
from calcsheet.job.errors import ConflictError, InputError
from calcsheet.job.issued import FOLDER as ISSUED
from calcsheet.job.issued import natural, read_json
from calcsheet.record.errors import RecordError
from calcsheet.record.fingerprints import SHORT
from calcsheet.record.status import APPROVED, CHECKED, DRAFT, FOR_CHECKING, ROLES

FILE = "register.csv"
UNREADABLE = "unreadable"
RISING = (DRAFT, FOR_CHECKING, CHECKED, APPROVED)


@dataclass(frozen=True)
class Row:
    """A revision in the register; each field is a column.

    Parameters
    ----------
    revision, date : str
        Name and date, as the job card had them.
    status : str
        The highest that any of the revision's files has; "unreadable" where none can be read.
    fingerprint_of_inputs, fingerprint_of_results, fingerprint_of_notebook : str
        Their first twelve digits.
    prepared_by, checked_by, approved_by : str
        Who prepared it, who signed.
    reason_for_issue : str
        Why it was issued.
    superseded_by : str
        The next revision; empty for the last.
    files : str
        Names of the JSON files that the row is made from.
    """

    revision: str
    date: str
    status: str
    fingerprint_of_inputs: str = ""
    fingerprint_of_results: str = ""
    fingerprint_of_notebook: str = ""
    prepared_by: str = ""
    checked_by: str = ""
    approved_by: str = ""
    reason_for_issue: str = ""
    superseded_by: str = ""
    files: str = ""


_PRINTS = tuple(f.name for f in fields(Row) if f.name.startswith("fingerprint_of_"))
COLUMNS = tuple(f.name.replace("_", " ") for f in fields(Row))


def rebuilt(folder: Path) -> Path:
    """Write a job's register anew from its records; its path.

    It is written again until it tells what is there, so that of two who issue at the same time neither loses a row.
    In a cell that a spreadsheet would take for a formula an apostrophe goes first.

    Parameters
    ----------
    folder : Path
        The job folder.

    Raises
    ------
    RecordError
        Nothing is issued.
    NotSavedError
        The register can't be written, as when a spreadsheet holds it open.
    """
    path = folder / ISSUED / FILE
    while True:
        content = _content(folder)
        try:
            textfile.write(path, content, textfile.stamp(path))
        except ConflictError:
            continue
        if content == _content(folder):
            return path


def note_of(folder: Path) -> str:
    """Write a job's register anew: a record that is in its place stands, whatever keeps the register from being written.

    Parameters
    ----------
    folder : Path
        The job folder.

    Returns
    -------
    str
        What kept it from being written and what to do, in one clause; empty where it was.
    """
    try:
        rebuilt(folder)
    except (InputError, RecordError, OSError) as error:
        return f"{error}; then `calcsheet register {folder}` writes it"
    return ""


def rows_of(folder: Path) -> tuple[Row, ...]:
    """The register's rows, in the order of the revisions: by date, then by name; those that can't be read last.

    A folder with no file that can be read is a row, and so are the files that can't be read in a folder with others.

    Parameters
    ----------
    folder : Path
        The job folder.

    Raises
    ------
    RecordError
        Nothing is issued.
    """
    issued = folder / ISSUED
    places = [p for p in issued.iterdir() if p.is_dir() and not p.name.startswith(".")] if issued.is_dir() else []
    if not places:
        raise RecordError(f"nothing is issued in {folder}; `calcsheet issue {folder}` issues a record")
    found = [row for place in places for row in _rows(place)]
    read = sorted((r for r in found if r.status != UNREADABLE), key=lambda r: (r.date, natural(r.revision)))
    after = [*(row.revision for row in read[1:]), ""]
    unread = sorted((r for r in found if r.status == UNREADABLE), key=lambda r: natural(r.revision))
    return (*(replace(row, superseded_by=later) for row, later in zip(read, after, strict=True)), *unread)


def lines(folder: Path) -> list[str]:
    """The register in words, a line a revision; folder and errors as for `rows_of`."""
    said = []
    for row in rows_of(folder):
        people = [f"{role} by {name}" for role, name in zip(ROLES, _people(row), strict=True) if name]
        after = f"superseded by {row.superseded_by}" if row.superseded_by else ""
        inputs = f"inputs {row.fingerprint_of_inputs}" if row.fingerprint_of_inputs else ""
        parts = (row.revision, row.date, row.status, *people, row.reason_for_issue, inputs, after, row.files)
        said.append(printable(" \u00b7 ".join(filter(None, parts))))
    return said


def printable(text: str) -> str:
    """Text of a file in one line, without characters that a terminal would obey."""
    return "".join(c if c.isprintable() else " " for c in text)


def _people(row: Row) -> tuple[str, str, str]:
    return row.prepared_by, row.checked_by, row.approved_by


def _content(folder: Path) -> bytes:
    return csv_bytes([COLUMNS, *(astuple(row) for row in rows_of(folder))])


def _rows(place: Path) -> Iterator[Row]:
    """The row of a revision's folder, and one for what can't be read in it."""
    read, unread = [], []
    for path in sorted(place.glob("*.json")):
        try:
            read.append(_row(read_json(path), place.name, path.name))
        except (InputError, OSError, LookupError, TypeError, AttributeError, ValueError):
            unread.append(path.name)  # not a record, whatever it is
    names = sorted(p.files for p in read)
    if read:
        yield replace(max(read, key=lambda row: RISING.index(row.status)), files="; ".join(names))
    if unread or not read:
        yield Row(place.name, "", UNREADABLE, files="; ".join(unread))


def _row(record: Mapping[str, Any], revision: str, file: str) -> Row:
    """The row that one file gives."""
    job, people = (record["payloads"]["card"]["inputs"][key] for key in ("job", "people"))
    signed = {s["role"]: s["name"] for s in record.get("signatures", ())}
    prints = {f"fingerprint_of_{k}": v[:SHORT] for k, v in record["fingerprints"].items()}
    row = Row(
        revision=job["revision"],
        date=job["date"],
        status=record["status"],
        **{name: prints[name] for name in _PRINTS if name in prints},
        prepared_by=signed.get("prepared", people["prepared"]["name"]),
        checked_by=signed.get("checked", ""),
        approved_by=signed.get("approved", ""),
        reason_for_issue=job["reason"],
        files=file,
    )
    if row.status not in RISING or row.revision != revision or not all(isinstance(cell, str) for cell in astuple(row)):
        raise ValueError("not the record of this revision")
    return row
