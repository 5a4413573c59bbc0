"""The blocks on screen only, in a real notebook: the what-if by keyboard, and mode shapes that move."""

from __future__ import annotations

import re
import shutil
import time
from pathlib import Path

import nbformat
import pytest

pytestmark = pytest.mark.xdist_group("browser")  # one server for all
DEMO = Path(__file__).parents[2] / "example_notebooks" / "alder-quay"
CELLS = (
    "from calcsheet import JobCard, ModeMotion, ModeSolver, StoreyTable, WhatIf\n"
    'job = JobCard(".")\nstoreys = StoreyTable(job)\nmodes = ModeSolver(storeys)',
    "WhatIf(modes)",
    "ModeMotion(modes)",
)


@pytest.fixture
def folder(lab, request):
    """A copy of the demo's job in the server's folder, with a notebook of the two blocks."""
    made = lab.folder / re.sub(r"\W+", "-", request.node.name)
    made.mkdir()
    for file in ("job.toml", "storeys.csv"):
        shutil.copy(DEMO / file, made)
    kernel = {"name": "python3", "display_name": "Python 3", "language": "python"}
    cells = [nbformat.v4.new_code_cell(source) for source in CELLS]
    nbformat.write(nbformat.v4.new_notebook(cells=cells, metadata={"kernelspec": kernel}), made / "calc.ipynb")
    return made


@pytest.fixture
def sheet(folder, open_notebook):
    sheet = open_notebook(f"{folder.name}/calc.ipynb")
    sheet.run_all()
    until(lambda: shown(sheet) != "", "the what-if")
    motion(sheet).locator(".shape").wait_for(state="attached")
    return sheet


def until(holds, what, seconds=15.0):
    end = time.monotonic() + seconds
    while not holds():
        assert time.monotonic() < end, f"still missing: {what}"
        time.sleep(0.05)


def what_if(sheet):
    return sheet.page.locator(".calcsheet-live[data-block='what if']")


def motion(sheet):
    return sheet.page.locator(".calcsheet-live[data-block='mode motion']")


def shown(sheet):
    """The first periods in one sentence."""
    found = what_if(sheet).locator(".calcsheet-short")
    return found.text_content() if found.count() else ""


def period(sheet):
    return float(re.search(r"First period ([\d.]+) s in x", shown(sheet))[1])


def points(sheet):
    return motion(sheet).locator(".shape").get_attribute("points")


def moves(sheet):
    before = points(sheet)
    time.sleep(0.3)
    return points(sheet) != before


def focused(sheet):
    return sheet.page.evaluate(
        "document.activeElement.getAttribute('aria-label') ?? document.activeElement.textContent"
    )


def test_factors_are_set_and_adopted_by_keyboard(sheet, folder):
    keys = sheet.page.keyboard
    before, saved, cells = (folder / "storeys.csv").read_text(), period(sheet), sheet.cells()
    field = what_if(sheet).get_by_label("mass factor", exact=True)
    field.focus()
    keys.press("Control+a")
    keys.type("1.21")
    until(lambda: period(sheet) == pytest.approx(1.1 * saved, rel=1e-3), "√1.21 times the period")
    assert field.input_value() == "1.21"
    keys.press("Tab")
    assert focused(sheet) == "stiffness factor x, slider"
    for _ in range(10):
        keys.press("ArrowLeft")
    stiffness = what_if(sheet).get_by_label("stiffness factor x", exact=True)
    assert stiffness.input_value() == "0.9"
    until(lambda: period(sheet) == pytest.approx(1.1 * saved / 0.9**0.5, rel=1e-3), "the softer model's period")
    assert (folder / "storeys.csv").read_text() == before
    what_if(sheet).scroll_into_view_if_needed()
    sheet.shot("what-if")
    field.focus()
    keys.press("Control+a")
    keys.type("9")
    keys.press("Enter")
    error = what_if(sheet).locator("p.calcsheet-errors")
    until(lambda: error.text_content() == "mass factor: must be a number from 0.25 to 4", "what is allowed")
    assert field.get_attribute("aria-describedby") == error.get_attribute("id")
    keys.press("Control+a")
    keys.type("1.1")
    until(lambda: period(sheet) == pytest.approx((1.1 / 0.9) ** 0.5 * saved, rel=1e-3), "the last factors' period")
    for _ in range(6):
        keys.press("Tab")
    assert focused(sheet) == "adopt …"
    until(lambda: what_if(sheet).get_by_text("adopt …").get_attribute("aria-disabled") == "false", "a way to adopt")
    keys.press("Enter")
    said = what_if(sheet).locator(".calcsheet-confirm p")
    assert said.text_content() == (
        'Adopting changes column "mass [t]" of storeys.csv by a factor of 1.1 and stiffness.cracked.factor_x of job.toml '
        "from 0.55 to 0.495."
    )
    sheet.shot("what-if-adopt")
    keys.press("Escape")
    assert focused(sheet) == "adopt …"
    assert (folder / "storeys.csv").read_text() == before
    keys.press("Enter")
    keys.press("Tab")
    assert focused(sheet) == "adopt into the files"
    keys.press("Enter")
    until(lambda: "6,3.45,515.35," in (folder / "storeys.csv").read_text(), "the masses in the file")
    assert "factor_x = 0.495\n" in (folder / "job.toml").read_text()
    until(lambda: field.input_value() == stiffness.input_value() == "1", "the factors back at 1")
    assert period(sheet) == pytest.approx((1.1 / 0.9) ** 0.5 * saved, rel=1e-3)
    sheet.shot("what-if-adopted")
    assert sheet.cells() == cells, "a key reached the notebook"


