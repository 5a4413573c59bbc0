"""The two widgets in a real notebook, over a handler that holds its rows in memory."""

from __future__ import annotations

import ast
import json
import re
import shutil
import time
from pathlib import Path

import pytest

pytestmark = pytest.mark.xdist_group("browser")  # one server for all
CELLS = ["from rows_in_memory import *", "show(storeys)", "show(view)", "tail = 1"]


@pytest.fixture
def sheet(lab, new_notebook, open_notebook):
    """A notebook that shows both widgets, run."""
    shutil.copy(Path(__file__).with_name("rows_in_memory.py"), lab.folder)
    sheet = open_notebook(new_notebook(CELLS))
    sheet.run_all()
    cell(sheet, "mass, level 5").wait_for()
    sheet.page.locator("#total").wait_for()
    return sheet


def cell(sheet, label):
    return sheet.page.get_by_label(label, exact=True)


def status(sheet):
    return sheet.page.locator(".calcsheet-live[data-block=storeys] .calcsheet-status")


def expect_text(locator, text, timeout=5.0):
    until = time.monotonic() + timeout
    while time.monotonic() < until:
        if text in (locator.text_content() or ""):
            return
        time.sleep(0.05)
    raise AssertionError(f"{locator.text_content()!r} lacks {text!r}")


def expect_value(locator, value, timeout=5.0):
    until = time.monotonic() + timeout
    while time.monotonic() < until:
        if locator.input_value() == value:
            return
        time.sleep(0.05)
    raise AssertionError(f"{locator.input_value()!r} is not {value!r}")


def kernel_says(sheet, expression):
    """Value of an expression in the notebook's kernel."""
    reply = sheet.page.evaluate(
        """async (code) => {
            const kernel = window.jupyterapp.shell.currentWidget.sessionContext.session.kernel;
            const request = {code: '', user_expressions: {value: code}, silent: false};
            const reply = await kernel.requestExecute(request).done;
            return reply.content.user_expressions.value.data['text/plain'];
        }""",
        f"__import__('json').dumps({expression})",
    )
    return json.loads(ast.literal_eval(reply))


def refuse_new_kernels(page):
    def answer(route):
        route.abort() if route.request.method == "POST" else route.continue_()

    page.route("**/api/sessions*", answer)


def focused(sheet):
    return sheet.page.evaluate("document.activeElement.getAttribute('aria-label')")


def test_a_value_is_committed_by_enter_tab_and_blur_and_restored_by_escape(sheet):
    page = sheet.page
    sheet.shot("start")
    cell(sheet, "mass, level 5").click()
    page.keyboard.press("Control+a")
    page.keyboard.type("300.5")
    assert kernel_says(sheet, "len(seen)") == 0, "half-typed text was sent"
    assert kernel_says(sheet, "len(looks)") > 0, "nobody looked at the file"
    page.keyboard.press("Enter")
    expect_text(page.locator("#total"), "1091.3 t")
    assert focused(sheet) == "mass, level 4"
    page.keyboard.type("250")
    page.keyboard.press("Tab")
    expect_text(page.locator("#total"), "1099.8 t")
    cell(sheet, "storey height, level 4").fill("3.55")
    cell(sheet, "mass, level Roof").click()
    expect_value(cell(sheet, "elevation, level Roof"), "17.30")
    page.keyboard.type("9")
    page.keyboard.press("Escape")
    expect_value(cell(sheet, "mass, level Roof"), "184.0")
    page.keyboard.press("ArrowDown")
    assert focused(sheet) == "mass, level 5"
    sent = kernel_says(sheet, "[(m['op'], m['key'], m['text']) for m in seen]")
    assert sent == [["set", "mass", "300.5"], ["set", "mass", "250"], ["set", "height", "3.55"]]
    expect_text(status(sheet), "saved, revision 4")


