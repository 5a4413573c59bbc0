"""Cantilevers: the lumped stick against the flexural beam and the shear beam, and how fast it tends to them.

Sources: closed forms cos βL cosh βL = -1 (β₁L = 1.8751) with their effective masses, and ω_j = (2j - 1)πV_s/2H; lumped
shear beam ω_j = 2n sin((2j - 1)π/4n)V_s/H; lumped flexural cantilever by its flexibility in 30 digits; R. D. Blevins,
Formulas for Natural Frequency and Mode Shape (printed values from memory).
"""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest

from calcsheet.core.model import Model
from calcsheet.core.modes import modes_of
from calcsheet.core.participation import participation
from calcsheet.core.stick import Stick

SECOND_ORDER = 4.0
"""Masses lumped by the trapezoidal rule, half of one at the tip: halving the storeys quarters the error."""


def lumped(n: int, *, bending: float, shear: float | None, mass: float, length: float) -> Model:
    masses = np.full(n, mass * length / n)
    masses[-1] /= 2.0
    h = np.full(n, length / n)
    stick = Stick(np.full(n, bending), None if shear is None else np.full(n, shear), h)
    names = tuple(str(i + 1) for i in range(n))
    return Model(names, np.cumsum(h), masses, tuple(range(n)), ("x",), np.ones((1, n)), stick)


def flexural(n: int) -> Model:
    return lumped(n, bending=1.0, shear=None, mass=1.0, length=1.0)


def shearing(n: int, case: dict[str, float]) -> Model:
    # bending so stiff that it adds 4e-11 to the first period
    shear = case["Vs_m_per_s"] ** 2
    return lumped(n, bending=1e17, shear=shear, mass=1.0, length=case["H_m"])


@pytest.mark.parametrize("n", [5, 10, 20])
def test_lumped_flexural_cantilever(case, n):
    case("03-cantilever-lumped").meets(f"c_n{n}", modes_of(flexural(n), 3).omega)


def test_the_order_of_convergence_to_the_flexural_beam(case):
    published = case("03-euler-bernoulli-cantilever")
    exact = np.array(published.expected["omega_coefficient"]["value"][:2])
    error = [np.abs(modes_of(flexural(n), 2).omega / exact - 1.0) for n in (40, 80, 160)]
    for coarse, fine in pairwise(error):
        np.testing.assert_allclose(coarse / fine, SECOND_ORDER, rtol=0.02)
    ratio = (exact[0] - modes_of(flexural(5), 1).omega[0]) / (exact[0] - modes_of(flexural(10), 1).omega[0])
    case("03-cantilever-lumped").meets("error_ratio_mode1_n5_n10", ratio)


def test_extrapolated_to_no_storey_height_it_is_the_flexural_beam(case):
    published = case("03-euler-bernoulli-cantilever")
    coarse, fine = (modes_of(flexural(n), 3) for n in (80, 160))
    omega = fine.omega + (fine.omega - coarse.omega) / (SECOND_ORDER - 1.0)
    np.testing.assert_allclose(omega, published.expected["omega_coefficient"]["value"][:3], rtol=1e-5)
    np.testing.assert_allclose(np.sqrt(omega[0]), 1.875104068712, rtol=1e-8)
    shares = [participation(flexural(n), found, "x").effective_mass for n, found in ((80, coarse), (160, fine))]
    share = shares[1] + (shares[1] - shares[0]) / (SECOND_ORDER - 1.0)
    np.testing.assert_allclose(share, published.expected["mass_fraction"]["value"][:3], rtol=2e-5)


def test_lumped_shear_beam(case):
    published = case("03-shear-beam")
    model = shearing(published.inputs["n"], published.inputs)
    published.meets("lumped_T_s_first3", modes_of(model, 3).period)


def test_the_order_of_convergence_to_the_shear_beam(case):
    published = case("03-shear-beam")
    exact = np.array(published.expected["T_s"]["value"][:2])
    error = [np.abs(modes_of(shearing(n, published.inputs), 2).period / exact - 1.0) for n in (20, 40, 80)]
    for coarse, fine in pairwise(error):
        np.testing.assert_allclose(coarse / fine, SECOND_ORDER, rtol=0.02)


def test_effective_masses_of_the_shear_beam(case):
    published = case("03-shear-beam")
    shares = []
    for n in (40, 80):
        model = shearing(n, published.inputs)
        shares.append(participation(model, modes_of(model, 3), "x").effective_mass / published.inputs["H_m"])
    share = shares[1] + (shares[1] - shares[0]) / (SECOND_ORDER - 1.0)
    np.testing.assert_allclose(share, published.expected["mass_fraction"]["value"][:3], rtol=2e-5)
