"""The demo's blocks in a real notebook: typed masses reach the periods, the file and the stored twins."""

from __future__ import annotations

import shutil
import time
from pathlib import Path

import pytest

pytestmark = pytest.mark.xdist_group("browser")
DEMO = Path(__file__).parents[2] / "example_notebooks" / "alder-quay"
MASS = "mass, level 6"


@pytest.fixture
def job(lab, flavour, request):
    """A copy of the demo in the server's folder, by its name there."""
    name = f"{request.node.originalname}-{flavour}"
    (lab.folder / name).mkdir()
    for file in ("job.toml", "storeys.csv", "calc.ipynb"):
        shutil.copy(DEMO / file, lab.folder / name)
    return name


@pytest.fixture
def sheet(job, open_notebook):
    sheet = open_notebook(f"{job}/calc.ipynb")
    sheet.run_all()
    until(lambda: sheet.page.locator(".calcsheet-live").count() == 5, "the five blocks")
    return sheet


def until(holds, what, seconds=15.0):
    end = time.monotonic() + seconds
    while not holds():
        assert time.monotonic() < end, f"still missing: {what}"
        time.sleep(0.1)


def live(sheet, block):
    return sheet.page.locator(f".calcsheet-live[data-block={block}]")


def first_period(sheet, kind):
    """Period of mode 1 in the table of modes of the live block, or of its static twin."""
    table = sheet.page.locator(f".calcsheet-{kind}[data-block=modes] table.values").first
    cells = table.locator("tbody tr").first.locator("th, td").all_text_contents()
    assert cells[0] == "1"
    return float(cells[1])


def type_mass(sheet, text):
    field = sheet.page.get_by_label(MASS, exact=True)
    field.click()
    sheet.page.keyboard.press("Control+a")
    sheet.page.keyboard.type(text)
    sheet.page.keyboard.press("Enter")


def test_a_typed_mass_changes_the_period_and_is_there_when_the_notebook_is_reopened(sheet, job):
    folder = sheet.lab.folder / job
    before = (folder / "storeys.csv").read_text()
    period = first_period(sheet, "live")
    sheet.shot("demo")
    type_mass(sheet, "900")
    until(lambda: first_period(sheet, "live") > 1.02 * period, "a longer first period")
    longer = first_period(sheet, "live")
    assert (folder / "storeys.csv").read_text() == before.replace("6,3.45,468.5", "6,3.45,900")
    until(lambda: first_period(sheet, "twin") == longer, "the new period in the stored twin")
    sheet.save()
    sheet.stop_kernels()
    sheet.open()
    sheet.run_all()
    until(lambda: live(sheet, "storeys").count() == 1, "the table after reopening")
    assert sheet.page.get_by_label(MASS, exact=True).input_value() == "900"
    until(lambda: live(sheet, "modes").count() == 1 and first_period(sheet, "live") == longer, "the same period")


def test_a_wrong_mass_is_refused_in_words_and_nothing_old_is_shown(sheet, job):
    type_mass(sheet, "-12")
    error = live(sheet, "storeys").locator(".calcsheet-errors li")
    error.wait_for()
    assert error.text_content() == 'storeys.csv, level "6": mass -12 t; must be above 0'
    for block in ("modes", "mode plot", "participation"):
        box = sheet.page.locator(f'.calcsheet-live[data-block="{block}"]')
        until(lambda box=box: box.locator(".calcsheet-note:visible").count() == 1, f"words in {block}")
        assert box.locator("table, img").count() == 0
    sheet.shot("demo-wrong")
    type_mass(sheet, "468.5")
    until(lambda: live(sheet, "modes").locator("table").count() > 0, "numbers again")


def test_a_file_edited_elsewhere_is_noticed_and_loaded_on_request(sheet, job):
    file = sheet.lab.folder / job / "storeys.csv"
    file.write_text(file.read_text().replace("6,3.45,468.5", "6,3.45,501.5"))
    sheet.page.get_by_label("mass, level 5", exact=True).click()
    load = sheet.page.get_by_role("button", name="load the file")
    load.wait_for()
    sheet.shot("demo-conflict")
    load.click()
    field = sheet.page.get_by_label(MASS, exact=True)
    until(lambda: field.input_value() == "501.5", "the file's value")