def test_no_key_reaches_the_notebook(sheet):
    page = sheet.page
    before = sheet.cells()
    cell(sheet, "level, row 2").click()
    page.keyboard.press("Control+a")
    for key in "ddabxvyzmj00":
        page.keyboard.press(key)
    expect_value(cell(sheet, "level, row 2"), "ddabxvyzmj00")
    for _ in range(12):
        page.keyboard.press("Control+z")
    expect_value(cell(sheet, "level, row 2"), "5")
    for key in ("Delete", "Backspace", "Shift+Enter", "Control+Enter", "Alt+Enter", "Escape", *"dd", "Escape"):
        page.keyboard.press(key)
    assert sheet.cells() == before
    assert page.locator(".jp-Dialog").count() == 0
    assert kernel_says(sheet, "len(rows)") == 5


def test_saving_by_key_commits_and_saves(sheet):
    page = sheet.page
    cell(sheet, "mass, level 5").fill("299")
    page.keyboard.press("Control+s")
    expect_text(page.locator("#total"), "1089.8 t")
    until = time.monotonic() + 10
    stored = sheet.lab.folder / sheet.path
    while "show(view)" not in stored.read_text() or "299" not in stored.read_text():
        assert time.monotonic() < until, "the notebook was not saved with the new value"
        page.keyboard.press("Control+s")
        time.sleep(0.5)


def test_an_update_leaves_what_is_being_typed_alone(sheet):
    page = sheet.page
    cell(sheet, "mass, level 4").click()
    page.keyboard.press("End")
    page.keyboard.type("7")
    page.evaluate("window.mark = document.activeElement")
    change = "[rows.insert(1, row('6', mass='150')), rows[3].update(mass='99'), renew()]"
    kernel_says(sheet, change)
    cell(sheet, "mass, level 6").wait_for()
    assert page.evaluate("window.mark === document.activeElement && window.mark.value") == "241.57"
    page.keyboard.type("5")
    page.keyboard.press("Enter")
    expect_text(page.locator("#total"), "1182.4 t")
    assert kernel_says(sheet, "rows[3]['mass']") == "241.575"


def test_a_wrong_value_is_marked_and_the_view_waits_in_words(sheet):
    page = sheet.page
    cell(sheet, "mass, level Gallery").fill("-12")
    page.keyboard.press("Enter")
    wrong = cell(sheet, "mass, level Gallery")
    message = page.locator(".calcsheet-errors li")
    message.wait_for()
    assert message.text_content() == 'storeys.csv, level "Gallery": mass -12 t; must be above 0'
    assert wrong.get_attribute("aria-invalid") == "true"
    assert wrong.get_attribute("aria-describedby") == message.get_attribute("id")
    expect_text(page.locator(".calcsheet-note"), "waits for storeys.csv")
    assert page.locator("#total").count() == 0
    assert page.locator(".calcsheet-live figure").count() == 0
    sheet.shot("wrong")
    wrong.fill("777")
    page.keyboard.press("Enter")
    expect_text(message, "storeys.csv is open in another program; not saved")
    expect_value(wrong, "777")
    wrong.fill("90")
    page.keyboard.press("Enter")
    expect_text(page.locator("#total"), "1025.9 t")
    assert message.count() == 0
    assert wrong.get_attribute("aria-invalid") is None


def test_rows_are_added_removed_and_pasted(sheet):
    page = sheet.page
    cell(sheet, "mass, level 5").click()
    page.keyboard.press("Alt+Shift+ArrowDown")
    expect_value(cell(sheet, "level, row 3"), "new")
    page.wait_for_function("document.activeElement.getAttribute('aria-label') === 'level, row 3'")
    page.keyboard.press("Alt+Delete")
    cell(sheet, "mass, level new").wait_for(state="detached")
    assert kernel_says(sheet, "[r['level'] for r in rows]") == ["Roof", "5", "4", "Gallery", "2"]
    page.wait_for_function("document.activeElement.getAttribute('aria-label') === 'level, row 3'")
    page.evaluate("navigator.clipboard.writeText('90\\t1\\r\\n260.5\\t2\\r\\n11\\t3\\r\\n')")
    cell(sheet, "mass, level Gallery").click()
    page.keyboard.press("Control+v")
    cell(sheet, "mass, level new 5").wait_for()
    assert kernel_says(sheet, "[r['mass'] for r in rows]") == ["184.0", "241.5", "241.5", "90", "260.5", "11"]
    page.evaluate("navigator.clipboard.writeText('88.5\\r\\n')")
    page.keyboard.press("F2")
    page.keyboard.press("Control+a")
    page.keyboard.press("Control+v")
    expect_value(cell(sheet, "mass, level Gallery"), "88.5")
    page.keyboard.press("Enter")
    expect_text(page.locator("#total"), "1027.0 t")


