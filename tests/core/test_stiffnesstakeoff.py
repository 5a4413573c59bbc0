"""Storey stiffnesses from members, by hand."""

from __future__ import annotations

import math

import numpy as np
import pytest

from calcsheet.core.errors import ModelError
from calcsheet.core.sections import Material, Section
from calcsheet.core.stiffnesstakeoff import Member, Takeoff, take_off

MATERIALS = (Material("C", "concrete", 30e6, 12.5e6), Material("S", "steel", 200e6, 80e6))
SECTIONS = (
    Section("C40", "C", "rectangle", 0.4, 0.4),  # EI = 64 000 kN·m²
    Section("B", "C", "rectangle", 0.6, 0.2),  # EI = 30e6 · 0.2 · 0.6³/12 = 108 000 kN·m²
    Section("W", "C", "rectangle", 3.0, 0.2),  # I = 0.45 m⁴, A_s = 0.5 m²
    Section("D", "S", "own", area=2e-3),  # EA = 400 000 kN
    Section("U", "C", "rectangle", 0.6, 0.3),  # I = 5.4e-3 and 1.35e-3 m⁴
)


def member(kind, acts_as, section, **more):
    usual = {
        "name": f"{kind} {section}", "first": 0, "last": 0, "along": (1.0, 0.0), "count": 1, "axis": "major", "factor": 1.0,
        "shear": kind == "wall", "shear_factor": 1.0, "height": None, "run": None, "beam": "", "beam_below": "", "spans": (),
        "beam_factor": 1.0, "ground": "",
    }  # fmt: skip
    return Member(kind=kind, acts_as=acts_as, section=section, **(usual | more))


def built(*members, heights=(4.0, 3.0), direction=("x",)):
    levels = tuple(str(i + 1) for i in range(len(heights)))
    return take_off(Takeoff(levels, np.array(heights), direction, MATERIALS, SECTIONS, members))


def test_columns_and_their_count():
    # 12·64 000/4³ = 12 000 and 12·64 000/3³ = 28 444.4 kN/m each, five of them; pinned at one end a quarter
    found = built(member("column", "fixed-fixed", "C40", last=1, count=5))
    assert found.directions[0].storey == pytest.approx([60_000.0, 142_222.222], rel=1e-6)
    assert found.members[0].alone == pytest.approx([12_000.0, 28_444.444], rel=1e-6)
    pinned = built(member("column", "fixed-pinned", "C40", last=1, count=5))
    assert pinned.directions[0].storey == pytest.approx(found.directions[0].storey / 4.0)


def test_factor_height_and_axis():
    # half of EI about the minor axis, 0.5·30e6·1.35e-3 = 20 250 kN·m², over a clear height of 2.5 m: 12·20 250/15.625
    found = built(member("column", "fixed-fixed", "U", axis="minor", factor=0.5, height=2.5), heights=(4.0,))
    assert found.directions[0].storey == pytest.approx([15_552.0])


def test_columns_held_by_beams():
    # EI/h: 16 000 at h = 4 m, 21 333.3 at 3 m; beams of 6 m and 9 m: B = 108 000 (1/6 + 1/9) = 30 000 kN·m
    # foot: k̄ = 30/16 = 1.875, a = 2.375/3.875; above: k̄ = 60/(2·21.3333) = 1.40625, a = 1.40625/3.40625
    held = member("column", "beams", "C40", last=1, count=2, beam="B", beam_below="B", spans=(6.0, 9.0))
    found = built(held)
    row = found.members[0]
    assert row.ratio == pytest.approx([1.875, 1.40625])
    assert row.beams_above == pytest.approx([30_000.0, 30_000.0])
    assert row.beams_below == pytest.approx([0.0, 30_000.0])
    assert row.alone == pytest.approx([12_000 * 2.375 / 3.875, 28_444.444 * 1.40625 / 3.40625], rel=1e-6)
    # ρ: each column brings half of its two beams: 15 000/16 000 and 15 000/21 333.3
    assert found.directions[0].joint_rotation == pytest.approx([0.9375, 0.703125])
    pinned = built(member("column", "beams on pinned base", "C40", last=1, beam="B", beam_below="B", spans=(6.0, 9.0)))
    assert pinned.members[0].alone[0] == pytest.approx(12_000 * 0.5 * 1.875 / 4.75)
    assert pinned.members[0].alone[1] == pytest.approx(row.alone[1])


