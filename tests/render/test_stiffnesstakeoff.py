"""Views of the stiffness take-off: numbers at their pointers, in the system's units, and bars."""

from __future__ import annotations

import re

import pytest

from calcsheet.render.registry import VIEWS
from calcsheet.steps.fromfiles import STIFFNESSES
from calcsheet.steps.graph import Job

KIP, INCH = 4.4482216152605, 0.0254  # kN and m, exact by definition
ONE = {
    "SI": {"stiffness": 1.0, "share": 0.01, "length": 1.0, "size": 0.001, "area": 1e-6, "second": 1e-6, "modulus": 1e6},
    "US": {
        "stiffness": KIP / INCH, "share": 0.01, "length": 12 * INCH, "size": INCH, "area": INCH**2, "second": INCH**4,
        "modulus": KIP / INCH**2,
    },
}  # fmt: skip
"""What one unit shown is in core units."""
FIELDS = {
    "stiffness": "storey alone lateral",
    "share": "share",
    "length": "height run spans",
    "size": "depth width thickness",
    "area": "area shear_major shear_minor",
    "second": "major minor",
    "modulus": "modulus shear_modulus",
    "one": "count factor shear_factor beam_factor joint_rotation",
}
QUANTITY = {field: quantity for quantity, fields in FIELDS.items() for field in fields.split()}


def html(job, name, **options):
    view = VIEWS[name]
    return view.render(job.payloads(), STIFFNESSES, view.chosen(options)).html


@pytest.mark.parametrize("us", [False, True])
@pytest.mark.parametrize("name", ["stiffness take-off", "members"])
def test_numbers_and_units(members_folder, document, us, name):
    job = Job(members_folder(us=us))
    payloads, one = job.payloads(), ONE["US" if us else "SI"]
    numbers = document(html(job, name)).numbers
    assert len(numbers) > 20
    for pointer, shown in numbers:
        found = payloads
        parts = pointer.removeprefix("/").split("/")
        for part in parts:
            found = found[int(part)] if isinstance(found, list) else found[part]
        quantity = QUANTITY[[part for part in parts if not part.isdigit()][-1]]
        text = re.sub(r"\s", "", shown)
        half = 0.5 * 10.0 ** -len(text.partition(".")[2])
        assert abs(found / one.get(quantity, 1.0) - float(text)) <= half * (1 + 1e-9), (pointer, shown)


def test_each_storey_has_its_shares_and_each_row_its_stiffness(members_folder, document):
    seen = document(html(Job(members_folder()), "stiffness take-off"))
    for heading in ("stiffness [kN/m]", "columns [%]", "walls [%]", "braces [%]", "infill struts [%]", "index ρ"):
        assert heading in seen.words
    shares = [at for at, _ in seen.numbers if "/directions/0/share/0/" in at]
    assert [int(at.rpartition("/")[2]) for at in shares] == [4, 3, 2, 1, 0]
    rows = [at for at, _ in seen.numbers if at.endswith("/alone/0") or at.endswith("/alone/3")]
    assert f"/{STIFFNESSES}/result/members/1/alone/3" in rows  # "Inner upper" begins in the storey below level 4


def test_rows_may_be_hidden(members_folder, document):
    hidden = document(html(Job(members_folder()), "stiffness take-off", rows="hidden"))
    assert not any("/members/" in at for at, _ in hidden.numbers)


def test_the_inputs_are_complete(members_folder, document):
    job = Job(members_folder())
    seen = document(html(job, "members")).words
    inputs = job.payload(STIFFNESSES)["inputs"]
    for group in ("members", "sections", "materials"):
        assert all(item["name"] in seen for item in inputs[group])
    for words in ("4 to Roof", "35° from x", "beams on pinned base with shear", "cracked", "B70"):
        assert words in seen


@pytest.mark.parametrize("us", [False, True])
def test_bars_by_kind(members_folder, us):
    job = Job(members_folder(us=us))
    view = VIEWS["stiffness take-off"]
    (drawing,) = view.render(job.payloads(), STIFFNESSES, view.chosen({})).draw()
    again = view.render(job.payloads(), STIFFNESSES, view.chosen({})).draw()[0]
    assert drawing.svg == again.svg
    for word in ("column", "brace", "wall", f"storey stiffness x [{'kip/in' if us else 'kN/m'}]", "Roof"):
        assert f">{word}<" in drawing.svg
    assert "Lowest storey: in x columns" in drawing.alt


def test_names_are_escaped(members_folder, document):
    job = Job(members_folder([("Posts,all", "<b>Posts</b>,all")]))
    for name in ("stiffness take-off", "members"):
        assert "<b>Posts" not in html(job, name)
        assert "<b>Posts</b>" in document(html(job, name)).words
