"""What a person does in the storey table by hand, in a real notebook over a job on disk."""

from __future__ import annotations

import csv
import io
import time

import pytest

pytestmark = pytest.mark.xdist_group("browser")
# levels of the demo's job, roof first; the basement is below the effective base
MASSES = ["38.5", "402.0", "468.5", "468.5", "474.0", "481.5", "481.5", "512.0", "655.0"]


def column(sheet, heading, text=None):
    """Cells of a column of the file."""
    return [row[heading] for row in csv.DictReader(io.StringIO(text or sheet.file.read_text()))]


def masses(sheet):
    return column(sheet, "mass [t]")


def levels(sheet):
    return column(sheet, "level")


def saved(sheet, wanted, what="mass [t]"):
    sheet.until(lambda: column(sheet, what) == wanted, f"{wanted} in the file's {what}")
    sheet.until(lambda: sheet.status() != "saving …", "the answer on the page")


def replaced(at, value, cells=MASSES):
    return [value if i == at else cell for i, cell in enumerate(cells)]


def first_period(sheet):
    row = sheet.block("modes").locator("table.values").first.locator("tbody tr").first
    return float(row.locator("th, td").nth(1).text_content())


def selected(sheet):
    inputs = sheet.block("storeys").locator('[aria-selected="true"] input')
    return [each.get_attribute("aria-label") for each in inputs.all()]


def test_walking_and_typing_as_in_a_spreadsheet(sheet):
    sheet.keys("ArrowDown", "ArrowRight")
    assert sheet.focused() == "stiffness x, level 5"
    sheet.keys("ArrowLeft", "Home")
    assert sheet.focused() == "level, row 4"
    sheet.keys("End")
    assert sheet.focused() == "mass / level below, level 5"
    sheet.keys("Control+Home")
    assert sheet.focused() == "level, row 1"
    sheet.keys("Control+ArrowDown")
    assert sheet.focused() == "level, row 9"
    sheet.keys("ArrowUp", "Tab", "Tab")
    assert sheet.focused() == "mass, level 1"
    sheet.keys("'500", "Tab", "'650000", "Enter")
    assert sheet.focused() == "level, row 9", "Enter goes back to the column where the Tabs began"
    saved(sheet, replaced(7, "500"))
    sheet.until(lambda: column(sheet, "stiffness x [kN/m]")[7] == "650000", "the stiffness in the file")


def test_typing_replaces_f2_edits_and_escape_takes_back(sheet):
    sheet.keys("'4")
    assert sheet.cell("mass, level 6").input_value() == "4"
    sheet.keys("Escape")
    assert sheet.cell("mass, level 6").input_value() == "468.5"
    sheet.keys("F2", "Backspace", "'75", "ArrowLeft", "ArrowLeft", "ArrowLeft", "Delete", "Enter")
    saved(sheet, replaced(2, "46875"))
    sheet.cell("mass, level 5").dblclick()
    sheet.keys("'25", "ArrowUp")
    saved(sheet, replaced(3, "468.525", replaced(2, "46875")))
    assert sheet.focused() == "mass, level 6"


def test_a_range_is_chosen_by_keys_and_mouse_and_copied_as_a_spreadsheet_reads_it(sheet):
    sheet.keys("Shift+ArrowDown", "Shift+ArrowRight", "Control+c")
    assert selected(sheet) == ["mass, level 6", "stiffness x, level 6", "mass, level 5", "stiffness x, level 5"]
    assert sheet.page.evaluate("navigator.clipboard.readText()") == "468.5\t571000\r\n468.5\t604000"
    sheet.shot("range")
    sheet.cell("storey height, level 2").click()
    sheet.cell("mass, level 1").click(modifiers=["Shift"])
    assert len(selected(sheet)) == 4
    sheet.cell("level, row 2").hover()
    sheet.page.mouse.down()
    sheet.cell("storey height, level 5").hover()
    sheet.page.mouse.up()
    assert len(selected(sheet)) == 6
    sheet.keys("Control+a", "Control+c")
    lines = sheet.page.evaluate("navigator.clipboard.readText()").splitlines()
    assert lines[2].split("\t") == ["6", "3.45", "468.5", "571000", "512000", "21.85", "909.0", "8914.2", "1.000"]
    assert len(lines) == 9
    sheet.keys("Escape")
    assert selected(sheet) == []


