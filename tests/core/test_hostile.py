"""Stiffness ratios of 1e8, very few and very many storeys: full relative accuracy, and evidence that holds."""

from __future__ import annotations

import mpmath
import numpy as np
import pytest
from scipy import linalg

from calcsheet.core.bounds import bounds
from calcsheet.core.chain import Chain
from calcsheet.core.evidence import evidence_of_modes, evidence_of_participation
from calcsheet.core.matrix import FlexibilityMatrix, StiffnessMatrix
from calcsheet.core.modes import modes_of
from calcsheet.core.participation import participation

RATIO = 1e8


def chain(n: int, order: str) -> tuple[np.ndarray, np.ndarray]:
    """Masses [t] and storey stiffnesses [kN/m] that span a ratio of 1e8 in a given order."""
    rng = np.random.default_rng(n)
    mass = rng.uniform(100.0, 900.0, n)
    stiffness = np.geomspace(1.0, RATIO, n)
    match order:
        case "stiff above":
            pass
        case "stiff below":
            stiffness = stiffness[::-1]
        case "shuffled":
            stiffness = rng.permutation(stiffness)
        case "alternating":
            stiffness = np.where(np.arange(n) % 2, 1.0, RATIO) * rng.uniform(1.0, 2.0, n)
        case "one soft storey":
            stiffness = np.full(n, RATIO)
            stiffness[n // 2] = 1.0
    return mass, stiffness


def exact(mass: np.ndarray, stiffness: np.ndarray) -> np.ndarray:
    """Circular frequencies by 50-digit arithmetic, from the stiffness matrix."""
    n = mass.size
    with mpmath.workdps(50):
        m, k = [mpmath.mpf(float(v)) for v in mass], [mpmath.mpf(float(v)) for v in stiffness]
        matrix = mpmath.zeros(n)
        for i in range(n):
            matrix[i, i] = (k[i] + (k[i + 1] if i + 1 < n else 0)) / m[i]
            if i + 1 < n:
                matrix[i, i + 1] = matrix[i + 1, i] = -k[i + 1] / mpmath.sqrt(m[i] * m[i + 1])
        return np.sort([float(mpmath.sqrt(v)) for v in mpmath.eigsy(matrix, eigvals_only=True)])


def dense(mass: np.ndarray, stiffness: np.ndarray) -> np.ndarray:
    """Circular frequencies as an ordinary solver finds them from K and M."""
    above = np.append(stiffness[1:], 0.0)
    k = np.diag(stiffness + above) - np.diag(above[:-1], 1) - np.diag(above[:-1], -1)
    return np.sqrt(np.abs(linalg.eigh(k, np.diag(mass), eigvals_only=True)))


def all_evidence(model, modes):
    part = participation(model, modes, "x")
    found = evidence_of_modes(model, modes, bounds(model))
    return [*found, *evidence_of_participation(part, modes.omega.size, model.size)]


@pytest.mark.parametrize(
    ("n", "order", "others_lose"),
    [
        (12, "stiff above", True),
        (12, "alternating", True),
        (17, "shuffled", True),
        (20, "stiff below", False),  # graded from large to small, which ordinary solvers too can do
        (24, "one soft storey", True),
        (30, "shuffled", True),
    ],
)
def test_every_frequency_keeps_its_digits_where_an_ordinary_solver_loses_them(planar, n, order, others_lose):
    mass, stiffness = chain(n, order)
    modes, wanted = modes_of(planar(mass, stiffness)), exact(mass, stiffness)
    assert np.abs(modes.omega**2 / wanted**2 - 1.0).max() < 1e-12
    assert (np.abs(dense(mass, stiffness) / wanted - 1.0).max() > 1e-10) == others_lose
    assert [e.key for e in all_evidence(planar(mass, stiffness), modes) if not e.within] == []


@pytest.mark.parametrize("kind", [StiffnessMatrix, FlexibilityMatrix])
def test_a_matrix_that_has_lost_its_digits_is_found_out(planar, kind):
    """Entered as a matrix, such a building can't be solved to many digits; the evidence says so."""
    mass, stiffness = chain(12, "alternating")
    model, unit = planar(mass, stiffness), np.eye(12)
    lateral = kind(model.lateral.force(unit) if kind is StiffnessMatrix else model.lateral.displacement(unit))
    entered = planar(mass, lateral)
    modes = modes_of(entered)
    assert np.abs(modes.omega / modes_of(model).omega - 1.0).max() > 1e-8
    assert {"stiffness", "residual", "sturm"} <= {e.key for e in all_evidence(entered, modes) if not e.within}


def test_few_modes_of_many_storeys_keep_their_digits(planar):
    mass, stiffness = chain(130, "shuffled")
    model = planar(mass, stiffness)
    few, every = modes_of(model, 20), modes_of(model)
    assert few.omega == pytest.approx(every.omega[:20], rel=1e-12)
    assert np.abs(few.psi - every.psi[:, :20]).max() < 1e-9 * np.abs(every.psi).max()
    assert [e.key for e in all_evidence(model, few) if not e.within] == []


def test_one_storey(planar):
    model = planar([250.0], [1.6e5], [4.2])
    modes = modes_of(model)
    assert modes.omega[0] == pytest.approx(np.sqrt(1.6e5 / 250.0), rel=1e-15)
    assert modes.psi[0, 0] == pytest.approx(250.0**-0.5, rel=1e-15)
    part = participation(model, modes, "x", target=1.0)
    assert (part.needed, part.significant) == (1, (1,))
    assert part.effective_height[0] == pytest.approx(4.2)
    assert part.gamma_roof[0] == pytest.approx(1.0)
    assert (modes.close, modes.repeated, modes.local) == ((), (), ())
    assert [e.key for e in all_evidence(model, modes) if not e.within] == []


@pytest.mark.parametrize(("n", "keep"), [(200, None), (200, 12), (1000, 20)])
def test_many_equal_storeys_meet_the_closed_form(planar, n, keep):
    model = planar(np.full(n, 400.0), np.full(n, 9e5))
    modes = modes_of(model, keep)
    number = np.arange(1, modes.omega.size + 1)
    closed = 2.0 * np.sqrt(9e5 / 400.0) * np.sin((2 * number - 1) * np.pi / (2 * (2 * n + 1)))
    assert modes.omega == pytest.approx(closed, rel=1e-12)
    assert [e.key for e in all_evidence(model, modes) if not e.within] == []


def test_a_light_penthouse_is_named(planar):
    mass = [400.0] * 6 + [4.0]
    stiffness = [6e5] * 6 + [2.5e3]
    modes = modes_of(planar(mass, stiffness))
    (local,) = modes.local
    assert local.level == "L7"
    assert modes.kinetic[6, local.mode - 1] == local.energy > 0.5
    assert local.mass == pytest.approx(4.0 / np.mean(mass))


def test_no_local_mode_in_a_regular_building_or_a_heavy_level(planar):
    assert modes_of(planar([400.0] * 7, [6e5] * 7)).local == ()
    assert modes_of(planar([400.0] * 6 + [110.0], [6e5] * 6 + [6e4])).local == ()


def test_nearly_equal_modes_are_close_and_not_repeated(planar):
    """Two like oscillators, one light storey's coupling apart: their frequencies differ by some 1e-3."""
    modes = modes_of(planar([400.0, 0.4], [4e5, 4e2]))
    apart = modes.omega[1] / modes.omega[0] - 1.0
    assert 1e-6 < apart < 0.1
    assert (modes.close, modes.repeated) == (((1, 2),), ())
    assert np.abs(modes.psi.T @ (np.array([[400.0], [0.4]]) * modes.psi) - np.eye(2)).max() < 1e-12


def test_a_chain_never_forms_its_matrix_yet_agrees_with_it():
    stiffness, u = np.array([3.0, 2.0, 5.0]), np.array([[1.0, 0.5], [3.0, -1.0], [2.0, 4.0]])
    k = np.array([[5.0, -2.0, 0.0], [-2.0, 7.0, -5.0], [0.0, -5.0, 5.0]])
    lateral = Chain(stiffness)
    np.testing.assert_allclose(lateral.force(u), k @ u, rtol=1e-14)
    np.testing.assert_allclose(lateral.displacement(lateral.force(u)), u, rtol=1e-14)
    np.testing.assert_allclose(lateral.energy(u), u.T @ k @ u, rtol=1e-14)
    np.testing.assert_allclose(lateral.storey_energy(u).sum(axis=0), np.diag(u.T @ k @ u), rtol=1e-14)
