"""A building entered, revised and issued by a person who never touches the mouse."""

from __future__ import annotations

import csv
import json

import pytest

pytestmark = pytest.mark.xdist_group("browser")


LEVELS = [str(level) for level in range(30, 0, -1)]
MASSES = {level: 560 - 4.5 * int(level) for level in LEVELS}
TOWER = "".join(
    f"{level}\t{4.8 if level == '1' else 3.4}\t{mass}\t{1_450_000 - 28_000 * int(level)}\t{1_320_000 - 26_000 * int(level)}\r\n"
    for level, mass in MASSES.items()
)
"""Thirty invented storeys, roof first, as a spreadsheet copies them."""


def test_thirty_storeys_are_entered_revised_and_issued_by_keyboard_alone(new_job, open_notebook):
    sheet = open_notebook(f"{new_job('tower')}/calc.ipynb")
    folder = sheet.lab.folder / sheet.path.rpartition("/")[0]
    sheet.page.evaluate(
        "() => { window.pressed = 0; addEventListener('pointerdown', () => window.pressed++, {capture: true}); }"
    )

    def column(name):
        with open(folder / "storeys.csv", encoding="utf-8", newline="") as lines:
            return [row[name] for row in csv.DictReader(lines)]

    def numbers(name):
        return [float(cell) for cell in column(name)]

    def tab_until(key, wanted):
        for _ in range(8):
            if sheet.page.evaluate(wanted):
                return
            sheet.keys(key)
        raise AssertionError(f"{key} doesn't lead to {wanted}")

    # the notebook is run cell by cell, and its table reached
    sheet.wait_for_kernel()
    sheet.keys("Shift+Enter", "Shift+Enter", "Shift+Enter", "Shift+Enter", "Control+Enter")
    sheet.until(lambda: sheet.page.locator(".calcsheet-live").count() == 4, "the four blocks", 60)
    sheet.keys("ArrowUp", "ArrowUp")
    tab_until("Tab", "document.activeElement.getAttribute('aria-label') === 'level, row 1'")

    # entered: thirty storeys pasted, the base added below them
    sheet.paste(TOWER)
    sheet.until(lambda: column("level") == LEVELS, "the pasted storeys in the file")
    sheet.until(lambda: sheet.cell("mass, level 30").count() == 1, "the same on the page")
    sheet.keys("Control+ArrowDown", "Alt+Shift+ArrowDown")
    sheet.until(lambda: sheet.focused() == "level, row 31", "the focus in the new row")
    sheet.keys("'Ground", "Tab", "'3.6", "Tab", "'720", "Enter")
    sheet.until(lambda: column("mass [t]")[-1] == "720", "the base in the file")
    sheet.until(lambda: sheet.block("modes").locator("table").count() > 0, "numbers", 30)

    # revised: three masses, walked to and typed over
    sheet.keys("Control+Home", "ArrowRight", "ArrowRight", "'318.25", "ArrowDown", "ArrowDown", "'431", "ArrowDown")
    sheet.keys("ArrowDown", "ArrowDown", "ArrowDown", "'445 250 kg", "Enter")
    revised = {"30": 318.25, "28": 431.0, "24": 445.25}
    wanted = MASSES | revised | {"Ground": 720.0}
    sheet.until(lambda: numbers("mass [t]") == list(wanted.values()), "the typed masses in the file")
    sheet.until(lambda: sheet.status().startswith("saved to storeys.csv"), "the same said on the page")

    # issued: the notebook saved, a cell added below it and run
    sheet.keys("Control+s", "Escape")
    tab_until("Shift+Tab", "document.activeElement.classList.contains('jp-Cell')")
    sheet.keys("ArrowDown", "ArrowDown", "b", "Enter", "'!calcsheet issue .", "Shift+Enter")
    said = sheet.page.locator(".jp-Notebook-cell").nth(5).locator(".jp-OutputArea")
    sheet.until(lambda: "Issued, status " in (said.text_content() or ""), "word of the record", 60)
    files = {path.suffix: path for path in (folder / "issued" / "A").iterdir()}
    assert {".html", ".json"} <= files.keys()
    record = json.loads(files[".json"].read_text(encoding="utf-8"))
    storeys = record["payloads"]["storeys"]["inputs"]
    above = dict(zip(storeys["level"], storeys["mass"], strict=True))
    below = {level["level"]: level["mass"] for level in storeys["below"]}
    assert below | above == wanted
    assert len(above) == 30
    assert sheet.page.evaluate("window.pressed") == 0, "a mouse was used"