def test_dragging_never_waits_and_the_newest_value_stands(sheet):
    saved = period(sheet)
    slider = what_if(sheet).get_by_label("mass factor, slider", exact=True)
    took = slider.evaluate(
        """(slider) => {
            const start = performance.now();
            for (let i = 0; i <= 200; i++) {
                slider.value = String(1 + i / 100);
                slider.dispatchEvent(new Event("input", {bubbles: true}));
            }
            return performance.now() - start;
        }"""
    )
    until(lambda: period(sheet) == pytest.approx(3.0**0.5 * saved, rel=1e-3), "the newest value's period")
    assert slider.input_value() == "3"
    assert took < 1000.0  # ms for 200 values: the page answered nobody's while it was dragged


def test_mode_shapes_move_while_they_are_seen_and_wanted(sheet):
    page = sheet.page
    motion(sheet).scroll_into_view_if_needed()
    until(lambda: motion(sheet).get_attribute("data-moves") == "true", "the motion")
    assert moves(sheet)
    motion(sheet).get_by_role("combobox", name="mode", exact=True).select_option("2")
    motion(sheet).get_by_role("combobox", name="direction", exact=True).select_option("y")
    drawing = motion(sheet).get_by_role("img")
    assert re.match(r"Mode 3 in y, T = 0\.\d+ s: ", drawing.get_attribute("aria-label"))
    said = " ".join(drawing.locator("text").all_text_contents())
    for words in ("displacement in y, largest = 1", "level, elevation [m]", "Ground"):
        assert words in said
    pause = motion(sheet).get_by_role("button", name="pause the motion")
    pause.focus()
    page.keyboard.press("Enter")
    assert motion(sheet).get_attribute("data-moves") == "false"
    assert not moves(sheet)
    phase = motion(sheet).get_by_label("phase")
    phase.focus()
    page.keyboard.press("Home")
    at_rest = points(sheet)
    page.keyboard.press("ArrowRight")
    assert points(sheet) != at_rest
    page.keyboard.press("Home")
    sheet.shot("motion")
    motion(sheet).get_by_role("button", name="play the motion").click()
    assert moves(sheet)
    what_if(sheet).scroll_into_view_if_needed()
    page.set_viewport_size({"width": 1280, "height": 420})  # the drawing is below the edge now
    until(lambda: motion(sheet).get_attribute("data-moves") == "false", "rest while it is not seen")


def test_nothing_moves_by_itself_where_reduced_motion_is_asked_for(sheet):
    sheet.page.emulate_media(reduced_motion="reduce")
    motion(sheet).scroll_into_view_if_needed()
    until(lambda: motion(sheet).get_attribute("data-moves") == "false", "rest")
    assert not moves(sheet)
    assert not motion(sheet).get_by_role("button").is_visible()
    before = points(sheet)
    phase = motion(sheet).get_by_label("phase")
    phase.focus()
    for _ in range(12):
        sheet.page.keyboard.press("ArrowRight")
    assert points(sheet) != before
    sheet.shot("motion-reduced")


@pytest.mark.parametrize("theme", ["JupyterLab Light", "JupyterLab Dark"])
def test_everything_is_labelled_and_legible_also_at_200_per_cent(sheet, theme):
    axe = pytest.importorskip("axe_playwright_python.sync_playwright")
    page = sheet.page
    page.evaluate(
        "t => window.jupyterapp.commands.execute('apputils:change-theme', {theme: t}).then(() => null)", theme
    )
    page.wait_for_function("t => document.body.dataset.jpThemeName === t", arg=theme)
    what_if(sheet).get_by_label("mass factor", exact=True).fill("1.3")
    until(lambda: "masses × 1.3" in what_if(sheet).text_content(), "the factor's numbers")
    what_if(sheet).get_by_text("adopt …").click()
    found = axe.Axe().run(page, context=".calcsheet-live")
    assert found.response["violations"] == [], found.generate_report()
    drawing = motion(sheet).get_by_role("img")
    before = drawing.bounding_box()["width"]
    page.set_viewport_size({"width": 640, "height": 900})  # what 1280 px hold at 200 %
    until(lambda: drawing.bounding_box()["width"] < before, "a narrower drawing")
    until(lambda: drawing.locator("text").first.bounding_box()["height"] > 12, "words of their own size")
    found = axe.Axe().run(page, context=".calcsheet-live")
    assert found.response["violations"] == [], found.generate_report()
    for block in (what_if(sheet), motion(sheet)):
        block.scroll_into_view_if_needed()
        until(lambda block=block: block.evaluate("e => e.scrollWidth <= e.clientWidth + 1"), "all within the width")
    what_if(sheet).scroll_into_view_if_needed()
    sheet.shot(f"what-if-{theme.split()[1].lower()}")
    motion(sheet).scroll_into_view_if_needed()
    sheet.shot(f"motion-{theme.split()[1].lower()}")
