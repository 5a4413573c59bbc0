"""Issuing: whole or absent, once a revision."""

from __future__ import annotations

import json
import multiprocessing
import os

import nbformat
import pytest

from calcsheet.job.errors import InputError
from calcsheet.record import issue as issuing
from calcsheet.record import place
from calcsheet.record.errors import RecordError
from calcsheet.record.issue import issue
from calcsheet.record.pdf import CHOICE, NoEngine
from calcsheet.record.register import rows_of
from calcsheet.record.tables import csv_files

CUT_OFF = 9


@pytest.fixture
def folder(quick_kernel, job_folder, calculation, new_notebook):
    made = job_folder()
    nbformat.write(new_notebook(calculation), made / "calc.ipynb")
    return made


def refusal(folder, **how):
    with pytest.raises((RecordError, InputError)) as caught:
        issue(folder, **how)
    return str(caught.value)


def left(folder):
    """What lies under issued/, however well hidden."""
    return sorted(p.name for p in (folder / "issued").iterdir()) if (folder / "issued").exists() else []


def test_a_record_is_html_and_json_in_its_revisions_folder(folder, document):
    told = []
    done = issue(folder, to=["html"], progress=lambda *at: told.append(at))
    assert done.folder == folder / "issued" / "A"
    assert [path.name for path in done.files] == ["HR-S-21-rev-A.html", "HR-S-21-rev-A.json"]
    assert done.status == "FOR CHECKING"
    assert done.note == ""
    assert left(folder) == ["A", "register.csv"]
    assert told
    html, data = (path.read_text(encoding="utf-8") for path in done.files)
    assert json.loads(document(html).script) == json.loads(data)
    if os.name == "posix":
        assert done.folder.stat().st_mode & 0o777 == 0o755


def test_a_pdf_comes_with_its_data(folder):
    done = issue(folder, to=["pdf"], paper="letter")
    assert [path.suffix for path in done.files] == [".pdf", ".json"]
    assert done.files[0].read_bytes().startswith(b"%PDF")


def test_a_revision_is_issued_once(folder):
    done = issue(folder, to=["html"])
    before = {path: path.read_bytes() for path in done.files}
    assert refusal(folder, to=["html"]) == (
        f'revision "A" is issued already, in {folder / "issued" / "A"}; raise job.revision in job.toml to issue the next'
    )
    assert {path: path.read_bytes() for path in done.files} == before
    card = folder / "job.toml"
    card.write_text(card.read_text().replace('revision = "A"', 'revision = "B"'))
    assert issue(folder, to=["html"]).folder.name == "B"
    assert left(folder) == ["A", "B", "register.csv"]


def test_somebody_who_is_first_wins(folder, monkeypatch):
    build = issuing.files_of

    def meanwhile(*args):
        (folder / "issued" / "A").mkdir(parents=True)
        return build(*args)

    monkeypatch.setattr(issuing, "files_of", meanwhile)
    assert "is issued already" in refusal(folder, to=["html"])
    assert left(folder) == ["A"]
    assert list((folder / "issued" / "A").iterdir()) == []


def test_a_build_that_fails_leaves_nothing(folder, monkeypatch):
    def fails(*_):
        raise MemoryError("no room")

    monkeypatch.setattr(issuing, "files_of", fails)
    with pytest.raises(MemoryError):
        issue(folder, to=["html"])
    assert left(folder) == []


def test_an_interrupt_leaves_nothing(folder, monkeypatch):
    def interrupted(*_):
        raise KeyboardInterrupt

    monkeypatch.setattr(place.os, "rename", interrupted)
    with pytest.raises(KeyboardInterrupt):
        issue(folder, to=["html"])
    assert left(folder) == []


@pytest.mark.skipif(os.name != "posix", reason="needs fork")
def test_a_process_killed_before_the_move_leaves_no_half_record(folder):
    def build():
        place.os.rename = lambda *_: os._exit(CUT_OFF)
        issue(folder, to=["html"])

    process = multiprocessing.get_context("fork").Process(target=build)
    process.start()
    process.join(60)
    assert process.exitcode == CUT_OFF
    assert [name.rstrip("_abcdefghijklmnopqrstuvwxyz0123456789") for name in left(folder)] == [place.BUILDING]
    assert issue(folder, to=["html"]).folder == folder / "issued" / "A"  # and stands in nobody's way


def test_every_table_as_csv_beside_what_is_made_otherwise(folder):
    done = issue(folder, to=["html", "csv"])
    assert [path.relative_to(done.folder).as_posix() for path in done.files] == [
        "HR-S-21-rev-A.html",
        "HR-S-21-rev-A.json",
        "tables/index.csv",
    ]
    record = json.loads(done.files[1].read_text(encoding="utf-8"))
    made = {path.name: path.read_bytes() for path in (done.folder / "tables").iterdir()}
    assert made == csv_files(done.files[0].read_text(encoding="utf-8"), record)
    assert len(made) > 10


def test_csv_alone_adds_to_what_is_made_without_it(folder, monkeypatch):
    def none(name=None):
        raise NoEngine("no PDF engine loads here; install one")

    monkeypatch.setattr(issuing, "choose_engine", none)
    done = issue(folder, to=["csv"])
    assert [path.suffix for path in done.files] == [".html", ".json", ".csv"]
    assert done.note == "no PDF was made: no PDF engine loads here; install one"


