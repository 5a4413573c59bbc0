"""What editions share, by numbers worked by hand."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.codes.common import (
    amplified,
    by_height,
    closest,
    heavier,
    listed,
    softer,
    stability,
    up_to_static,
)
from calcsheet.core.errors import ModelError


def test_forces_by_height(building):
    # w h: 2000 × 4 + 2000 × 7 + 1000 × 10 = 32000
    assert by_height(building(), 640.0, 1.0) == pytest.approx([160.0, 280.0, 200.0], rel=1e-14)
    # w h²: 2000 × 16 + 2000 × 49 + 1000 × 100 = 230000
    assert by_height(building(), 460.0, 2.0) == pytest.approx([64.0, 196.0, 200.0], rel=1e-14)


def test_modal_forces_are_brought_up_and_never_down():
    assert up_to_static(600.0, 480.0) == 1.25
    assert up_to_static(480.0, 600.0) == 1.0
    with pytest.raises(ModelError, match=r"^modal base shear: 0 kN; must be above 0 to be scaled$"):
        up_to_static(600.0, 0.0)


def test_scaling_twice_is_scaling_once():
    once = 480.0 * up_to_static(600.0, 480.0)
    assert up_to_static(600.0, once) == 1.0


def test_stability():
    gravity, drift = np.array([3000.0, 1200.0]), np.array([0.024, 0.018])
    shear, height = np.array([480.0, 300.0]), np.array([4.0, 3.0])
    # 3000 × 0.024/(480 × 4) = 72/1920; 1200 × 0.018/(300 × 3) = 21.6/900
    assert stability(gravity, drift, shear, height) == pytest.approx([0.0375, 0.024], rel=1e-14)


@pytest.mark.parametrize(
    ("gravity", "shear", "message"),
    [
        (
            (3000.0, 80000.0),
            (480.0, 300.0),
            "stability coefficient of storey 2 from the base: 1.6; must be below 1: the storey cannot carry its gravity load",
        ),
        (
            (3000.0, 1200.0),
            (0.0, 300.0),
            "shear of storey 1 from the base: 0 kN; must be above 0 for θ = P Δ/(V h)",
        ),
    ],
)
def test_no_stability_is_refused(gravity, shear, message):
    drift, height = np.array([0.024, 0.018]), np.array([4.0, 3.0])
    with pytest.raises(ModelError) as caught:
        stability(np.array(gravity), drift, np.array(shear), height)
    assert str(caught.value) == message


def test_amplification_begins_above_its_threshold():
    # 1/(1 - 0.2) = 1.25, 1/(1 - 0.6) = 2.5
    assert amplified(np.array([0.05, 0.1, 0.2, 0.6]), 0.1).tolist() == pytest.approx([1.0, 1.0, 1.25, 2.5])


def test_closest_periods():
    assert closest(np.array([1.0, 0.8, 0.76, 0.2])) == pytest.approx(0.95)
    assert closest(np.array([1.0])) == 0.0


def test_soft_storeys():
    stiffness = np.array([69.0, 100.0, 100.0, 100.0])
    assert softer(stiffness, 0.7) == [0]
    assert softer(np.array([70.0, 100.0]), 0.7) == []  # just not below
    # 79 is above 0.7 × 100, below 0.8 × (100 + 100 + 100)/3
    assert softer(np.array([79.0, 100.0, 100.0, 100.0]), 0.7, 0.8) == [0]
    assert softer(np.array([79.0, 100.0, 100.0]), 0.7, 0.8) == []  # two storeys above
    assert softer(np.array([50.0]), 0.7) == []


def test_equal_storeys_are_not_soft_by_rounding():
    assert softer(np.array([1.0 - 1e-12, 1.0, 1.0 - 1e-11]), 1.0) == []


def test_heavy_levels():
    assert heavier(np.array([100.0, 151.0, 100.0, 100.0]), 1.5) == [1]
    assert heavier(np.array([100.0, 150.0, 100.0, 100.0]), 1.5) == []
    assert heavier(np.array([100.0, 100.0, 60.0]), 1.5) == []  # a light roof
    assert heavier(np.array([100.0, 100.0, 151.0]), 1.5) == [2]  # a heavy one
    assert heavier(np.array([160.0, 100.0, 100.0]), 1.5) == [0]
    assert heavier(np.array([100.0]), 1.5) == []


def test_levels_in_words():
    assert listed([], "storey") == "no storey"
    assert listed([0], "storey") == "storey 1 from the base"
    assert listed([0, 3], "level") == "levels 1, 4 from the base"
