"""Nothing typed is lost, and the status line tells the truth: reopening, restarting, other tabs, kernels and editors."""

from __future__ import annotations

import pytest

pytestmark = pytest.mark.xdist_group("browser")
MASS = "mass, level 6"


@pytest.fixture
def job(new_job, request):
    return new_job(request.node.originalname)


@pytest.fixture
def opened(job, open_notebook):
    """The job's notebook, opened for one test alone and run."""
    sheet = open_notebook(f"{job}/calc.ipynb")
    sheet.run_all()
    sheet.file = sheet.lab.folder / job / "storeys.csv"
    ready(sheet)
    return sheet


def ready(sheet):
    sheet.until(lambda: sheet.cell(MASS).count() == 1 and sheet.block("mode plot").count() == 1, "the blocks", 60)


def typed(sheet, text):
    sheet.cell(MASS).click()
    sheet.keys(f"'{text}", "Enter")


def shows(sheet, text, label=MASS):
    sheet.until(lambda: sheet.cell(label).input_value() == text, f"{text} on the page")


def test_the_status_says_where_and_when(sheet):
    typed(sheet, "500")
    sheet.until(lambda: sheet.status().startswith("saved to storeys.csv at "), "the file and the time")
    hour, minute, second = map(int, sheet.status().rpartition(" ")[2].split(":"))
    assert hour < 24
    assert minute < 60
    assert second < 60
    assert "6,3.45,500,571000,512000" in sheet.file.read_text()


def test_run_all_and_a_restart_keep_what_was_typed(opened):
    typed(opened, "500.5")
    opened.until(lambda: "500.5" in opened.file.read_text(), "the value in the file")
    opened.run_all()
    opened.wait_for_kernel()
    ready(opened)
    shows(opened, "500.5")
    opened.page.evaluate(
        "() => window.jupyterapp.shell.currentWidget.sessionContext.session.kernel.restart().then(() => null)"
    )
    opened.run_all()
    ready(opened)
    shows(opened, "500.5")
    typed(opened, "501")
    opened.until(lambda: "6,3.45,501," in opened.file.read_text(), "a value typed after the restart in the file")


def test_two_tabs_on_one_kernel_agree(opened, open_notebook):
    opened.save()
    other = open_notebook(opened.path, same=opened)
    other.until(lambda: other.cell(MASS).count() == 1, "the table in the other tab", 60)
    typed(opened, "511")
    shows(other, "511")
    typed(other, "512")
    shows(opened, "512")
    assert "6,3.45,512," in opened.file.read_text()
    other.cell("mass, level 5").click()
    other.keys("Control+z")
    shows(opened, "511")
    other.page.close()


def test_a_file_edited_elsewhere_is_compared_and_loaded_or_written_over(sheet):
    typed(sheet, "500")
    sheet.until(lambda: "6,3.45,500" in sheet.file.read_text(), "the value in the file")
    theirs = sheet.file.read_text().replace("6,3.45,500", "6,3.45,501.5").replace("5,3.45,468.5", "5,3.45,470")
    sheet.file.write_text(theirs)
    sheet.keys("Escape")
    sheet.cell("mass, level 5").click()
    load = sheet.page.get_by_role("button", name="load the file")
    load.wait_for()
    lines = sheet.page.locator(".calcsheet-conflict tbody tr")
    told = [line.locator("th, td").all_text_contents() for line in lines.all()]
    assert told == [["6", "mass [t]", "500", "501.5"], ["5", "mass [t]", "468.5", "470"]]
    assert "storeys.csv: changed on disk" in sheet.status()
    sheet.shot("conflict")
    assert "storeys.csv: changed on disk" in sheet.block("modes").locator(".calcsheet-note").text_content()
    load.click()
    shows(sheet, "501.5")
    sheet.until(lambda: "read from disk" in sheet.status(), "what was done")
    sheet.keys("Control+z")  # what was here comes back
    shows(sheet, "500")
    sheet.until(lambda: "6,3.45,500" in sheet.file.read_text(), "it in the file as well")
    sheet.file.write_text(theirs)
    sheet.keys("Escape")
    sheet.cell("mass, level 4").click()
    keep = sheet.page.get_by_role("button", name="keep what is here")
    keep.wait_for()
    keep.click()
    sheet.until(lambda: "6,3.45,500" in sheet.file.read_text(), "what is here in the file")
    sheet.until(lambda: sheet.status().startswith("saved to"), "so said")


def test_two_kernels_on_one_file_conflict_visibly_and_lose_nothing(sheet, new_job, open_notebook, flavour):
    other_path = sheet.lab.folder / sheet.path
    second = other_path.with_name("second.ipynb")
    second.write_bytes(other_path.read_bytes())
    other = open_notebook(str(second.relative_to(sheet.lab.folder)))
    other.run_all()
    ready(other)
    typed(sheet, "505")
    sheet.until(lambda: "6,3.45,505" in sheet.file.read_text(), "the first kernel's value in the file")
    other.cell("mass, level 4").click()
    other.keys("'480", "Enter")
    other.until(lambda: "changed on disk" in other.status(), "the conflict")
    assert "6,3.45,505" in sheet.file.read_text(), "not written over"
    shows(other, "480", "mass, level 4")
    other.page.get_by_role("button", name="keep what is here").click()
    other.until(lambda: "4,3.45,480" in sheet.file.read_text(), "the second kernel's table in the file")
    other.cell("mass, level 3").click()
    other.keys("Control+z")
    other.until(lambda: "6,3.45,505" in sheet.file.read_text(), "the first kernel's table again")


def test_outputs_older_than_the_table_are_announced_after_a_reload(opened):
    opened.save()
    opened.open()
    ready(opened)
    typed(opened, "333")
    opened.until(lambda: "6,3.45,333" in opened.file.read_text(), "the value in the file")
    banner = opened.block("storeys").locator(".calcsheet-banner")
    banner.wait_for()
    assert banner.text_content().startswith("The outputs stored in this notebook are older than what is shown here")
    opened.run_all()
    opened.wait_for_kernel()
    opened.until(lambda: opened.page.locator(".calcsheet-banner:visible").count() == 0, "agreement after running all")
