"""The cantilever stick against beam theory, and its own two routes against each other."""

from __future__ import annotations

import mpmath
import numpy as np
import pytest

from calcsheet.core.bounds import bounds
from calcsheet.core.errors import ModelError
from calcsheet.core.evidence import evidence_of_modes
from calcsheet.core.modes import modes_of
from calcsheet.core.stick import Stick

HEIGHT = np.array([4.2, 3.1, 3.1, 3.4, 2.9])
BENDING = np.array([9.1e7, 8.4e7, 8.4e7, 5.2e7, 3.3e7])
SHEAR = np.array([4.0e6, 3.7e6, 3.6e6, 2.1e6, 1.7e6])
MASS = [310.0, 295.0, 290.0, 285.0, 210.0]


def uniform(n: int, shear: float | None, length: float = 30.0, bending: float = 2.0e8) -> Stick:
    h = np.full(n, length / n)
    return Stick(np.full(n, bending), None if shear is None else np.full(n, shear), h)


@pytest.mark.parametrize("shear", [None, 3.0e6])
def test_the_deflection_line_under_a_tip_load(shear):
    # Timoshenko cantilever: v(z) = P z²(3L - z)/(6EI) + P z/GA_s, exact at the levels however few (closed form)
    z = np.arange(1, 7) * 5.0
    load = np.zeros((6, 1))
    load[-1] = 250.0
    wanted = 250.0 * z**2 * (90.0 - z) / (6.0 * 2.0e8) + (0.0 if shear is None else 250.0 * z / shear)
    np.testing.assert_allclose(uniform(6, shear).displacement(load)[:, 0], wanted, rtol=1e-13)


def test_storeys_of_different_size_by_virtual_work():
    # F_ij = ∫ M_i M_j/EI + ∫ V_i V_j/GA_s, storey by storey, by numerical integration (mpmath)
    stick, foot = Stick(BENDING, SHEAR, HEIGHT), np.concatenate([[0.0], np.cumsum(HEIGHT)])
    found = stick.displacement(np.eye(5))
    for i in range(5):
        for j in range(i + 1):
            a, b = foot[i + 1], foot[j + 1]
            total = mpmath.mpf(0)
            for s in range(j + 1):
                total += mpmath.quad(lambda z, a=a, b=b: (a - z) * (b - z), [foot[s], foot[s + 1]]) / BENDING[s]
                total += HEIGHT[s] / SHEAR[s]
            assert found[i, j] == pytest.approx(float(total), rel=1e-12)
            assert found[j, i] == pytest.approx(float(total), rel=1e-12)


@pytest.mark.parametrize("shear", [None, SHEAR])
def test_elements_and_statics_are_two_routes_to_one_stick(shear):
    stick = Stick(BENDING, shear, HEIGHT)
    np.testing.assert_allclose(stick.force(stick.displacement(np.eye(5))), np.eye(5), atol=1e-9)


def test_the_element_is_the_textbook_one():
    # Przemieniecki, Theory of Matrix Structural Analysis, beam with shear deformation (from memory)
    h, ei, ga = 3.5, 8.0e7, 2.5e6
    phi = 12.0 * ei / (ga * h**2)
    two = Stick(np.array([1.0, ei]), np.array([1.0, ga]), np.array([1.0, h]))
    upper = two.element_root[[1, 3]][:, [0, 2, 1, 3]]
    wanted = np.array(
        [
            [12.0, 6.0 * h, -12.0, 6.0 * h],
            [6.0 * h, (4.0 + phi) * h**2, -6.0 * h, (2.0 - phi) * h**2],
            [-12.0, -6.0 * h, 12.0, -6.0 * h],
            [6.0 * h, (2.0 - phi) * h**2, -6.0 * h, (4.0 + phi) * h**2],
        ]
    )
    np.testing.assert_allclose(upper.T @ upper, ei / (h**3 * (1.0 + phi)) * wanted, rtol=1e-12)


@pytest.mark.parametrize("shear", [None, SHEAR])
@pytest.mark.parametrize("keep", [None, 2])
def test_evidence_holds(planar, shear, keep):
    model = planar(MASS, Stick(BENDING, shear, HEIGHT), np.cumsum(HEIGHT))
    found = evidence_of_modes(model, modes_of(model, keep), bounds(model))
    assert [e.key for e in found if not e.within] == []


def test_evidence_holds_for_a_tall_one(planar):
    model = planar([400.0] * 60, uniform(60, None, length=200.0))
    assert all(e.within for e in evidence_of_modes(model, modes_of(model), bounds(model)))


def test_frequencies_to_many_digits(planar):
    # eigenvalues of F M in 40 digits (mpmath), on a stick whose largest frequency is thousands of times its first
    n = 24
    model = planar([350.0] * n, uniform(n, None))
    with mpmath.workdps(40):
        step, ei = mpmath.mpf(30) / n, mpmath.mpf(2.0e8)

        def f(i: int, j: int) -> mpmath.mpf:
            a, b = sorted((step * (i + 1), step * (j + 1)))
            return a**2 * (3 * b - a) / (6 * ei)

        matrix = mpmath.matrix(n, n)
        for i in range(n):
            for j in range(n):
                matrix[i, j] = 350 * f(i, j)
        values = mpmath.eigsy(matrix, eigvals_only=True)
        wanted = sorted(float(1 / mpmath.sqrt(v)) for v in values)
    np.testing.assert_allclose(modes_of(model).omega, wanted, rtol=1e-11)


def test_the_storeys_energies_add_up(planar):
    model = planar(MASS, Stick(BENDING, SHEAR, HEIGHT))
    np.testing.assert_allclose(modes_of(model).strain.sum(axis=0), 1.0, rtol=1e-9)


def test_a_factor_multiplies_both_stiffnesses():
    stick = Stick(BENDING, SHEAR, HEIGHT)
    np.testing.assert_allclose(stick.times(0.5).force(np.eye(5)), 0.5 * stick.force(np.eye(5)), rtol=1e-12)
    assert Stick(BENDING, None, HEIGHT).times(2.0).shear is None


@pytest.mark.parametrize(
    ("bending", "shear", "height", "said"),
    [
        ([1.0, 0.0], None, [3.0, 3.0], 'bending stiffness [kN·m²], "2": 0; must be finite and above 0'),
        ([1.0, 1.0], [1.0, np.inf], [3.0, 3.0], 'shear stiffness [kN], "2": inf; must be finite and above 0'),
        ([1.0, 1.0], [1.0], [3.0, 3.0], "shear stiffness [kN]: 1 entries; must have 2, one a storey"),
        ([1.0, 1.0], None, [3.0, -1.0], 'height [m], "2": -1; must be finite and above 0'),
    ],
)
def test_what_cannot_be_is_named(bending, shear, height, said):
    with pytest.raises(ModelError) as error:
        Stick(np.array(bending), None if shear is None else np.array(shear), np.array(height))
    assert str(error.value) == said
