"""What everybody must be able to read and use: accessibility rules, dark theme, large type, a thousand rows."""

from __future__ import annotations

from pathlib import Path

import pytest

pytestmark = pytest.mark.xdist_group("browser")
EXAMPLES = Path(__file__).parents[2] / "example_notebooks"


@pytest.fixture(scope="module")
def violations():
    """What the accessibility rules find in a part of a page; the rules come with a package, nothing is fetched."""
    package = pytest.importorskip("axe_playwright_python")
    rules = (Path(package.__file__).parent / "axe.min.js").read_text("utf-8")

    def found(page, part=None):
        page.evaluate(f"{rules};null")
        told = page.evaluate("part => axe.run(part ?? document, {resultTypes: ['violations']})", part)
        assert told["passes"], "no rule had anything to look at"
        return [(v["id"], [node["html"][:200] for node in v["nodes"]]) for v in told["violations"]]

    return found


def test_the_blocks_break_no_rule_of_accessibility(sheet, violations):
    assert violations(sheet.page, ".calcsheet-live") == []
    sheet.keys("Shift+ArrowDown", "F1")
    assert violations(sheet.page, ".calcsheet-live") == []
    sheet.keys("'-12", "Enter", "ArrowUp")
    sheet.until(lambda: sheet.page.locator(".calcsheet-bubble").is_visible(), "the words beside a refused cell")
    sheet.until(lambda: "waits" in (sheet.block("modes").locator(".calcsheet-note").text_content() or ""), "words")
    assert violations(sheet.page, ".calcsheet-live") == []
    sheet.file.write_text(sheet.start.replace("Roof,3.45,402.0", "Roof,3.45,403"))
    sheet.keys("ArrowDown", "'400", "Enter")
    sheet.page.get_by_role("button", name="load the file").wait_for()
    assert violations(sheet.page, ".calcsheet-live") == []
    sheet.keys("F1")


def test_the_stored_outputs_break_no_rule_either(sheet, violations):
    twins = ".calcsheet-twin"
    sheet.page.add_style_tag(content=".jp-OutputArea-child:has(.calcsheet-twin) { display: block !important; }")
    assert sheet.page.locator(twins).count() == 4
    assert violations(sheet.page, twins) == []


@pytest.mark.parametrize("record", sorted(EXAMPLES.glob("*/issued/*/*.html")), ids=lambda path: path.stem)
def test_a_record_breaks_no_rule_of_accessibility(chromium, violations, record):
    page = chromium.new_page()
    page.goto(record.as_uri())
    assert [each for each in violations(page) if each[0] != "empty-table-header"] == []
    page.close()


def contrast(page, selector):
    """Contrast of text on its background (WCAG 2, relative luminance)."""
    colours = page.locator(selector).first.evaluate(
        """node => {
            const rgb = text => text.match(/[\\d.]+/g).map(Number);
            let behind = node;
            while (rgb(getComputedStyle(behind).backgroundColor)[3] === 0) behind = behind.parentElement;
            return [getComputedStyle(node).color, getComputedStyle(behind).backgroundColor].map(rgb);
        }"""
    )
    parts = [[c / 3294.6 if c <= 10 else ((c / 255 + 0.055) / 1.055) ** 2.4 for c in rgb[:3]] for rgb in colours]
    light = sorted(0.2126 * r + 0.7152 * g + 0.0722 * b for r, g, b in parts)
    return (light[1] + 0.05) / (light[0] + 0.05)


def test_the_dark_theme_is_legible(sheet):
    def theme(name):
        code = "name => window.jupyterapp.commands.execute('apputils:change-theme', {theme: name}).then(() => null)"
        sheet.page.evaluate(code, name)

    theme("JupyterLab Dark")
    sheet.until(lambda: sheet.page.locator("body[data-jp-theme-light=false]").count() == 1, "the dark theme")
    sheet.shot("dark")
    for part in (".calcsheet-typed thead th", ".calcsheet-input", ".calcsheet-live td", ".calcsheet-status"):
        assert contrast(sheet.page, part) >= 4.5, part
    theme("JupyterLab Light")


def test_type_twice_as_large_leaves_all_in_reach(sheet):
    wide = sheet.page.viewport_size
    sheet.page.set_viewport_size(
        {"width": wide["width"] // 2, "height": wide["height"] // 2}
    )  # as a zoom of 200 % does
    block = sheet.block("storeys")
    sheet.until(
        lambda: block.evaluate("node => node.scrollWidth <= node.clientWidth"), "a block no wider than its place"
    )
    sheet.cell("mass / level below, level 6").click()
    assert sheet.cell("mass / level below, level 6").evaluate(
        "input => { const [a, b] = [input, input.closest('.calcsheet-scroll')].map(n => n.getBoundingClientRect());"
        " return a.left >= b.left - 1 && a.right <= b.right + 1; }"
    )
    sheet.shot("zoom")
    sheet.page.set_viewport_size(wide)


def test_a_thousand_rows_can_be_used(sheet):
    sheet.kernel("job.job.attach('modes', __import__('calcsheet.steps.modes', fromlist='x').ModesOptions(keep=6))")
    rows = [f"L{999 - i}\t3.2\t{300 + i % 50}.5\t{900000 + i}\t{800000 + i}" for i in range(999)]
    sheet.cell("level, row 1").click()
    sheet.paste("\n".join([*rows, "Ground\t3.2\t300\t\t"]) + "\n")
    body = sheet.page.locator(".calcsheet-typed tbody tr")
    sheet.until(lambda: body.count() == 1000, "a thousand rows", 60)
    sheet.until(lambda: sheet.status().startswith("saved"), "all saved", 60)
    sheet.cell("mass, level L500").click()
    sheet.keys("'444.5", "Enter")
    assert sheet.focused() == "mass, level L499", "typing does not wait"
    sheet.until(lambda: "L500,3.2,444.5," in sheet.file.read_text(), "the value in the file", 60)
    sheet.keys("Control+End", "Control+Home")
    assert sheet.focused() == "level, row 1"
    sheet.shot("thousand")
    sheet.keys("Control+z", "Control+z")
    sheet.until(lambda: sheet.file.read_text() == sheet.start, "the table as at the start", 60)