def test_a_range_is_cleared_and_comes_back_in_one_step(sheet):
    sheet.keys("Shift+ArrowDown", "Shift+ArrowDown", "Delete")
    saved(sheet, [*MASSES[:2], "", "", "", *MASSES[5:]])
    sheet.until(lambda: "waits" in (sheet.block("modes").locator(".calcsheet-note").text_content() or ""), "words")
    sheet.keys("Control+z")
    saved(sheet, MASSES)
    sheet.keys("Control+y")
    saved(sheet, [*MASSES[:2], "", "", "", *MASSES[5:]])
    sheet.keys("Control+z")
    saved(sheet, MASSES)
    sheet.keys("Control+Shift+z")
    saved(sheet, [*MASSES[:2], "", "", "", *MASSES[5:]])


def test_cut_and_paste_moves_cells(sheet):
    sheet.keys("Shift+ArrowDown", "Control+x")
    saved(sheet, [*MASSES[:2], "", "", *MASSES[4:]])
    sheet.keys("ArrowUp", "ArrowUp", "Control+v")
    saved(sheet, ["468.5", "468.5", "", "", *MASSES[4:]])


def test_fill_down(sheet):
    sheet.keys("ArrowUp", "Shift+ArrowDown", "Shift+ArrowDown", "Control+d")
    saved(sheet, ["38.5", "402.0", "402.0", "402.0", *MASSES[4:]])
    sheet.cell("mass, level 3").click()
    sheet.keys("Control+d")  # a single cell takes from the one above
    saved(sheet, ["38.5", "402.0", "402.0", "402.0", "474.0", "474.0", *MASSES[6:]])


def test_rows_are_added_moved_and_deleted_by_keys(sheet):
    sheet.keys("Alt+Shift+ArrowDown")
    sheet.until(lambda: sheet.focused() == "level, row 4", "the focus in the new row")
    sheet.keys("'5 upper", "Tab", "'3.2", "Tab", "'410", "Tab", "'5e5", "Tab", "'4.5e5", "Enter")
    saved(sheet, ["Plant", "Roof", "6", "5 upper", "5", "4", "3", "2", "1", "Ground"], "level")
    sheet.cell("level, row 4").click()
    sheet.keys("Alt+ArrowUp")
    saved(sheet, ["Plant", "Roof", "5 upper", "6", "5", "4", "3", "2", "1", "Ground"], "level")
    sheet.until(lambda: sheet.focused() == "level, row 3", "the focus in the row that moved")
    sheet.keys("Shift+ArrowDown", "Alt+ArrowDown")
    saved(sheet, ["Plant", "Roof", "5", "5 upper", "6", "4", "3", "2", "1", "Ground"], "level")
    sheet.keys("Alt+Delete")
    saved(sheet, ["Plant", "Roof", "5", "4", "3", "2", "1", "Ground"], "level")
    sheet.until(lambda: sheet.focused() == "level, row 4", "the focus in what stands there now")
    sheet.keys("Alt+Shift+ArrowUp")
    saved(sheet, ["Plant", "Roof", "5", "", "4", "3", "2", "1", "Ground"], "level")
    for _ in range(8):
        sheet.keys("Control+z")
    sheet.until(lambda: sheet.file.read_text() != sheet.start and len(levels(sheet)) == 10, "eight steps taken back")


def test_the_buttons_do_the_same_and_are_reached_by_keyboard(sheet):
    sheet.page.get_by_role("button", name="add level below").click()
    sheet.until(lambda: len(levels(sheet)) == 10, "a row more")
    sheet.until(lambda: sheet.focused() == "level, row 4", "the focus in it")
    sheet.keys("Escape")
    focused = "document.activeElement.textContent"
    assert sheet.page.evaluate(focused) == "undo"
    sheet.keys("ArrowRight", "ArrowRight", "ArrowRight", "ArrowRight")
    assert sheet.page.evaluate(focused) == "delete level"
    sheet.keys("Enter")
    saved(sheet, MASSES)
    sheet.keys("Escape", "ArrowLeft")
    sheet.page.get_by_role("button", name="keys ?").click()
    keys = sheet.page.locator(".calcsheet-keys")
    assert "fill the range down from its first row" in keys.text_content()
    sheet.shot("keys")
    sheet.cell("mass, level 6").click()
    sheet.keys("F1")
    assert not keys.is_visible()


