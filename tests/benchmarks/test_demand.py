"""The chain of the seismic demand beside a script of modes and CQC, as it would be typed for one building."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import linalg

from calcsheet.core.basis import Basis
from calcsheet.core.chain import Chain
from calcsheet.core.codes.asce7_16 import ASCE716
from calcsheet.core.storeys import StiffnessSet, Storeys
from calcsheet.steps.actions import ActionsOptions
from calcsheet.steps.demand import DemandOptions
from calcsheet.steps.drift import DriftOptions
from calcsheet.steps.modes import ModesOptions
from calcsheet.steps.participation import ParticipationOptions
from calcsheet.steps.peaks import PeaksOptions
from calcsheet.steps.registry import STEPS
from calcsheet.steps.step import Done

N = 40
RNG = np.random.default_rng(7)
HEIGHT, MASS, GRAVITY = np.full(N, 3.4), RNG.uniform(300.0, 500.0, N), RNG.uniform(4e3, 6e3, N)
STIFFNESS = {d: RNG.uniform(3e5, 9e5, N) * np.linspace(1.6, 0.6, N) for d in "xy"}
EDITION = ASCE716(
    s_ds=0.8, s_d1=0.4, s_1=0.35, t_l=8.0, site_class="C", risk_category="II", r_x=8.0, r_y=8.0, c_d_x=5.5, c_d_y=5.5,
    system_x="steel moment frame", system_y="steel moment frame", height_unit="m",
)  # fmt: skip
INPUTS = {
    "modes": ModesOptions(),
    "participation": ParticipationOptions(),
    "demand": DemandOptions(),
    "peaks": PeaksOptions(),
    "drift": DriftOptions(),
    "actions": ActionsOptions(),
}


def script(mass, stiffness, height) -> dict[str, np.ndarray]:
    """Modes of a dense stiffness matrix, and storey shears, moments, displacements and drifts by CQC, in loops."""
    n = len(mass)
    k = np.zeros((n, n))
    for i in range(n):
        k[i, i] += stiffness[i]
        if i > 0:
            k[i - 1, i - 1] += stiffness[i]
            k[i - 1, i] -= stiffness[i]
            k[i, i - 1] -= stiffness[i]
    m = np.diag(mass)
    values, shapes = linalg.eigh(k, m)
    omega = np.sqrt(values)
    modal = []
    for j in range(n):
        phi = shapes[:, j]
        gamma = (phi @ m @ np.ones(n)) / (phi @ m @ phi)
        period = 2.0 * math.pi / omega[j]
        t_s = 0.4 / 0.8
        if period < 0.2 * t_s:
            sa = 0.8 * (0.4 + 0.6 * period / (0.2 * t_s))
        elif period <= t_s:
            sa = 0.8
        elif period <= 8.0:
            sa = 0.4 / period
        else:
            sa = 0.4 * 8.0 / period**2
        sa *= 9.80665 / 8.0
        force = gamma * mass * phi * sa
        displacement = gamma * phi * sa / omega[j] ** 2
        shear = np.array([force[i:].sum() for i in range(n)])
        moment = np.array([(shear[i:] * height[i:]).sum() for i in range(n)])
        drift = np.diff(np.concatenate([[0.0], displacement]))
        modal.append({"shear": shear, "moment": moment, "displacement": displacement, "drift": drift})
    total = {name: np.zeros(n) for name in modal[0]}
    xi = 0.05
    for i in range(n):
        for j in range(n):
            r = omega[j] / omega[i]
            rho = 8 * xi**2 * (1 + r) * r**1.5 / ((1 - r**2) ** 2 + 4 * xi**2 * r * (1 + r) ** 2)
            for name in total:
                total[name] += rho * modal[i][name] * modal[j][name]
    return {name: np.sqrt(value) for name, value in total.items()}


@pytest.fixture
def upstream() -> dict[str, Done]:
    """Storeys and basis, as the steps take them."""
    lateral = {d: Chain(k) for d, k in STIFFNESS.items()}
    building = Storeys(
        base="base", base_elevation=0.0, level=tuple(str(i + 1) for i in range(N)), elevation=np.cumsum(HEIGHT),
        storey_height=HEIGHT, mass=MASS, below=(), stiffness=(StiffnessSet("frames", "as drawn", lateral),),
        forces="frames", drifts="frames", gravity=GRAVITY,
    )  # fmt: skip
    return {"storeys": Done(building, None), "basis": Done(Basis(EDITION, "CQC", "last ordinate", (), ()), None)}


def run(upstream: dict[str, Done], kinds) -> dict[str, Done]:
    done = dict(upstream)
    for kind in kinds:
        found = STEPS[kind].run(INPUTS[kind], *(done[need] for need in STEPS[kind].needs))
        assert all(e.within for e in found.evidence)
        done[kind] = Done(INPUTS[kind], found.result)
    return done


def test_the_script_and_the_steps_agree(upstream):
    done = run(upstream, INPUTS)
    for item in done["peaks"].result.directions:
        expected = script(MASS, STIFFNESS[item.direction], HEIGHT)
        for name, values in expected.items():
            assert getattr(item.forces, name) == pytest.approx(values, rel=1e-8)


def test_forty_storeys_in_x_and_y_from_modes_to_screens(compare, report, upstream):
    plain, whole, modes = compare(
        15,
        lambda: [script(MASS, k, HEIGHT) for k in STIFFNESS.values()],
        lambda: run(upstream, INPUTS),
        lambda: run(upstream, ["modes"]),
    )
    report("40 storeys, x and y: script of modes and CQC / whole chain of steps", plain / whole, "at least 2")
    report("  the same [ms]", 1e3 * whole, "")
    report("whole chain of steps / its own modes step", whole / modes, "at most 3")
    assert plain >= 2.0 * whole
    assert whole <= 3.0 * modes
