"""ASCE/SEI 7-22: multi-period points, its site classes, and no irregularity of weight (from memory)."""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest

from calcsheet.core.codes.asce7_16 import ASCE716
from calcsheet.core.codes.asce7_22 import ASCE722
from calcsheet.core.errors import ModelError

POINTS = ((0.0, 0.42), (0.1, 0.80), (0.2, 1.00), (1.0, 0.55), (2.0, 0.30), (10.0, 0.02))


def edition(kind=ASCE722, **changed):
    given = {
        "s_ds": 0.9, "s_d1": 0.6, "s_1": 0.5, "t_l": 8.0, "site_class": "CD", "risk_category": "II", "r_x": 8.0, "r_y": 5.0,
        "c_d_x": 5.5, "c_d_y": 4.0, "system_x": "concrete moment frame", "system_y": "other", "height_unit": "m",
    }  # fmt: skip
    return kind(**(given | changed))


def test_multi_period_points():
    # midway: (0.42 + 0.80)/2, (1.00 + 0.55)/2
    found = edition(points=POINTS)
    assert found.spectrum(np.array([0.05, 0.6, 2.0])) == pytest.approx([0.61, 0.775, 0.30], rel=1e-12)
    assert found.ordinates("x", np.array([0.0])) == pytest.approx([0.42 / 8 * 9.80665], rel=1e-12)


def test_beyond_the_points_nothing_is_held():
    with pytest.raises(ModelError, match=r"^period: 11 s; must lie within the spectrum's points, 0 to 10 s$"):
        edition(points=POINTS).spectrum(np.array([11.0]))


def test_the_static_part_takes_s_ds_and_s_d1(building):
    """S_DS/R = 0.9/8, whatever the points say."""
    assert edition(points=POINTS).static(building()).coefficient == pytest.approx(0.9 / 8, rel=1e-12)


def test_without_points_the_two_period_spectrum_needs_a_word(building):
    plain, full = edition(), edition(points=POINTS)
    assert plain.spectrum(np.array([1.5])) == pytest.approx([0.4], rel=1e-12)
    assert plain.permitted(building()).verdict == "judgement"
    assert full.permitted(building()).verdict == "passes"


@pytest.mark.parametrize(("site", "verdict"), [("D", "passes"), ("DE", "passes"), ("E", "passes"), ("F", "judgement")])
def test_the_gate_is_for_site_class_f_alone(building, site, verdict):
    assert edition(points=POINTS, site_class=site).permitted(building()).verdict == verdict


def test_site_classes():
    fields = {f.name: f.metadata["key"]["choices"] for f in dataclasses.fields(ASCE722) if f.name == "site_class"}
    assert fields["site_class"] == ("A", "B", "BC", "C", "CD", "D", "DE", "E", "F")
    earlier = {f.name: f.metadata["key"]["choices"] for f in dataclasses.fields(ASCE716) if f.name == "site_class"}
    assert earlier["site_class"] == ("A", "B", "C", "D", "E", "F")


def test_weight_is_no_irregularity_any_more(building):
    heavy = building(weight=(2000.0, 4000.0, 1000.0))
    stiffness, drift = np.full(3, 1e5), np.array([0.06, 0.02, 0.01])
    names = {
        kind: [s.name for s in edition(kind, site_class="C").irregularities(heavy, stiffness, drift)]
        for kind in (ASCE716, ASCE722)
    }
    assert "weight" in names[ASCE716]
    assert "weight" not in names[ASCE722]
