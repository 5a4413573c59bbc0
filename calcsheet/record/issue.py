"""A record issued: the notebook executed, HTML, PDF and JSON built aside and moved into place whole."""

from __future__ import annotations

import json
import os
import re
from collections.abc import Sequence
from dataclasses import dataclass, replace
from pathlib import Path

import nbformat

from calcsheet.job.comments import comments_of
from calcsheet.record.collect import Content, collect, refuse_stale
from calcsheet.record.document import record_of
from calcsheet.record.errors import RecordError
from calcsheet.record.execute import ISSUING, Progress, execute
from calcsheet.record.files import files_of, html_of
from calcsheet.record.fonts import missing_characters
from calcsheet.record.page import Paper
from calcsheet.record.pdf import FULL, NoEngine, choose_engine
from calcsheet.record.place import placed, refuse_issued
from calcsheet.record.register import note_of
from calcsheet.record.status import reasons
from calcsheet.record.tables import FOLDER as TABLES
from calcsheet.record.tables import INDEX, csv_files
from calcsheet.render.answers import unasked_words
from calcsheet.steps.compare import EARLIER
from calcsheet.steps.earlier import earlier_payload
from calcsheet.steps.graph import Job
from calcsheet.steps.serial import to_json

NOTEBOOK = "calc.ipynb"
ISSUED = "issued"
READING_COPY = (
    "the PDF is a reading copy made with {}; where Pango is installed, WeasyPrint adds bookmarks, tags and page numbers "
    "in the contents"
)


@dataclass(frozen=True)
class Issued:
    """What was issued.

    Parameters
    ----------
    folder : Path
        The record's folder.
    files : tuple of Path
        Its files: HTML, PDF, JSON, as asked for, and the list of its tables.
    status : str
        Status word.
    reasons : tuple of str
        What keeps it a draft.
    note : str
        What could not be made and the remedy, and answers that no caution asks for; empty where there is neither.
    """

    folder: Path
    files: tuple[Path, ...]
    status: str
    reasons: tuple[str, ...]
    note: str


def issue(
    folder: Path, *, to: Sequence[str] | None = None, paper: Paper = "a4", progress: Progress = lambda cell, cells: None
) -> Issued:
    """Execute a job's notebook and issue its record.

    Parameters
    ----------
    folder : Path
        The job folder.
    to : sequence of {"html", "pdf", "csv"}, optional
        Kinds wanted, with the JSON always; HTML and, where an engine loads, PDF where neither is named. "csv" adds every
        table as CSV, in a folder of its own.
    paper : {"a4", "letter"}
        Paper size.
    progress : callable, optional
        Told of every cell before it runs.

    Returns
    -------
    Issued

    Raises
    ------
    RecordError
        No notebook, a cell that fails, a step that is refused or waiting, a revision that is issued already, or no PDF
        engine where a PDF is asked for.
    """
    if os.environ.get(ISSUING):
        raise RecordError("the notebook is being issued; take the cell that issues it out of the notebook")
    job = Job(folder.resolve())
    for payload in job.payloads().values():
        if payload["state"] == "refused":
            raise RecordError(payload["why"])
    revision = job.payload("card")["inputs"]["job"]["revision"]
    target = folder / ISSUED / revision
    refuse_issued(target)
    engine, note, with_tables = "", "", "csv" in (to or ())
    to = [kind for kind in to or () if kind != "csv"] or None
    if to is None or "pdf" in to:
        try:
            chosen = choose_engine()
            engine = str(chosen)
            note = "" if chosen.name == FULL else READING_COPY.format(chosen.name)
        except NoEngine as error:
            if to is not None:
                raise RecordError(f"no PDF: {error}") from None
            note = f"no PDF was made: {error}"
    kinds = [k for k in ("html", "pdf") if (to is None or k in to) and not (k == "pdf" and not engine)]
    content = collect(_executed(folder, progress))
    refuse_stale(content, folder)
    content = with_earlier(content, folder)
    record = record_of(content, paper, engine, [to_json(comment) for comment in comments_of(folder)])
    stem = f"{_file_name(record['payloads']['card']['inputs']['job']['number'])}-rev-{_file_name(revision)}"
    files = files_of(record, stem, kinds)
    if with_tables:
        files |= {f"{TABLES}/{name}": table for name, table in csv_files(html_of(record), record).items()}
    made = tuple(path for path in placed(target, files) if path.parent == target or path.name == INDEX)
    note = "; ".join(filter(None, (note, note_of(folder), *unasked_words(record["payloads"]))))
    strange = missing_characters(json.dumps(record, ensure_ascii=False))
    if strange:
        lacking = f"no font of the record has {' '.join(strange)}: they print only where the system has one"
        note = "; ".join(filter(None, (note, lacking)))
    return Issued(target, made, record["status"], reasons(record), note)


def with_earlier(content: Content, folder: Path) -> Content:
    """The content, with what the last revision issued before this one said, where the notebook doesn't hold it."""
    if EARLIER in content.payloads:
        return content
    earlier = earlier_payload(folder, content.payloads["card"]["inputs"]["job"]["revision"])
    return content if earlier is None else replace(content, payloads={**content.payloads, EARLIER: earlier})


def _executed(folder: Path, progress: Progress) -> nbformat.NotebookNode:
    notebook = notebook_of(folder)
    execute(notebook, folder, progress)
    return notebook


def notebook_of(folder: Path) -> nbformat.NotebookNode:
    """The notebook of a job folder, as it was saved.

    Raises
    ------
    RecordError
        There is none, or none that can be read.
    """
    path = folder / NOTEBOOK
    if not path.is_file():
        raise RecordError(f"no {NOTEBOOK} in {folder}; `calcsheet new` makes a job folder that has one")
    try:
        return nbformat.read(path, as_version=4)
    except Exception as error:  # the library raises whatever its reader meets in a file that is no notebook
        first, *_ = str(error).splitlines() or [type(error).__name__]
        raise RecordError(f"{NOTEBOOK} is no notebook that can be read: {first}") from None


def _file_name(text: str) -> str:
    """Text as part of a file name on every system."""
    return re.sub(r"[^\w.-]+", "-", text).strip("-.") or "record"