def test_a_conflict_is_answered_by_a_button(sheet):
    conflict = {"kind": "conflict", "text": "storeys.csv was changed on disk. "}
    kernel_says(sheet, f"storeys.set_trait('status', {conflict})")
    sheet.page.get_by_role("button", name="load the file").click()
    expect_text(status(sheet), "saved, revision 2")
    assert kernel_says(sheet, "seen[-1]['op']") == "load"


def test_a_choice_is_sent_and_a_refused_one_goes_back(sheet):
    select = sheet.page.locator(".calcsheet-live select")
    select.select_option("unit mass")
    select.select_option("none")
    failed = sheet.page.locator(".calcsheet-live[data-block=shares] .calcsheet-status")
    expect_text(failed, "one shape at least must be shown")
    expect_value(select, "unit mass")


def test_a_kernel_that_is_gone_is_noticed(sheet):
    page = sheet.page
    sheet.stop_kernels()
    time.sleep(0.5)
    cell(sheet, "mass, level 5").fill("300")
    page.keyboard.press("Enter")
    expect_text(status(sheet), "NOT SAVED", timeout=5)
    expect_text(page.locator(".calcsheet-errors"), 'mass, level 5: "300" is not saved')
    expect_text(status(sheet), "NOT SAVED (1)", timeout=1)
    expect_value(cell(sheet, "mass, level 5"), "300")
    assert cell(sheet, "mass, level 5").get_attribute("aria-invalid") == "true"
    sheet.shot("gone")


def test_the_twin_stands_in_for_a_widget_without_a_kernel(sheet):
    page = sheet.page
    assert page.locator(".calcsheet-twin:visible").count() == 0
    cell(sheet, "mass, level 5").fill("301.25")
    page.keyboard.press("Enter")
    expect_text(page.locator("#total"), "1092.0 t")
    page.wait_for_function("document.querySelector('.calcsheet-twin').textContent.includes('301.25')")
    sheet.save()
    sheet.stop_kernels()
    for session in sheet.lab.api("GET", "sessions"):
        sheet.lab.api("DELETE", f"sessions/{session['id']}")
    refuse_new_kernels(page)
    sheet.open()
    twins = page.locator(".calcsheet-twin:visible")
    twins.first.wait_for()
    time.sleep(4)  # by now the notebook has given up on the widget and says so
    sheet.shot("twin")
    assert twins.count() == 2
    expect_text(twins.first, "301.25")
    assert page.locator("text=/model not found|Loading widget/ >> visible=true").count() == 0
    assert page.locator(".calcsheet-live").count() == 0


def test_an_untrusted_notebook_still_shows_the_twins(sheet):
    page = sheet.page
    sheet.save()
    sheet.stop_kernels()
    path = sheet.lab.folder / sheet.path
    path.write_text(path.read_text().replace("tail = 1", "tail = 2"))  # changed by another hand: no longer trusted
    refuse_new_kernels(page)
    sheet.open()
    twins = page.locator(".calcsheet-twin:visible")
    twins.first.wait_for()
    time.sleep(4)
    sheet.shot("untrusted")
    assert page.locator(".jp-mod-trusted").count() == 0
    assert twins.count() == 2
    expect_text(twins.first, "268.9")


def test_a_stored_copy_left_behind_after_a_reload_is_announced(sheet):
    page = sheet.page
    sheet.save()
    sheet.open()
    cell(sheet, "mass, level 5").wait_for()
    assert page.locator(".calcsheet-twin:visible").count() == 0
    assert page.locator(".calcsheet-banner:visible").count() == 0
    cell(sheet, "mass, level 5").fill("302")
    page.keyboard.press("Enter")
    expect_text(page.locator("#total"), "1092.8 t")
    page.locator(".calcsheet-banner:visible").first.wait_for(timeout=4000)
    assert re.search("run all cells again", page.locator(".calcsheet-banner:visible").first.text_content())
    sheet.shot("stale")
