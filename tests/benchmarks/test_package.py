"""Import, the way from an edit to the screen, and the page of a record."""

from __future__ import annotations

import shutil
import subprocess
import sys
from pathlib import Path
from types import SimpleNamespace

import nbformat
import pytest

from calcsheet.blocks import JobCard, ModePlot, ModeSolver, ParticipationSummary, StoreyTable
from calcsheet.record.execute import execute
from calcsheet.resources import DEMO, folder

PAGE = """
import sys, time
import nbformat
from calcsheet.record.collect import collect
from calcsheet.record.document import record_of
from calcsheet.record.files import html_of
content = collect(nbformat.read(sys.argv[1], 4))
start = time.process_time()
html = html_of(record_of(content))
print(time.process_time() - start, len(html))
"""


@pytest.fixture
def demo(tmp_path: Path) -> Path:
    """A copy of the demo's job folder."""
    return Path(shutil.copytree(folder(DEMO), tmp_path / "demo", ignore=shutil.ignore_patterns("issued")))


def imported(statement: str) -> None:
    subprocess.run([sys.executable, "-c", statement], check=True)


def test_import(compare, report):
    ours, others = compare(5, lambda: imported("import calcsheet"), lambda: imported("import numpy, ipywidgets"))
    report("import calcsheet / import of numpy and ipywidgets", ours / others, "at most 1")
    assert ours <= others


def test_an_edit_until_five_blocks_are_redrawn(compare, report, demo):
    job = JobCard(demo)
    storeys = StoreyTable(job)
    modes = ModeSolver(storeys, energy="shown")
    blocks = [job, storeys, modes, ModePlot(modes), ParticipationSummary(modes)]
    for block in blocks:
        shown = block.shown()
        shown.widget, shown.handle = shown.make_widget(), SimpleNamespace(update=lambda data, raw: None)
        shown.show_numbers()
        shown.show_figures()
        job.job.listen(shown)
    masses = iter(range(400, 500))

    def edit() -> None:
        storeys.set("Roof", "mass", float(next(masses)))

    def draw() -> None:
        payloads = job.job.payloads()
        for block in blocks:
            block.view.render(payloads, block.key, block.options).draw()

    edited, drawn = compare(10, edit, draw)
    report("an edit until five blocks are redrawn / their figures drawn alone", edited / drawn, "under 2")
    report("  the same [ms]", 1e3 * edited, "")
    assert edited < 2.0 * drawn
    assert job.job.payload("modes")["state"] == "ok"


def test_the_page_of_a_record(report, demo):
    notebook = nbformat.read(demo / "calc.ipynb", 4)
    execute(notebook, demo)
    nbformat.write(notebook, demo / "calc.ipynb")
    taken = []
    for _ in range(3):
        command = [sys.executable, "-c", PAGE, str(demo / "calc.ipynb")]
        seconds, size = subprocess.run(command, check=True, capture_output=True, text=True).stdout.split()
        assert int(size) > 100_000
        taken.append(float(seconds))
    report("page of the demo's record, cold [s of CPU]", sorted(taken)[1], "under 1")
    assert sorted(taken)[1] < 1.0
