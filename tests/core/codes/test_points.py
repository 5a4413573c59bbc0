"""A spectrum as given points: interpolation, its ends, and what is refused."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.codes.points import GivenPoints, interpolated
from calcsheet.core.errors import ModelError

POINTS = ((0.1, 0.4), (0.4, 0.8), (1.6, 0.2))


def test_linear():
    # 0.4 + (0.8 - 0.4) × 0.15/0.3; 0.8 - 0.6 × 0.3/1.2
    found = interpolated(POINTS, np.array([0.1, 0.25, 0.7, 1.6]), "linear", False)
    assert found == pytest.approx([0.4, 0.6, 0.65, 0.2], rel=1e-14)


def test_log_log():
    # midway in the logarithm: T = √(0.4 × 1.6) = 0.8, S = √(0.8 × 0.2) = 0.4; √(0.1 × 0.4) = 0.2, √(0.4 × 0.8)
    found = interpolated(POINTS, np.array([0.2, 0.8]), "log-log", False)
    assert found == pytest.approx([0.32**0.5, 0.4], rel=1e-14)


def test_the_first_ordinate_holds_by_choice_alone():
    assert interpolated(POINTS, np.array([0.0, 0.05]), "linear", True).tolist() == [0.4, 0.4]
    assert interpolated(POINTS, np.array([0.0]), "log-log", True) == pytest.approx([0.4])
    with pytest.raises(ModelError) as caught:
        interpolated(POINTS, np.array([0.2, 0.05]), "linear", False)
    assert str(caught.value) == "period: 0.05 s; must lie within the spectrum's points, 0.1 to 1.6 s"


@pytest.mark.parametrize(
    ("points", "period", "between", "message"),
    [
        (POINTS, 1.61, "linear", "period: 1.61 s; must lie within the spectrum's points, 0.1 to 1.6 s"),
        (POINTS, np.nan, "linear", "period: nan s; must lie within the spectrum's points, 0.1 to 1.6 s"),
        ((), 0.5, "linear", "spectrum points: 0 given; must be two or more"),
        (((0.1, 0.4),), 0.1, "linear", "spectrum points: 1 given; must be two or more"),
        (
            ((0.1, 0.4), (0.4, 0.8), (0.3, 0.2)),
            0.2,
            "linear",
            "spectrum points: period 0.3 s in point 3; must rise from point to point, from 0 or above",
        ),
        (
            ((0.1, 0.4), (0.1, 0.8)),
            0.1,
            "linear",
            "spectrum points: period 0.1 s in point 2; must rise from point to point, from 0 or above",
        ),
        (
            ((-0.1, 0.4), (0.4, 0.8)),
            0.2,
            "linear",
            "spectrum points: period -0.1 s in point 1; must rise from point to point, from 0 or above",
        ),
        (
            ((0.1, 0.4), (0.4, -0.8)),
            0.2,
            "linear",
            "spectrum points: ordinate -0.8 in point 2; must be finite and at or above 0",
        ),
        (
            ((0.1, np.nan), (0.4, 0.8)),
            0.2,
            "linear",
            "spectrum points: ordinate nan in point 1; must be finite and at or above 0",
        ),
        (
            ((0.0, 0.4), (0.4, 0.8)),
            0.2,
            "log-log",
            "spectrum points: a period or an ordinate of 0; must be above 0 for log-log interpolation",
        ),
    ],
)
def test_what_is_refused(points, period, between, message):
    with pytest.raises(ModelError) as caught:
        interpolated(points, np.array([0.2, period]), between, hold_below=False)
    assert str(caught.value) == message


def test_given_points_scale_nothing_and_assess_nothing(building):
    edition = GivenPoints(points=POINTS, damping_ratio=0.03, drift_factor_x=4.0, drift_share=0.0125)
    facts = building()
    assert edition.ordinates("x", np.array([0.4])) == pytest.approx([0.8 * 9.80665])
    assert edition.static(facts) is None
    scaling = edition.scaling(facts, 100.0, None)
    assert (scaling.forces, scaling.drifts) == (1.0, 1.0)
    assert edition.damping().value == 0.03
    assert edition.drift("x").value == 4.0
    assert edition.drift("y").value == 1.0
    assert edition.drift_limit(facts)[0] == pytest.approx([0.05, 0.0375, 0.0375])
    assert edition.permitted(facts).verdict == "not assessed"
    assert edition.independent(np.array([1.0, 0.99])).verdict == "not assessed"
    assert edition.second_order(facts, facts.weight, facts.weight, facts.weight) is None
    assert edition.torsion("x")[0] is None
    assert edition.separation(0.1)[0] is None
    with pytest.raises(ModelError, match=r"^static forces: asked of given points; need a code edition$"):
        edition.distribution(facts, None)


@pytest.mark.parametrize("period", [0.02, 0.1, 0.25, 0.4, 0.7, 1.6])
@pytest.mark.parametrize("between", ["linear", "log-log"])
def test_the_ordinate_follows_from_the_points_beside_it(worked, period, between):
    edition = GivenPoints(POINTS, between=between, hold_below=True)
    relations = edition.ordinate_relation("x", period)
    assert [worked(r) for r in relations] == pytest.approx([r.result.value for r in relations], rel=1e-12)
    assert relations[-1].result.value == edition.ordinates("x", np.array([period]))[0]


def test_the_points_are_the_two_around_the_period():
    found = GivenPoints(POINTS).ordinate_relation("x", 0.7)[0]
    assert [v.value for v in found.values] == [0.8, 0.2, 0.7, 0.4, 1.6]
