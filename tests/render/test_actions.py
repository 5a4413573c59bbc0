"""The views of the storey actions and of the three base shears."""

from __future__ import annotations

import re

import pytest

SECOND = """\
[[second_model]]
quantity = "period"
direction = "x"
value = 0.4172
origin = "Frame <model> 3"
[[second_model]]
quantity = "weight"
value = 2800.0
origin = "Take-down"
[[second_model]]
quantity = "base shear"
direction = "y"
value = 500.0
origin = "By hand"
[answers]"""


@pytest.mark.parametrize("name", ["actions", "comparison"])
@pytest.mark.parametrize("basis", ["EN", "7-16", "7-22", "IS", "points"])
def test_numbers_and_units(demand_job, rendered, document, numbers_hold, us, basis, name):
    for how, system in (({}, "SI"), (us, "US")):
        job = demand_job(basis, **how)
        numbers_hold(document(rendered(job, name)).numbers, job.payloads(), system)


def test_headings_carry_units(demand_job, rendered, document, us):
    for how, force, moment in (({}, "kN", "kN·m"), (us, "kip", "kip·ft")):
        seen = document(rendered(demand_job("7-16", **how), "actions")).words
        for heading in ("design shear", "equivalent lateral force", "static force"):
            assert f"{heading} [{force}]" in seen
        assert f"design moment at foot [{moment}]" in seen


@pytest.mark.parametrize("basis", ["EN", "7-16", "7-22", "IS", "points"])
def test_action_tables_name_their_force_level(demand_job, rendered, document, basis):
    job = demand_job(basis)
    seen = document(rendered(job, "actions")).words
    level = job.payload("basis")["result"]["level"].replace("_", "")
    assert f"Force level: {level}; the edition's scale is in, and second-order amplification" in seen
    assert "combined modal forces, added up, would give more than the shear" in seen
    assert ("static force" in seen) == (basis != "points")


@pytest.mark.parametrize("basis", ["EN", "7-16", "7-22", "IS", "points"])
def test_three_base_shears_under_three_labels(demand_job, rendered, basis):
    html = rendered(demand_job(basis), "comparison")
    for _, direction in zip("xy", html.split("<h4>")[1:], strict=True):
        labels = re.findall(r'<th scope="row">([^<]*)</th>', direction)
        assert len(labels) == len(set(labels))
        wanted = {"modal base shear", "design base shear"} | ({"static base shear"} if basis != "points" else set())
        assert {label for label in labels if label.endswith("base shear")} == wanted
        assert direction.count("% of the weight") == len(wanted)


def test_a_second_model_stands_beside_this_one(demand_job, rendered, document, numbers_hold):
    job = demand_job("EN", card=[("[answers]", SECOND)])
    seen = document(rendered(job, "comparison"))
    assert "Frame <model> 3" in seen.words
    text = re.sub(r"\s", " ", seen.words)
    assert "5.0 %" in text  # 0.4172 s against 0.3974 s
    assert "\u22124.8 %" in text  # 2800 kN against 2942 kN
    shown = dict(seen.numbers)
    assert re.sub(r"\s", "", shown["/basis/inputs/second_model/1/value"]) == "2800"
    assert shown["/basis/inputs/second_model/0/value"] == "0.4172"
    assert shown["/basis/inputs/second_model/2/value"] == "500.0"
    assert "Second model" not in document(rendered(demand_job("EN", name="alone"), "comparison")).words


def test_figures_are_the_same_every_time(demand_job, drawn):
    job = demand_job("7-16")
    first, second = drawn(job, "actions"), drawn(job, "actions")
    assert [d.svg for d in first] == [d.svg for d in second]
    assert len(first) == 2
    for drawing, direction in zip(first, "xy", strict=True):
        assert f"storey shear in {direction} [kN]" in drawing.svg
        assert f"overturning moment in {direction} [kN·m]" in drawing.svg
        assert "static" in drawing.svg
    assert "static" not in drawn(demand_job("points", name="points"), "actions")[0].svg