def test_undo_survives_running_the_cell_again(sheet):
    sheet.keys("'500", "Enter")
    saved(sheet, replaced(2, "500"))
    sheet.command("notebook:run-all-cells")
    sheet.until(lambda: "as read" in sheet.status() or "saved" in sheet.status(), "the table")
    sheet.wait_for_kernel()
    undo = sheet.page.get_by_role("button", name="undo")
    sheet.until(
        lambda: undo.count() == 1 and undo.get_attribute("title") == "Ctrl + Z: mass typed", "what can be undone"
    )
    sheet.cell("mass, level 4").click()
    sheet.keys("Control+z")
    saved(sheet, MASSES)


def test_a_block_with_decimal_commas_and_units_from_a_spreadsheet(sheet):
    sheet.cell("storey height, level 6").click()
    sheet.paste('3,50 m\t402,5 t\r\n350 cm\t"1.001,25 t"\r\n')
    saved(sheet, replaced(3, "1001.25", replaced(2, "402.5")))
    assert column(sheet, "storey height [m]")[2:4] == ["3.5", "3.5"]
    assert sheet.cell("mass, level 5").input_value() == "1001.25"
    sheet.until(lambda: sheet.block("modes").locator("table").count() > 0, "numbers")


def test_a_value_pasted_into_a_range_fills_it(sheet):
    sheet.keys("Shift+ArrowDown", "Shift+ArrowDown")
    sheet.paste("450")
    saved(sheet, [*MASSES[:2], "450", "450", "450", *MASSES[5:]])


def test_another_unit_is_converted_and_one_of_another_quantity_refused(sheet):
    sheet.cell("storey height, level 6").click()
    sheet.keys("'11 ft 6", "Escape", "'138 in", "Enter")  # 138 · 0.0254 m, exact by definition
    sheet.until(lambda: column(sheet, "storey height [m]")[2] == "3.5052", "138 in in metres")
    sheet.until(lambda: sheet.cell("storey height, level 6").input_value() == "3.5052", "the same on the page")
    sheet.keys("'12 kg", "Enter", "ArrowUp")
    wrong = sheet.cell("storey height, level 5")
    sheet.until(lambda: wrong.get_attribute("aria-invalid") == "true", "the cell marked")
    words = 'storeys.csv, level "5": storey height "12 kg"; must be a number in m, and "kg" is a unit of mass'
    assert sheet.page.locator(f"#{wrong.get_attribute('aria-describedby')}").text_content() == words
    bubble = sheet.page.locator(".calcsheet-bubble")
    sheet.keys("ArrowUp")
    sheet.until(lambda: not bubble.is_visible(), "no words beside a cell that is right")
    sheet.keys("ArrowDown")
    sheet.until(bubble.is_visible, "words beside the focused cell")
    assert bubble.text_content() == words
    sheet.shot("refused")
    sheet.keys("ArrowUp")
    wrong.hover()
    sheet.until(bubble.is_visible, "words under the pointer")
    assert words in sheet.block("modes").locator(".calcsheet-note").text_content()
    assert sheet.status().endswith("the blocks below wait for the values marked here")


def test_calculated_columns_are_read_only(sheet):
    elevation = sheet.cell("elevation, level 6")
    before = elevation.input_value()
    elevation.click()
    sheet.keys("'99", "Delete")
    sheet.paste("1\n2\n")
    sheet.until(lambda: "elevation is calculated" in sheet.status(), "the refusal in words")
    assert elevation.input_value() == before
    assert elevation.evaluate("input => input.closest('[aria-readonly=true]') !== null")
    assert sheet.file.read_text() == sheet.start


