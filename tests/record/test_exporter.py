"""A saved notebook turned into a record by nbconvert."""

from __future__ import annotations

import shutil
import subprocess
import sys

import nbformat
import pytest

from calcsheet.record.errors import RecordError
from calcsheet.record.exporter import RecordExporter
from calcsheet.record.issue import issue


@pytest.fixture
def folder(executed_folder, tmp_path):
    """A copy of the executed job, for this test to spoil."""
    copy = tmp_path / "heron row"
    shutil.copytree(executed_folder, copy)
    return copy


def exported(folder, **config):
    exporter = RecordExporter(**config)
    return exporter.from_filename(str(folder / "calc.ipynb"))[0]


def test_nbconvert_gives_the_issued_html_to_the_byte(folder):
    """The second real execution of this notebook, by issuing: its edit has been saved, so it changes nothing."""
    command = [
        sys.executable,
        "-m",
        "jupyter",
        "nbconvert",
        "--to",
        "calcsheet-record",
        "--output",
        "by-hand",
        "calc.ipynb",
    ]
    done = subprocess.run(command, cwd=folder, capture_output=True, text=True, timeout=120)
    assert done.returncode == 0, done.stderr
    issued = issue(folder, to=["html"])
    html = next(path for path in issued.files if path.suffix == ".html")
    assert (folder / "by-hand.html").read_bytes() == html.read_bytes()


def test_the_paper_is_an_option(folder):
    assert "size: letter" in exported(folder, paper="letter")
    assert "size: a4" in exported(folder)


def test_a_table_that_changed_since_is_refused(folder):
    table = folder / "storeys.csv"
    table.write_text(table.read_text().replace("236", "237"))
    with pytest.raises(RecordError, match=r"the notebook is stale: storeys\.csv or job\.toml in this folder"):
        exported(folder)


def test_a_card_that_changed_since_is_refused(folder):
    card = folder / "job.toml"
    card.write_text(card.read_text().replace('revision = "A"', 'revision = "B"'))
    with pytest.raises(RecordError, match=r"the notebook is stale: job\.toml in this folder isn't what it shows"):
        exported(folder)


def test_a_cell_that_changed_since_is_refused(folder):
    path = folder / "calc.ipynb"
    path.write_text(path.read_text().replace("share=0.9", "share=0.8"))
    with pytest.raises(RecordError, match=r"the notebook is stale: cell 5 was changed and not run again"):
        exported(folder)


def test_a_notebook_that_was_not_run_is_refused(folder):
    path = folder / "calc.ipynb"
    notebook = nbformat.read(path, as_version=4)
    for cell in notebook.cells:
        if cell.cell_type == "code":
            cell.outputs = []
    nbformat.write(notebook, path)
    with pytest.raises(RecordError, match="the notebook shows no JobCard, or was not run"):
        exported(folder)


def test_nbconvert_says_why_and_writes_nothing(folder):
    (folder / "storeys.csv").write_text((folder / "storeys.csv").read_text().replace("236", "-236"))
    command = [sys.executable, "-m", "jupyter", "nbconvert", "--to", "calcsheet-record", "calc.ipynb"]
    done = subprocess.run(command, cwd=folder, capture_output=True, text=True, timeout=120)
    assert done.returncode != 0
    assert 'storeys.csv, level "4": mass -236 t; must be above 0' in done.stderr
    assert not (folder / "calc.html").exists()
