"""The two widgets in a real notebook, over a handler that holds its rows in memory."""

from __future__ import annotations

import shutil
import time
from pathlib import Path

import nbformat
import pytest

pytestmark = pytest.mark.xdist_group("browser")  # one server for all
CELLS = ["from rows_in_memory import *", "show(storeys)", "show(view)", "tail = 1"]


@pytest.fixture(scope="module")
def shared(lab, flavour, opener):
    """A notebook that shows both widgets, run: shared by the tests that leave it working."""
    shutil.copy(Path(__file__).with_name("rows_in_memory.py"), lab.folder)
    notebook_at = lab.folder / f"widgets-{flavour}.ipynb"
    made = [nbformat.v4.new_code_cell(source) for source in CELLS]
    kernel = {"name": "python3", "display_name": "Python 3", "language": "python"}
    nbformat.write(nbformat.v4.new_notebook(cells=made, metadata={"kernelspec": kernel}), notebook_at)
    return shown(opener(notebook_at.name))


def shown(sheet):
    sheet.run_all()
    cell(sheet, "mass, level 5").wait_for(timeout=60_000)
    sheet.page.locator("#total").wait_for()
    return sheet


@pytest.fixture
def sheet(shared):
    """The shared notebook with rows as at the start."""
    shared.keys("Escape")
    shared.kernel("[seen.clear(), rows.clear(), rows.extend(row(*s) for s in START), renew()][-1]")
    expect_text(shared.page.locator("#total"), "1032.3 t")
    shared.until(lambda: shared.status().startswith("saved"), "no words of the test before")
    return shared


@pytest.fixture
def own(lab, new_notebook, open_notebook):
    """A notebook for a test that ends its kernel."""
    shutil.copy(Path(__file__).with_name("rows_in_memory.py"), lab.folder)
    return shown(open_notebook(new_notebook(CELLS)))


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
    assert sheet.kernel("len(seen)") == 0, "half-typed text was sent"
    assert sheet.kernel("len(looks)") > 0, "nobody looked at the file"
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
    sent = sheet.kernel("[(m['op'], m['key'], m['text']) for m in seen]")
    assert sent == [["set", "mass", "300.5"], ["set", "mass", "250"], ["set", "height", "3.55"]]
    expect_text(status(sheet), "saved, revision")


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
    page.keyboard.press("F2")
    page.keyboard.type("7")
    page.evaluate("window.mark = document.activeElement")
    change = "[rows.insert(1, row('6', mass='150')), rows[3].update(mass='99'), renew()]"
    sheet.kernel(change)
    cell(sheet, "mass, level 6").wait_for()
    assert page.evaluate("window.mark === document.activeElement && window.mark.value") == "241.57"
    page.keyboard.type("5")
    page.keyboard.press("Enter")
    expect_text(page.locator("#total"), "1182.4 t")
    assert sheet.kernel("rows[3]['mass']") == "241.575"


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


def test_a_choice_is_sent_and_a_refused_one_goes_back(sheet):
    select = sheet.page.locator(".calcsheet-live select")
    select.select_option("unit mass")
    select.select_option("none")
    failed = sheet.page.locator(".calcsheet-live[data-block=shares] .calcsheet-status")
    expect_text(failed, "one shape at least must be shown")
    expect_value(select, "unit mass")


def test_a_kernel_that_is_gone_is_noticed(own):
    page = own.page
    own.stop_kernel()
    time.sleep(0.5)
    cell(own, "mass, level 5").fill("300")
    page.keyboard.press("Enter")
    expect_text(status(own), "NOT SAVED", timeout=5)
    expect_text(page.locator("ul.calcsheet-errors"), 'mass, level 5: "300" is not saved')
    expect_text(status(own), "NOT SAVED (1)", timeout=1)
    expect_value(cell(own, "mass, level 5"), "300")
    assert cell(own, "mass, level 5").get_attribute("aria-invalid") == "true"
    own.shot("gone")


def test_the_twin_stands_in_for_a_widget_without_a_kernel_also_where_the_notebook_is_not_trusted(own):
    page = own.page
    assert page.locator(".calcsheet-twin:visible").count() == 0
    cell(own, "mass, level 5").fill("301.25")
    page.keyboard.press("Enter")
    expect_text(page.locator("#total"), "1092.0 t")
    page.wait_for_function("document.querySelector('.calcsheet-twin').textContent.includes('301.25')")
    own.save()
    own.stop_kernel()
    refuse_new_kernels(page)
    own.open()
    twins = page.locator(".calcsheet-twin:visible")
    twins.first.wait_for()
    time.sleep(4)  # by now the notebook has given up on the widget and says so
    own.shot("twin")
    assert twins.count() == 2
    expect_text(twins.first, "301.25")
    assert page.locator("text=/model not found|Loading widget/ >> visible=true").count() == 0
    assert page.locator(".calcsheet-live").count() == 0
    path = own.lab.folder / own.path
    path.write_text(path.read_text().replace("tail = 1", "tail = 2"))  # changed by another hand: no longer trusted
    own.open()
    twins.first.wait_for()
    time.sleep(4)
    own.shot("untrusted")
    assert page.locator(".jp-mod-trusted").count() == 0
    assert twins.count() == 2
    expect_text(twins.first, "301.25")