def test_a_register_that_can_not_be_written_is_a_note(folder):
    (folder / "issued" / "register.csv").mkdir(parents=True)
    done = issue(folder, to=["html"])
    assert done.folder.is_dir()
    assert done.note.startswith("register.csv: not saved")
    assert done.note.endswith(f"then `calcsheet register {folder}` writes it")


def test_the_register_is_written_with_the_record(folder):
    issue(folder, to=["html"])
    (row,) = rows_of(folder)
    assert (row.revision, row.status, row.prepared_by) == ("A", "FOR CHECKING", "Odile Quist")
    assert "HR-S-21-rev-A.json" in (folder / "issued" / "register.csv").read_text(encoding="utf-8-sig")


def test_a_wrong_row_is_quoted_before_anything_runs(folder):
    table = folder / "storeys.csv"
    table.write_text(table.read_text().replace("251,", "-12,", 1))
    told = []
    assert (
        refusal(folder, progress=lambda *at: told.append(at)) == 'storeys.csv, level "2": mass -12 t; must be above 0'
    )
    assert told == []
    assert left(folder) == []


def test_a_step_that_is_refused_gives_no_record(folder, new_notebook, calculation):
    wrong = [s.replace("share=0.9", 'stiffness="cracks"') for s in calculation]
    nbformat.write(new_notebook(wrong), folder / "calc.ipynb")
    assert refusal(folder) == (
        'Natural modes, step "modes", is refused: stiffness set: got "cracks"; must be "gross" or "cracked"'
    )
    assert left(folder) == []


def test_a_notebook_that_leaves_a_wrong_row_gives_no_record(folder, new_notebook, calculation):
    nbformat.write(new_notebook([*calculation, 'storeys.set("1", "mass", 0)']), folder / "calc.ipynb")
    assert 'storeys.csv, level "1": mass 0 t; must be above 0' in refusal(folder)
    assert left(folder) == []


def test_an_answer_that_no_caution_asks_for_is_noted(folder):
    card = folder / "job.toml"
    card.write_text(card.read_text(encoding="utf-8") + '[answers.hunch]\ntext = "Seen."\n', encoding="utf-8")
    assert issue(folder, to=["html"]).note == "job.toml, answers.hunch: no caution has this key"


def test_a_notebook_of_another_job_gives_no_record(folder, job_folder, new_notebook, calculation):
    other = job_folder([('number = "HR/S 21"', 'number = "OTHER"')], name="other")
    elsewhere = [s.replace('JobCard(".")', f"JobCard({str(other)!r})") for s in calculation]
    nbformat.write(new_notebook(elsewhere), folder / "calc.ipynb")
    assert refusal(folder) == (
        "the notebook is stale: job.toml in this folder isn't what it shows (job.number); run all its cells and save it"
    )
    assert left(folder) == []


@pytest.mark.parametrize(
    "text",
    [
        "",
        "{",
        "[]",
        "3",
        "{}",
        '{"nbformat": 4}',
        '{"nbformat": 4, "nbformat_minor": 5, "metadata": {}, "cells": 7}',
        "\x00",
    ],
)
def test_a_notebook_that_is_none_is_refused_in_one_sentence(folder, text):
    (folder / "calc.ipynb").write_text(text)
    sentence = refusal(folder)
    assert sentence.startswith("calc.ipynb is no notebook that can be read: ")
    assert "\n" not in sentence
    assert len(sentence) < 300


def test_a_notebook_that_is_no_text_is_refused(folder):
    (folder / "calc.ipynb").write_bytes(b"\xff\xfe\xff")
    assert refusal(folder).startswith("calc.ipynb is no notebook that can be read: ")


def test_a_folder_without_a_notebook(folder):
    (folder / "calc.ipynb").unlink()
    assert refusal(folder) == f"no calc.ipynb in {folder}; `calcsheet new` makes a job folder that has one"


def test_without_an_engine_html_and_a_remedy(folder, monkeypatch):
    def none(name=None):
        raise NoEngine("no PDF engine loads here; install one")

    monkeypatch.setattr(issuing, "choose_engine", none)
    done = issue(folder)
    assert [path.suffix for path in done.files] == [".html", ".json"]
    assert done.note == "no PDF was made: no PDF engine loads here; install one"


def test_a_pdf_asked_for_without_an_engine_is_refused_before_anything_runs(folder, monkeypatch):
    monkeypatch.setenv(CHOICE, "Gutenberg")
    told = []
    sentence = refusal(folder, to=["pdf"], progress=lambda *at: told.append(at))
    assert sentence == 'no PDF: PDF engine: got "Gutenberg"; must be one of WeasyPrint, PlutoPrint'
    assert told == []
    assert left(folder) == []


def test_a_cell_that_issues_its_own_notebook_is_refused(folder, monkeypatch):
    monkeypatch.setenv("CALCSHEET_ISSUING", "1")
    assert refusal(folder, to=["html"]).startswith("the notebook is being issued; take the cell")
    assert left(folder) == []
