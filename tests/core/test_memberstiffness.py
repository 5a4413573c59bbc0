"""Members against handbook formulas, frames solved as frames, and published cases."""

from __future__ import annotations

import math

import numpy as np
import pytest

from calcsheet.core.memberstiffness import (
    RESTRAINT,
    beam_ratio,
    beam_restraint,
    bending,
    diagonal,
    joint_rotation_index,
    with_shear,
)


def frame(columns, beams, height, span, *, bays=1, pinned=False):
    """Lateral stiffness matrix of a regular frame, per storey lowest first, by slope and deflection.

    Storeys of equal height, `columns` and `beams` their EI; joints turn, nothing stretches. The rotations are condensed out.
    """
    n, lines = len(columns), bays + 1
    size = n + (n + 1) * lines
    stiffness = np.zeros((size, size))

    def turn(level, line):
        return n + level * lines + line

    for s, flexural in enumerate(columns):
        for line in range(lines):
            # ends' moments of a column: 4EI/h of its own turn, 2EI/h of the other, 6EI/h² of the drift
            own, far, sway = 4 * flexural / height, 2 * flexural / height, 6 * flexural / height**2
            ends = [turn(s, line), turn(s + 1, line)]
            stiffness[np.ix_(ends, ends)] += np.array([[own, far], [far, own]])
            for floor, sign in ((s, 1.0), (s - 1, -1.0)):
                if floor >= 0:
                    stiffness[floor, ends] -= sign * sway
                    stiffness[ends, floor] -= sign * sway
                    for other, other_sign in ((s, 1.0), (s - 1, -1.0)):
                        if other >= 0:
                            stiffness[floor, other] += sign * other_sign * 12 * flexural / height**3
    for s, flexural in enumerate(beams):
        for bay in range(bays):
            ends = [turn(s + 1, bay), turn(s + 1, bay + 1)]
            stiffness[np.ix_(ends, ends)] += flexural / span * np.array([[4, 2], [2, 4]])
    foot = [turn(0, line) for line in range(lines)]
    kept = [i for i in range(size) if pinned or i not in foot]
    stiffness = stiffness[np.ix_(kept, kept)]
    u, r = stiffness[:n, :n], stiffness[n:, n:]
    return u - stiffness[:n, n:] @ np.linalg.solve(r, stiffness[n:, :n])


def test_the_frame_used_here_is_right():
    # Chopra, Dynamics of Structures, one-storey frame with I_b = I_c and L = 2h: k = 96EI/7h³ (from memory)
    assert frame([1.0], [1.0], 1.0, 2.0)[0, 0] == pytest.approx(96 / 7, rel=1e-12)
    # two storeys, I from below 2, 1 in columns and beams, L = 2h (from memory)
    found = frame([2.0, 1.0], [2.0, 1.0], 1.0, 2.0)
    assert found == pytest.approx(np.array([[54.88, -17.51], [-17.51, 11.61]]), abs=0.0056)


def test_columns_by_hand():
    # 0.4 m square, E = 30 GPa: EI = 30e6 · 0.4⁴/12 = 64 000 kN·m²; h = 4 m, h³ = 64 m³
    flexural = 30e6 * 0.4**4 / 12
    assert bending(flexural, 4.0, RESTRAINT["fixed-fixed"]) == pytest.approx(12_000.0, rel=1e-12)
    assert bending(flexural, 4.0, RESTRAINT["fixed-pinned"]) == pytest.approx(3_000.0, rel=1e-12)


def test_a_wall_bends_and_shears():
    # Timoshenko and Gere, Mechanics of Materials: end deflection of a cantilever PL³/(3EI) + PL/(GA_s) (from memory).
    # ℓ = 3 m, t = 0.2 m, E = 30 GPa, G = 12.5 GPa, h = 3 m, P = 1 MN, by hand: I = 0.45 m⁴, A_s = 0.5 m²,
    # 1000·27/(3·13.5e6) = 0.66667 mm and 1000·3/6.25e6 = 0.48 mm
    flexural, shear = 13.5e6, 6.25e6
    moved = 0.0006666666666667 + 0.00048
    assert with_shear(bending(flexural, 3.0, RESTRAINT["cantilever"]), shear, 3.0) == pytest.approx(
        1000.0 / moved, rel=1e-9
    )
    # a pier fixed at both ends: 1000·27/(12·13.5e6) = 0.166667 mm and the same shear
    moved = 0.0001666666666667 + 0.00048
    assert with_shear(bending(flexural, 3.0, RESTRAINT["fixed-fixed"]), shear, 3.0) == pytest.approx(
        1000.0 / moved, rel=1e-9
    )


def test_a_stocky_wall_only_shears_and_a_slender_one_only_bends():
    assert with_shear(1e12, 6.25e6, 3.0) == pytest.approx(6.25e6 / 3.0, rel=1e-4)
    assert with_shear(1e3, 6.25e9, 3.0) == pytest.approx(1e3, rel=1e-5)


def test_a_brace_at_45_degrees():
    # EA = 200 GPa · 2 000 mm² = 400 000 kN, L = 3√2 m: EA/L · cos²45° = EA/(2L)
    assert diagonal(400e3, 3.0, 3.0) == pytest.approx(400e3 / (2 * 3 * math.sqrt(2)), rel=1e-12)


