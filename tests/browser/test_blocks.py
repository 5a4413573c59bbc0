"""The demo's blocks in a real notebook: typed masses reach the periods, the file and the stored twins."""

from __future__ import annotations

import shutil
from pathlib import Path

import pytest

pytestmark = pytest.mark.xdist_group("browser")
DEMO = Path(__file__).parents[2] / "example_notebooks" / "alder-quay"
MASS = "mass, level 6"


@pytest.fixture(scope="module")
def sheet(lab, flavour, opener):
    """The demo's notebook, run: both tests use it, the one that ends its kernel last."""
    folder = lab.folder / f"demo-{flavour}"
    folder.mkdir()
    for file in ("job.toml", "storeys.csv", "calc.ipynb"):
        shutil.copy(DEMO / file, folder)
    sheet = opener(f"{folder.name}/calc.ipynb")
    sheet.run_all()
    sheet.until(lambda: sheet.block("participation").count() == 1, "the blocks", 60)
    sheet.wait_for_kernel()
    sheet.file = folder / "storeys.csv"
    return sheet


def live(sheet, block):
    return sheet.page.locator(f".calcsheet-live[data-block={block}]")


def first_period(sheet, kind):
    """Period of mode 1 in the table of modes of the live block, or of its static twin."""
    table = sheet.page.locator(f".calcsheet-{kind}[data-block=modes] table.values").first
    cells = table.locator("tbody tr").first.locator("th, td").all_text_contents()
    assert cells[0] == "1"
    return float(cells[1])


def type_mass(sheet, text):
    sheet.cell(MASS).click()
    sheet.keys(f"'{text}", "Enter")


def test_a_wrong_mass_is_refused_in_words_and_nothing_old_is_shown(sheet):
    type_mass(sheet, "-12")
    error = live(sheet, "storeys").locator("ul.calcsheet-errors li")
    error.wait_for()
    assert error.text_content() == 'storeys.csv, level "6": mass -12 t; must be above 0'
    for block in ("modes", "mode plot", "participation"):
        box = sheet.page.locator(f'.calcsheet-live[data-block="{block}"]')
        sheet.until(lambda box=box: box.locator(".calcsheet-note:visible").count() == 1, f"words in {block}")
        assert box.locator("table, img").count() == 0
    sheet.shot("demo-wrong")
    type_mass(sheet, "468.5")
    sheet.until(lambda: live(sheet, "modes").locator("table").count() > 0, "numbers again")


def test_a_typed_mass_changes_the_period_and_is_there_when_the_notebook_is_reopened(sheet):
    before = sheet.file.read_text()
    period = first_period(sheet, "live")
    sheet.shot("demo")
    type_mass(sheet, "900")
    sheet.until(lambda: first_period(sheet, "live") > 1.02 * period, "a longer first period")
    longer = first_period(sheet, "live")
    assert sheet.file.read_text() == before.replace("6,3.45,468.5", "6,3.45,900")
    sheet.until(lambda: first_period(sheet, "twin") == longer, "the new period in the stored twin")
    sheet.save()
    sheet.stop_kernel()
    sheet.open()
    sheet.run_all()
    sheet.until(lambda: live(sheet, "storeys").count() == 1, "the table after reopening", 60)
    assert sheet.cell(MASS).input_value() == "900"
    sheet.until(lambda: live(sheet, "modes").count() == 1 and first_period(sheet, "live") == longer, "the same period")
