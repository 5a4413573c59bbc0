"""The committed examples: saved notebooks are current, and every issued record replays."""

from __future__ import annotations

import json
from pathlib import Path

import nbformat
import pytest

from calcsheet.blocks.twin import MIME
from calcsheet.record.collect import collect, refuse_stale
from calcsheet.steps.replay import replay

EXAMPLES = Path(__file__).parents[1] / "example_notebooks"
JOBS = sorted(path.parent for path in EXAMPLES.glob("*/job.toml"))
RECORDS = sorted(EXAMPLES.glob("*/issued/*/*.json"))


def test_every_example_has_its_record():
    assert JOBS
    assert {record.parents[2] for record in RECORDS} == set(JOBS)
    for record in RECORDS:
        assert record.with_suffix(".html").is_file()
        assert record.with_suffix(".pdf").is_file()


@pytest.mark.parametrize("record", RECORDS, ids=lambda path: path.stem)
def test_a_record_replays(record):
    payloads = json.loads(record.read_text(encoding="utf-8"))["payloads"]
    assert [str(difference) for difference in replay(payloads)] == []


@pytest.mark.parametrize("record", RECORDS, ids=lambda path: path.stem)
def test_a_record_whose_result_was_changed_does_not_replay(record):
    payloads = json.loads(record.read_text(encoding="utf-8"))["payloads"]
    payloads["modes"]["result"]["models"][0]["modes"]["omega"][0] *= 1.0 + 1e-6
    assert any(difference.step == "modes" for difference in replay(payloads))


@pytest.mark.parametrize("job", JOBS, ids=lambda path: path.name)
def test_the_saved_notebook_is_current(job):
    notebook = nbformat.read(job / "calc.ipynb", as_version=4)
    refuse_stale(collect(notebook), job)
    kinds = {kind for cell in notebook.cells for output in cell.get("outputs", ()) for kind in output.get("data", ())}
    assert kinds == {MIME, "text/html", "text/plain"}  # no live widget, which would be dead when it is read
    assert not notebook.metadata.get("widgets")