def test_a_diagonal_by_virtual_work():
    # unit displacement shortens the diagonal by cos α; its force EA cos α/L has the horizontal part EA cos²α/L
    run, rise = 5.2, 3.4
    length = math.hypot(run, rise)
    assert diagonal(1e5, run, rise) == pytest.approx(1e5 / length * (run / length) ** 2, rel=1e-12)


def test_d_values_by_hand():
    # an inner column, EI/h = 20 000 kN·m, with beams EI/L of 15 000 and 25 000 above and 10 000 and 30 000 below:
    # k̄ = (15 + 25 + 10 + 30)/(2·20) = 2, a = 2/(2 + 2) = 0.5; h = 4 m: D = 0.5·12·20 000/16 = 7 500 kN/m
    ratio = beam_ratio(20e3, 40e3, 40e3)
    assert ratio == pytest.approx(2.0)
    assert bending(80e3, 4.0, 12.0 * beam_restraint(ratio)) == pytest.approx(7_500.0, rel=1e-12)
    # the same at the foot: k̄ = 40/20 = 2, a = 2.5/4 on a fixed base, 1/5 on a pinned one
    assert beam_ratio(20e3, 40e3) == pytest.approx(2.0)
    assert beam_restraint(2.0, "fixed") == pytest.approx(0.625)
    assert beam_restraint(2.0, "pinned") == pytest.approx(0.2)


def test_d_values_at_their_ends():
    for base, free, held in (("", 0.0, 1.0), ("fixed", 0.25, 1.0), ("pinned", 0.0, 0.25)):
        assert beam_restraint(0.0, base) == pytest.approx(free)  # a fixed foot alone: a quarter, that is 3EI/h³
        assert beam_restraint(1e9, base) == pytest.approx(held, rel=1e-8)


@pytest.mark.parametrize(("index", "low"), [(0.05, 0.82), (0.25, 0.70), (1.0, 0.77), (4.0, 0.90)])
def test_portal_frame_against_the_d_value(index, low):
    # k = (24EI_c/h³)(12ρ + 1)/(12ρ + 4), ρ = (EI_b/L)/(2EI_c/h): Chopra, Dynamics of Structures, section 1.3 (from memory)
    h, span, column = 3.5, 6.0, 48_000.0
    beam = index * 2 * column / h * span
    exact = 24 * column / h**3 * (12 * index + 1) / (12 * index + 4)
    assert frame([column], [beam], h, span)[0, 0] == pytest.approx(exact, rel=1e-10)
    assert joint_rotation_index(beam / span, 2 * column / h) == pytest.approx(index)
    a = beam_restraint(beam_ratio(column / h, beam / span), "fixed")
    approximate = 2 * bending(column, h, 12 * a)
    # both columns' k̄ is 2ρ: (1 + 4ρ)/(4 + 4ρ) in place of (1 + 12ρ)/(4 + 12ρ). The D-value counts on a column above that
    # turns the joint; here there is none, so it is low by 18 to 30 %, and by less the stiffer the beam
    assert approximate == pytest.approx(24 * column / h**3 * (4 * index + 1) / (4 * index + 4), rel=1e-10)
    assert approximate / exact == pytest.approx(low, abs=0.005)


def test_portal_frame_on_pinned_feet_is_exact():
    h, span, column, beam = 3.5, 6.0, 48_000.0, 90_000.0
    a = beam_restraint(beam_ratio(column / h, beam / span), "pinned")
    exact = frame([column], [beam], h, span, pinned=True)[0, 0]
    assert 2 * bending(column, h, 12 * a) == pytest.approx(exact, rel=1e-10)


@pytest.mark.parametrize(
    ("beam", "inside", "foot", "top"),
    [(20e3, 1.0, 1.38, 0.80), (50e3, 1.0, 1.05, 0.81), (100e3, 1.0, 0.94, 0.83), (400e3, 1.0, 0.93, 0.91)],
)
def test_d_values_of_a_tall_frame(beam, inside, foot, top):
    # one bay of 24 equal storeys, k̄ from 0.19 to 3.8. Inside, all joints turn alike and the D-value is right; at the foot it is
    # within 10 % from k̄ = 0.5 on, and much too stiff for flexible beams; at the top no column turns the joints from above
    h, span, column, n = 3.4, 6.0, 60e3, 24
    moved = np.linalg.solve(frame([column] * n, [beam] * n, h, span), np.eye(n)[-1])  # every storey has the shear 1
    exact = 1.0 / np.diff(moved, prepend=0.0)
    each, beams = column / h, beam / span
    general = 2 * bending(column, h, 12 * beam_restraint(beam_ratio(each, beams, beams)))
    first = 2 * bending(column, h, 12 * beam_restraint(beam_ratio(each, beams), "fixed"))
    assert general / exact[n // 2] == pytest.approx(inside, abs=1e-5)
    assert first / exact[0] == pytest.approx(foot, abs=0.006)
    assert general / exact[-1] == pytest.approx(top, abs=0.006)
