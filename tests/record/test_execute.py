"""Notebooks in a real kernel. A kernel takes seconds to start, so there are few of these tests."""

from __future__ import annotations

import re

import nbformat
import pytest

from calcsheet.blocks.twin import MIME
from calcsheet.record.collect import collect
from calcsheet.record.errors import RecordError
from calcsheet.record.execute import execute
from calcsheet.resources import TEMPLATES, folder
from calcsheet.steps.replay import replay
from calcsheet.steps.serial import fingerprint

STRIPPED = re.compile(r"<(style|script|svg|math)\b.*?</\1>", re.DOTALL)


def twins(notebook):
    return [o["data"] for cell in notebook.cells for o in cell.get("outputs", ()) if MIME in o.get("data", {})]


@pytest.fixture
def executed(executed_folder):
    return nbformat.read(executed_folder / "calc.ipynb", as_version=4)


def test_the_template_runs_as_it_is(tmp_path, job_folder):
    template = folder(TEMPLATES) / "planar"
    target = tmp_path / "fresh"
    target.mkdir()
    for name in ("job.toml", "storeys.csv"):
        (target / name).write_text((template / name).read_text(encoding="utf-8"), encoding="utf-8")
    notebook = nbformat.read(template / "calc.ipynb", as_version=4)
    told = []
    execute(notebook, target, lambda cell, cells: told.append((cell, cells)))
    content = collect(notebook)
    assert [payload["state"] for payload in content.payloads.values()] == ["ok"] * 5
    assert replay(content.payloads) == []
    assert {part.view for part in content.parts if hasattr(part, "view")} == {
        "card",
        "storeys",
        "modes",
        "mode plot",
        "participation",
        "what changed",
        "cautions",
    }
    code = sum(cell.cell_type == "code" for cell in notebook.cells)
    assert told == [(i, code) for i in range(1, code + 1)]
    assert "widgets" not in notebook.metadata


def test_a_kernel_of_another_language_in_the_notebook_is_not_followed(executed):
    assert executed.metadata.kernelspec.name == "fortran-99"
    assert [o["text"] for c in executed.cells for o in c.get("outputs", ()) if o.output_type == "stream"] == [
        "heavier roof\n"
    ]


def test_an_edit_in_a_later_cell_reaches_results_file_and_stored_twins(executed, executed_folder):
    assert "Roof,2.95,155.5,88000,97000" in (executed_folder / "storeys.csv").read_text()
    (stored,) = (t[MIME]["payloads"] for t in twins(executed) if "payloads" in t[MIME])
    assert stored["storeys"]["inputs"]["mass"][-1] == 155.5
    assert stored["participation"]["result"]["directions"][0]["total_mass"] == pytest.approx(1155.5, rel=1e-12)
    assert replay(stored) == []
    revisions = {re.search(r'data-revision="(\d+)"', t["text/html"])[1] for t in twins(executed)}
    assert len(twins(executed)) == 5
    assert len(revisions) == 1
    for twin in twins(executed):
        assert twin[MIME]["fingerprint"] == fingerprint(stored[twin[MIME]["step"]])


def test_the_saved_notebook_reads_untrusted(executed, document):
    for twin, pointer in zip(
        twins(executed)[1:], ("inputs/mass/4", "period/0", "psi/0/0", "cumulative/0"), strict=True
    ):
        seen = document(STRIPPED.sub("", twin["text/html"]))
        shown = [text for at, text in seen.numbers if at.endswith(pointer)]
        assert shown
        assert all(re.search(r"\d", text) for text in shown)
    kinds = {kind for c in executed.cells for o in c.get("outputs", ()) for kind in o.get("data", {})}
    assert kinds == {"text/html", "text/plain", MIME}  # no widget that would be dead


def test_a_cell_that_fails_is_quoted(tmp_path, new_notebook):
    source = "masses = [141.5]\n\ntotal = sum(masses)\nroof = masses[7]\nprint(total)"
    notebook = new_notebook(["# Words", "1 + 1", source])
    with pytest.raises(RecordError) as caught:
        execute(notebook, tmp_path)
    assert str(caught.value) == (
        "cell 3 fails with IndexError: list index out of range; "
        "the cell: masses = [141.5] / total = sum(masses) / roof = masses[7] / …"
    )
