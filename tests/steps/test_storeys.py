"""The storeys step: sums, jumps that look like a slip of unit, matrices that are not symmetric."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from calcsheet.core.matrix import FlexibilityMatrix, StiffnessMatrix
from calcsheet.steps.storeys import run

LEVEL = ("1", "2", "3", "4", "Roof")


def keys(storeys) -> list[str]:
    return [c.key for c in run(storeys).cautions]


def test_sums(building):
    found = run(building()).result
    assert found.mass == pytest.approx(1792.0)
    assert found.mass_below == 520.0
    assert found.height == pytest.approx(17.9)


def test_a_usual_building_raises_nothing(building):
    assert keys(building()) == []


@pytest.mark.parametrize(("factor", "raised"), [(19.0, False), (20.5, True), (1 / 20.5, True), (1 / 19.0, False)])
def test_a_jump_of_mass(building, factor, raised):
    found = run(building(mass=[400.0, 400.0, 400.0, 400.0, 400.0 * factor])).cautions
    assert [c.key for c in found] == (["jump-mass-Roof"] if raised else [])
    for caution in found:
        assert [n.value for n in caution.numbers] == [400.0 * factor, 400.0]
        assert [n.at for n in caution.numbers] == ["inputs/mass/4", "inputs/mass/3"]


def test_a_jump_of_stiffness_in_one_direction(building):
    found = run(building(y=[4.7e5, 4.5e5, 4.1e2, 4.5e5, 4.4e5])).cautions
    assert [c.key for c in found] == ["jump-stiffness-y-(gross)-3", "jump-stiffness-y-(gross)-4"]
    assert "stiffness y (gross)".casefold() in found[0].text.casefold()
    assert found[0].numbers[0].at == "inputs/stiffness/0/lateral/y/storey/2"


def test_numbers_stand_where_they_say(building, steps_of):
    payload = steps_of(building(y=[4.7e5, 4.5e5, 4.1e2, 4.5e5, 4.4e5]))["storeys"]
    numbers = [n for c in payload["cautions"] for n in c["numbers"]]
    assert len(numbers) == 4
    for number in numbers:
        found = payload
        for step in number["at"].split("/"):
            found = found[int(step) if isinstance(found, list) else step]
        assert found == number["value"]


@pytest.mark.parametrize("kind", [StiffnessMatrix, FlexibilityMatrix])
@pytest.mark.parametrize(("slip", "raised"), [(0.0, False), (5e-4, True)])
def test_an_unsymmetric_matrix(building, kind, slip, raised):
    matrix = np.array([[4e5, -2e5], [-2e5 * (1.0 + slip), 2e5]])
    given = building(level="12", height=[3.5, 3.5], mass=[200.0, 150.0], lateral={"x": kind(matrix)})
    found = run(given).cautions
    assert [c.key for c in found] == (["unsymmetric-gross-x"] if raised else [])
    for caution in found:
        assert "2.5e-04" in caution.text
        assert kind.kind in caution.text


def test_braces_in_names_are_words(building):
    level = ("1", "{0}", "{", "4", "Roof")
    found = run(building(level=level, name="cut {1}", y=[4.7e5, 4.5e5, 4.1e2, 4.5e5, 4.4e5])).cautions
    assert len(found) == 2
    text = found[0].text.format("410", "450 000")
    assert 'level "{"' in text
    assert 'level "{0}"' in text
    assert "(cut {1})" in text
    matrix = np.array([[4e5, -2e5], [-2.001e5, 2e5]])
    given = building(
        level="12", height=[3.5, 3.5], mass=[200.0, 150.0], lateral={"x": StiffnessMatrix(matrix)}, name="{gross}"
    )
    assert "({gross})" in run(given).cautions[0].text.format()


@pytest.mark.parametrize(
    "level",
    [
        ("5", "4", "3", "2", "1"),
        ("Level 2", "Level 1", "Ground", "Terrace", "Plant"),
        ("Roof", "fourth", "third", "second", "first"),
        ("1", "roof level", "2", "3", "4"),
    ],
)
def test_a_table_that_seems_upside_down_asks_for_an_answer(building, level):
    (caution,) = run(building(level=level)).cautions
    assert (caution.key, caution.answer) == ("order-of-levels", True)
    assert "check that the table's first row is the top level" in caution.text


@pytest.mark.parametrize(
    "level",
    [
        ("1", "2", "3", "Roof", "Plant"),
        ("B2", "B1", "Ground", "First", "Roof"),
        ("-2", "-1", "Ground", "First", "Roof"),
        ("1", "2", "2 mezzanine", "10", "Top"),
        ("1", "Podium roof", "3", "4", "5"),
        ("Tower 7", "a", "b", "c", "d"),
    ],
)
def test_an_order_that_is_usual_raises_nothing(building, level):
    assert keys(building(level=level)) == []


def test_names_of_a_table_upside_down_are_words(building):
    (caution,) = run(building(level=("{5}", "{4} 4", "x", "y", "{3} 1"))).cautions
    assert 'level "{3} 1" stands above level "{4} 4"' in caution.text.format()


@pytest.mark.parametrize(("height", "raised"), [(1.9, True), (2.0, False), (12.0, False), (12.1, True)])
def test_a_storey_height_out_of_the_usual_asks_for_an_answer(building, height, raised):
    found = run(building(height=[4.6, 3.4, height, 3.4, 3.1])).cautions
    assert [(c.key, c.answer) for c in found] == ([("storey-heights", True)] if raised else [])


def test_strange_storey_heights_are_named_in_one_caution(building):
    (caution,) = run(building(height=[46.0, 3.4, 3.4, 3.4, 0.31])).cautions
    assert caution.text.format("46.00 m", "0.310 m") == (
        'Storey height outside 2 to 12 m: 46.00 m below level "1", 0.310 m below level "Roof"; check value and unit.'
    )
    assert [n.at for n in caution.numbers] == ["inputs/storey_height/0", "inputs/storey_height/4"]
    assert [n.value for n in caution.numbers] == [46.0, 0.31]


# masses of 410, 385, 385, 372, 240 t weigh 4020.7, 3775.6, 3775.6, 3648.1, 2353.6 kN
@pytest.mark.parametrize(
    ("area", "named", "answer"),
    [
        ([400.0, 400.0, 400.0, 400.0, 400.0], [], False),  # 10.1 to 5.9 kN/m²
        ([400.0, 400.0, 400.0, 400.0, 800.0], ["Roof"], False),  # 2.94 on the roof
        ([200.0, 400.0, 400.0, 400.0, 400.0], ["1"], False),  # 20.1 on level 1
        ([1400.0, 1400.0, 1400.0, 1400.0, 1400.0], ["1", "2", "3", "4"], False),  # 2.9 to 1.7: low, not far off
        ([4000.0, 4000.0, 4000.0, 400.0, 400.0], ["1", "2", "3"], True),  # three of five at about 1
    ],
)
def test_weight_over_area(building, area, named, answer):
    found = run(replace(building(), area=np.array(area))).cautions
    assert [c.key for c in found] == (["weight-per-area"] if named else [])
    for caution in found:
        assert caution.answer is answer
        where = [LEVEL.index(name) for name in named]
        assert [n.at for n in caution.numbers] == [f"result/weight_per_area/{i}" for i in where]
        weights = [4020.7, 3775.6, 3775.6, 3648.1, 2353.6]
        assert [n.value for n in caution.numbers] == pytest.approx([weights[i] / area[i] for i in where], rel=1e-4)
        assert ("and 1 more;" in caution.text) is (area[0] == 1400.0)


def test_without_areas_nothing_is_said_of_them(building):
    assert keys(building()) == []
