"""Rigid floors beside one bare eigenvalue solution of scipy."""

from __future__ import annotations

import tracemalloc

import numpy as np
from scipy import linalg

from calcsheet.core.basis import Basis
from calcsheet.core.bounds import bounds
from calcsheet.core.chain import Chain
from calcsheet.core.codes.asce7_16 import ASCE716
from calcsheet.core.evidence import evidence_of_modes, evidence_of_participation
from calcsheet.core.model import Model, spatial_model
from calcsheet.core.modes import modes_of
from calcsheet.core.participation import participation
from calcsheet.core.rigidfloors import LineOfResistance, SparseFloors, floors_of
from calcsheet.core.storeys import Plan, PlanLine, StiffnessSet, Storeys
from calcsheet.steps.actions import ActionsOptions
from calcsheet.steps.demand import DemandOptions
from calcsheet.steps.drift import DriftOptions
from calcsheet.steps.modes import ModesOptions
from calcsheet.steps.participation import ParticipationOptions
from calcsheet.steps.peaks import PeaksOptions
from calcsheet.steps.registry import STEPS
from calcsheet.steps.step import Done

UP = np.pi / 2.0
PLACES = ((0.0, 0.0, 0.0), (0.0, 16.0, 0.0), (0.0, 8.0, 0.05), (0.0, 0.0, UP), (30.0, 0.0, UP), (21.0, 0.0, UP))


def building(n: int) -> Storeys:
    """n storeys on six lines, eccentric, with gravity loads."""
    rng = np.random.default_rng(n)
    height = np.full(n, 3.4)
    laterals = {str(i): Chain(np.linspace(9e5, 3e5, n) * rng.uniform(0.9, 1.1, n)) for i in range(len(PLACES))}
    plan = Plan(
        centre=np.tile([14.0, 7.5], (n, 1)) + rng.normal(scale=0.1, size=(n, 2)),
        gyration=np.full(n, 9.5),
        lines=tuple(PlanLine(str(i), *place) for i, place in enumerate(PLACES)),
    )
    return Storeys(
        base="base",
        base_elevation=0.0,
        level=tuple(str(i + 1) for i in range(n)),
        elevation=np.cumsum(height),
        storey_height=height,
        mass=rng.uniform(380.0, 420.0, n),
        below=(),
        stiffness=(StiffnessSet("gross", "as drawn", laterals),),
        forces="gross",
        drifts="gross",
        gravity=np.full(n, 4000.0 * 60.0 / n),
        second_order=True,
        plan=plan,
    )


def model(storeys: Storeys) -> Model:
    plan, given = storeys.plan, storeys.stiffness[0].lateral
    lines = [LineOfResistance(line.name, line.x, line.y, line.angle, given[line.name]) for line in plan.lines]
    floors = floors_of(storeys.level, storeys.storey_height, plan.centre, plan.gyration, lines, storeys.gravity)
    return spatial_model(floors, storeys.mass)


def with_all_evidence(storeys: Storeys, keep: int | None = None) -> Model:
    made = model(storeys)
    modes = modes_of(made, keep)
    found = list(evidence_of_modes(made, modes, bounds(made)))
    for direction in made.direction:
        found += evidence_of_participation(participation(made, modes, direction), modes.omega.size, made.size)
    assert all(e.within for e in found)
    return made


def scaled(made: Model) -> np.ndarray:
    root = np.sqrt(made.mass)
    k = made.lateral.force(np.eye(made.size)) / root[:, None] / root
    return 0.5 * (k + k.T)


BASIS = Basis(
    edition=ASCE716(
        s_ds=0.9,
        s_d1=0.5,
        s_1=0.4,
        t_l=8.0,
        site_class="C",
        risk_category="II",
        r_x=6.0,
        r_y=6.0,
        c_d_x=5.0,
        c_d_y=5.0,
        system_x="other",
        system_y="other",
    ),
    combination="CQC",
    residual="last ordinate",
    mass_basis=(),
    second_model=(),
)
OPTIONS = {
    "modes": ModesOptions(),
    "participation": ParticipationOptions(),
    "basis": BASIS,
    "demand": DemandOptions(),
    "peaks": PeaksOptions(),
    "drift": DriftOptions(),
    "actions": ActionsOptions(),
}


def steps(storeys: Storeys, *kinds: str) -> None:
    """The steps one after another, each on the results of those before."""
    done = {"storeys": Done(storeys, None)}
    for kind in kinds:
        step = STEPS[kind]
        done[kind] = Done(OPTIONS[kind], step.run(OPTIONS[kind], *(done[need] for need in step.needs)).result)


def test_sixty_floors_with_all_evidence(compare, report):
    storeys = building(60)
    k = scaled(model(storeys))
    bare, whole = compare(9, lambda: linalg.eigh(k), lambda: with_all_evidence(storeys))
    report("60 rigid floors with all evidence / one bare eigh of 180 × 180", whole / bare, "at most 20")
    assert whole <= 20.0 * bare


def test_sixty_floors_through_all_steps(compare, report):
    storeys = building(60)
    k = scaled(model(storeys))
    bare, first, whole = compare(
        5, lambda: linalg.eigh(k), lambda: steps(storeys, "modes"), lambda: steps(storeys, *OPTIONS)
    )
    report("60 rigid floors: the modes step / one bare eigh", first / bare, "at most 20")
    report("60 rigid floors: all steps to storey actions / the modes step", whole / first, "at most 3")
    assert first <= 20.0 * bare
    assert whole <= 3.0 * first


def test_three_hundred_floors_without_dense_stiffness(compare, report):
    storeys = building(300)
    made = model(storeys)
    assert isinstance(made.lateral, SparseFloors)
    entries = made.lateral.stiffness.nnz
    assert entries <= 9 * made.size
    k = scaled(made)
    dense, few = compare(3, lambda: linalg.eigh(k), lambda: modes_of(model(storeys), 20))
    report("300 rigid floors: one dense eigh of 900 × 900 / 20 modes", dense / few, "at least 2")
    tracemalloc.start()
    modes_of(model(storeys), 20)
    peak = tracemalloc.get_traced_memory()[1] / (8.0 * made.size**2)
    tracemalloc.stop()
    report("300 rigid floors, 20 modes: memory at its highest / that of a dense K", peak, "below 1")
    evidenced = compare(1, lambda: with_all_evidence(storeys, 20))[0]
    report("300 rigid floors: one dense eigh / 20 modes with all evidence", dense / evidenced, "")
    assert dense >= 2.0 * few
    assert peak < 1.0