def test_no_key_reaches_the_notebook(sheet):
    before = sheet.cells()
    sheet.keys("'ddabxvyzmj00", "Escape", "Delete", "Control+z", "Backspace", "Control+z")
    sheet.keys("Shift+Enter", "Control+Enter", "Alt+Enter", "Escape", "Escape", "ArrowRight", "'dd", "Escape")
    sheet.keys("Escape")  # to the buttons
    assert sheet.page.evaluate("document.activeElement.closest('.calcsheet-tools') !== null")
    sheet.keys("'ddabxm", "ArrowRight", "'dd", "Escape")
    assert sheet.cells() == before
    assert sheet.page.locator(".jp-Dialog").count() == 0


def test_forty_cells_typed_quickly_all_arrive(sheet):
    sheet.cell("level, row 1").click()
    block = "\n".join(f"L{40 - i}\t3.2\t300\t900000\t800000" for i in range(40))
    sheet.paste(block + "\n")
    sheet.until(lambda: len(levels(sheet)) == 40, "forty rows")
    sheet.until(lambda: sheet.cell("mass, level L1").count() == 1, "forty rows on the page")
    sheet.cell("mass, level L40").click()
    wanted = [f"{300 + i}.5" for i in range(40)]
    for mass in wanted:
        sheet.keys(f"'{mass}", "Enter")
    saved(sheet, wanted)
    on_page = sheet.block("storeys").locator('input[aria-label^="mass, level"]')
    sheet.until(lambda: [each.input_value() for each in on_page.all()] == wanted, "the same on the page")
    in_python = "[row[2] for row in job.job.files.reading.rows]"
    assert sheet.kernel(in_python) == wanted


def test_eighty_rows_of_five_are_pasted_and_recomputed(sheet):
    before = first_period(sheet)
    sheet.cell("level, row 1").click()
    names = [f"L{79 - i}" for i in range(79)] + ["Ground"]  # the job's effective base
    block = "".join(f"{name}\t3,2\t{300 + i},5\t9{i:02d}000\t8{i:02d}000\r\n" for i, name in enumerate(names))
    began = time.monotonic()
    sheet.paste(block)
    sheet.until(lambda: len(levels(sheet)) == 80, "eighty rows in the file")
    print(f"80 × 5 pasted until it is on disk: {time.monotonic() - began:.2f} s")
    assert masses(sheet) == [f"{300 + i}.5" for i in range(80)]
    sheet.until(lambda: first_period(sheet) > 2.0 * before, "a far longer first period")
    sheet.keys("Control+z")
    saved(sheet, MASSES)


def test_a_building_of_thirty_storeys_is_entered_and_revised_by_keyboard_alone(sheet):
    sheet.keys("Control+a", "Alt+Delete")
    sheet.until(lambda: len(levels(sheet)) == 0, "an empty table")
    first = sheet.page.get_by_role("button", name="add the first level")
    first.focus()
    sheet.keys("Enter")
    sheet.until(lambda: sheet.focused() == "level, row 1", "the first row")
    for i in range(29):
        sheet.keys("Alt+Shift+ArrowDown")
        sheet.until(lambda i=i: sheet.focused() == f"level, row {i + 2}", "the next row")
    sheet.keys("Control+Home")
    for i in range(30):
        height = "4.8" if i == 28 else "3.4"
        name = "Ground" if i == 29 else str(29 - i)  # the job's effective base
        cells = (name, height, f"{410 + 3 * i}", f"{500 + 20 * i} MN/m", f"{450 + 18 * i} MN/m")
        for cell in cells:
            sheet.keys(f"'{cell}", "Tab")
        sheet.until(lambda i=i: sheet.focused() == f"level, row {i + 2}" or i == 29, "the next row by Tab")
    sheet.until(lambda: len(levels(sheet)) == 30 and "" not in column(sheet, "stiffness y [kN/m]"), "thirty storeys")
    assert column(sheet, "stiffness x [kN/m]")[0] == "500000"
    sheet.until(lambda: sheet.block("modes").locator("table").count() > 0, "numbers", 60)
    before = first_period(sheet)
    sheet.cell("mass, level 20").focus()
    sheet.keys("'2 400 000 kg", "Enter")
    sheet.until(lambda: first_period(sheet) > before, "a longer first period after the revision", 60)
    sheet.shot("thirty")