def test_a_row_that_starts_above_the_base_knows_none():
    held = member("column", "beams", "C40", first=1, last=1, beam="B", beam_below="U", spans=(6.0,))
    found = built(held, member("column", "fixed-fixed", "C40"))
    # 108 000/6 = 18 000 above; 30e6 · 5.4e-3/6 = 27 000 below; k̄ = 45/(2·21.3333)
    assert found.members[0].ratio == pytest.approx([0.0, 1.0546875])
    assert found.members[0].beams_below == pytest.approx([0.0, 27_000.0])


def test_walls_braces_and_shares():
    # wall 1/(64/(3·13.5e6) + 4/6.25e6) = 450 000 …: 1.580247e-6 + 0.64e-6 m/kN
    # pair of braces: 2·400 000·9/(9 + 16)^1.5 = 57 600 kN/m; in tension only half of it
    wall, pair = member("wall", "cantilever", "W"), member("brace", "pair", "D", run=3.0)
    found = built(wall, pair, heights=(4.0,))
    k = 1.0 / (64.0 / 40.5e6 + 4.0 / 6.25e6)
    assert found.directions[0].storey == pytest.approx([k + 57_600.0])
    assert found.members[1].length == pytest.approx([5.0])
    assert found.directions[0].kind == ("wall", "brace")
    assert found.directions[0].share[:, 0] == pytest.approx([k / (k + 57_600.0), 57_600.0 / (k + 57_600.0)])
    assert found.members[0].share[0, 0] == pytest.approx(found.directions[0].share[0, 0])
    # half of EI and 0.4 of GA_s: 64/(3·6.75e6) + 4/2.5e6
    cracked = built(member("wall", "cantilever", "W", factor=0.5, shear_factor=0.4), heights=(4.0,))
    assert cracked.directions[0].storey == pytest.approx([1.0 / (64.0 / 20.25e6 + 4.0 / 2.5e6)])
    for way in ("single", "pair in tension only"):
        assert built(member("brace", way, "D", run=3.0), heights=(4.0,)).directions[0].storey == pytest.approx(
            [28_800.0]
        )


def test_walls_are_as_slender_as_all_their_storeys():
    found = built(member("wall", "cantilever", "W"), member("wall", "fixed-fixed", "W", first=1, last=1))
    assert found.directions[0].wall_slenderness == pytest.approx(7.0 / 3.0)


def test_skew_members_go_into_both_directions_and_couple_them():
    c, s = math.cos(math.radians(30)), math.sin(math.radians(30))
    found = built(member("brace", "single", "D", run=3.0, along=(c, s)), heights=(4.0,), direction=("x", "y"))
    x, y = found.directions
    assert (x.storey[0], y.storey[0]) == pytest.approx((28_800 * 0.75, 28_800 * 0.25))
    assert found.coupling == pytest.approx([1.0])  # one line alone: k_xy² = k_x k_y
    across = member("brace", "single", "D", run=3.0, along=(-s, c))
    both = built(member("brace", "single", "D", run=3.0, along=(c, s)), across, heights=(4.0,), direction=("x", "y"))
    assert both.coupling == pytest.approx([0.0], abs=1e-12)
    assert both.directions[0].storey == pytest.approx([28_800.0])


def test_kinds_stand_where_they_act():
    column = member("column", "fixed-fixed", "C40", last=1, along=(0.0, 1.0))
    wall = member("wall", "cantilever", "W", last=1)
    found = built(column, wall, direction=("x", "y"))
    assert [d.kind for d in found.directions] == [("wall",), ("column",)]


def test_a_storey_without_members_is_refused():
    with pytest.raises(ModelError) as caught:
        built(member("column", "fixed-fixed", "C40"))
    assert str(caught.value) == (
        'stiffness x of the storey below level "2": no member acts; must have at least one that acts in x'
    )
