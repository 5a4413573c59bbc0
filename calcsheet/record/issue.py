"""A record issued: the notebook executed, HTML, PDF and JSON built aside and moved into place whole."""

from __future__ import annotations

import json
import os
import re
import shutil
import tempfile
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

import nbformat

from calcsheet.record.collect import Content, collect, refuse_stale
from calcsheet.record.document import page_of, record_of
from calcsheet.record.errors import RecordError
from calcsheet.record.execute import Progress, execute
from calcsheet.record.exporter import record_html
from calcsheet.record.fonts import missing_characters
from calcsheet.record.page import Paper, render_page
from calcsheet.record.pdf import NoEngine, choose_engine, write_pdf
from calcsheet.record.status import held_back
from calcsheet.steps.graph import Job

NOTEBOOK = "calc.ipynb"
ISSUED = "issued"
FULL = "WeasyPrint"
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
        Its files: HTML, PDF, JSON, as asked for.
    status : str
        Status word.
    reasons : tuple of str
        What keeps it a draft.
    note : str
        What could not be made and the remedy; empty where nothing is missing.
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
    to : sequence of {"html", "pdf"}, optional
        Kinds wanted, with the JSON always; HTML and, where an engine loads, PDF where omitted.
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
    job = Job(folder.resolve())
    for payload in job.payloads().values():
        if payload["state"] == "refused":
            raise RecordError(payload["why"])
    revision = job.payload("card")["inputs"]["job"]["revision"]
    target = folder / ISSUED / revision
    _refuse_issued(target, revision)
    engine, note = "", ""
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
    return _built(content, target, kinds, paper, engine, note)


def _executed(folder: Path, progress: Progress) -> nbformat.NotebookNode:
    path = folder / NOTEBOOK
    if not path.is_file():
        raise RecordError(f"no {NOTEBOOK} in {folder}; `calcsheet new` makes a job folder that has one")
    try:
        notebook = nbformat.read(path, as_version=4)
    except Exception as error:  # the library raises whatever its reader meets in a file that is no notebook
        first, *_ = str(error).splitlines() or [type(error).__name__]
        raise RecordError(f"{NOTEBOOK} is no notebook that can be read: {first}") from None
    execute(notebook, folder, progress)
    return notebook


def _built(content: Content, target: Path, kinds: Sequence[str], paper: Paper, engine: str, note: str) -> Issued:
    """Build the files in a folder beside the target and move it into place."""
    record = record_of(content)
    job = content.payloads["card"]["inputs"]["job"]
    stem = f"{_file_name(job['number'])}-rev-{_file_name(job['revision'])}"
    text = json.dumps(record, ensure_ascii=False, indent=1)
    data = text.encode()
    target.parent.mkdir(exist_ok=True)
    building = Path(tempfile.mkdtemp(prefix=".building-", dir=target.parent))
    try:
        (building / f"{stem}.json").write_bytes(data)
        if "html" in kinds:
            (building / f"{stem}.html").write_text(record_html(content, paper), encoding="utf-8")
        if "pdf" in kinds:
            html = render_page(page_of(content, "pdf", engine), "pdf", paper)
            write_pdf(html, building / f"{stem}.pdf", attachments=[(f"{stem}.json", data)])
        building.chmod(0o755)
        _refuse_issued(target, job["revision"])
        try:
            os.rename(building, target)
        except OSError:
            _refuse_issued(target, job["revision"])  # somebody else was first
            raise
    except BaseException:
        shutil.rmtree(building, ignore_errors=True)
        raise
    files = tuple(sorted(target.iterdir(), key=lambda path: (".html", ".pdf", ".json").index(path.suffix)))
    strange = missing_characters(text)
    if strange:
        lacking = f"no font of the record has {' '.join(strange)}: they print only where the system has one"
        note = "; ".join(filter(None, (note, lacking)))
    return Issued(target, files, record["status"], held_back(content.payloads, content.words), note)


def _refuse_issued(target: Path, revision: str) -> None:
    if target.exists():
        raise RecordError(
            f'revision "{revision}" is issued already, in {target}; raise job.revision in job.toml to issue the next'
        )


def _file_name(text: str) -> str:
    """Text as part of a file name on every system."""
    return re.sub(r"[^\w.-]+", "-", text).strip("-.") or "record"
