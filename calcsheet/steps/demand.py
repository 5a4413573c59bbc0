"""Design demand in each direction: ordinates at the modes' periods, and the code's static base shear."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from calcsheet.core.arrays import Array, Frozen, agrees
from calcsheet.core.basis import Basis
from calcsheet.core.codes.edition import Answer, Edition, Facts, Relation, Static
from calcsheet.core.codes.en1998_2004 import EN1998
from calcsheet.core.model import models_of
from calcsheet.core.participation import Participation
from calcsheet.core.response import facts_of
from calcsheet.steps.relations import line_of, numbered
from calcsheet.steps.secondmodel import apart
from calcsheet.steps.step import Caution, Done, Line, Number, Outcome, Step

DRAWN = 160
"""Points along the spectrum's curve."""
BEYOND = 4.0
"""Period beyond which displacements of a design spectrum need a second look [s] (EN 1998-1:2004, 3.2.2.2(3))."""

ROTATING = Answer("floors rotate in the model; accidental eccentricities are a step of their own", "model", "judgement")
"""What is said of accidental torsion where floors rotate."""


@dataclass(frozen=True)
class DemandOptions:
    """Nothing is asked of this step: the basis says it all."""


@dataclass(frozen=True, eq=False)
class Demand(Frozen):
    """Demand in one direction.

    Parameters
    ----------
    direction : str
        "x" or "y".
    facts : Facts
        The building in this direction.
    ordinate : (m,) array
        Design ordinate at each mode's period [m/s²].
    curve_period, curve : (k,) array
        The design spectrum: periods [s] and ordinates [m/s²].
    permitted : Answer
        Whether this analysis is permitted.
    torsion : Answer
        What is said of accidental torsion.
    static : Static or None
        The static base shear; None where the edition has none.
    ordinate_relations, static_force_relations : tuple of Relation
        How the ordinate at the first period comes about, and the static force at the top level.
    first_effective_mass : float
        Effective mass of the direction's main mode [t].
    first_base_shear : float
        Base shear of that mode, effective mass times ordinate [kN].
    main : int
        That mode, from 0: the first of a planar model.
    """

    direction: str
    facts: Facts
    ordinate: Array = field(metadata=agrees(rtol=1e-8))
    curve_period: Array = field(metadata=agrees(rtol=1e-8))
    curve: Array = field(metadata=agrees(rtol=1e-8))
    permitted: Answer
    torsion: Answer
    static: Static | None
    ordinate_relations: tuple[Relation, ...]
    static_force_relations: tuple[Relation, ...]
    first_effective_mass: float = field(metadata=agrees(rtol=1e-8))
    first_base_shear: float = field(metadata=agrees(rtol=1e-7))
    main: int = 0


@dataclass(frozen=True, eq=False)
class DemandResult:
    """Demand in each direction.

    Parameters
    ----------
    directions : tuple of Demand
        x before y.
    """

    directions: tuple[Demand, ...]


def run(options: DemandOptions, storeys: Done, modes: Done, parts: Done, basis: Done) -> Outcome:
    given: Basis = basis.inputs
    found: list[Demand] = []
    lines: list[Line] = []
    cautions: list[Caution] = []
    participations = {p.direction: p for p in parts.result.directions}
    for model in models_of(storeys.inputs, modes.result.stiffness):
        for direction in model.direction:
            part = participations[direction]
            others = [p for p in parts.result.directions if p.direction != direction]
            facts = facts_of(
                model,
                float(part.period[part.main]),
                direction,
                share_of_three=float(part.cumulative[min(3, part.cumulative.size) - 1]),
                other_period=float(others[0].period[others[0].main]) if others else None,
            )
            demand = _of(given.edition, facts, part)
            at = f"result/directions/{len(found)}"
            found.append(demand)
            lines += _lines(demand, at)
            cautions += _cautions(demand, given.edition, at)
    periods = {
        d.direction: Number(d.facts.period, "period", f"result/directions/{i}/facts/period")
        for i, d in enumerate(found)
    }
    cautions += apart(given, "period", periods)
    return Outcome(DemandResult(tuple(found)), tuple(lines), tuple(cautions))


def _of(edition: Edition, facts: Facts, part: Participation) -> Demand:
    ordinate = edition.ordinates(facts.direction, part.period)
    shortest, longest = float(part.period[-1]), float(part.period[0])
    periods = np.unique(np.concatenate([np.linspace(shortest, max(1.15 * longest, 1.0), DRAWN), part.period]))
    periods = periods[periods <= edition.reach]
    static = edition.static(facts)
    return Demand(
        direction=facts.direction,
        facts=facts,
        ordinate=ordinate,
        curve_period=periods,
        curve=edition.ordinates(facts.direction, periods),
        permitted=edition.permitted(facts),
        torsion=edition.torsion(facts.direction)[1] if facts.plan is None else ROTATING,
        static=static,
        ordinate_relations=edition.ordinate_relation(facts.direction, facts.period),
        static_force_relations=() if static is None else edition.distribution_relation(facts, static),
        first_effective_mass=float(part.effective_mass[part.main]),
        first_base_shear=float(part.effective_mass[part.main] * ordinate[part.main]),
        main=part.main,
    )


def _lines(demand: Demand, at: str) -> list[Line]:
    groups = {
        "static/relations": () if demand.static is None else demand.static.relations,
        "static_force_relations": demand.static_force_relations,
        "ordinate_relations": demand.ordinate_relations,
    }
    lines = [
        line_of(relation, demand.direction, f"{at}/{place}/{i}")
        for place, relations in groups.items()
        for i, relation in enumerate(relations)
    ]
    mass = Number(demand.first_effective_mass, "mass", f"{at}/first_effective_mass")
    n = demand.main
    ordinate = Number(float(demand.ordinate[n]), "acceleration", f"{at}/ordinate/{n}")
    shear = Number(demand.first_base_shear, "force", f"{at}/first_base_shear")
    lines.append(
        Line(
            f"Base shear of mode {n + 1}, {demand.direction}",
            numbered("V₁ = M₁* S_a(T₁)", n),
            "{0} × {1}",
            (mass, ordinate),
            shear,
            "Chopra, Dynamics of Structures, section 13.2 (from memory)",
        )
    )
    return lines


def _cautions(demand: Demand, edition: Edition, at: str) -> list[Caution]:
    d = demand.direction
    cautions = [Caution("torsion", f"Torsion, {d}: {demand.torsion.text}", subject=d)]
    if demand.facts.period > BEYOND:
        cautions.append(
            Caution(
                "long-period",
                f"The first period in {d}, {{0}}, is beyond {BEYOND:g} s{_ends(edition)}: ordinates and displacements need a "
                "second look.",
                (Number(demand.facts.period, "period", f"{at}/facts/period"),),
                answer=isinstance(edition, EN1998),
                subject=d,
            )
        )
    if demand.permitted.verdict != "passes":
        cautions.append(
            Caution(
                "permitted",
                f"Modal analysis in {d}: {demand.permitted.text} ({demand.permitted.clause})",
                answer=True,
                subject=d,
            )
        )
    return cautions


def _ends(edition: Edition) -> str:
    return f", up to which {edition.name} gives its spectrum (3.2.2.2(3))" if isinstance(edition, EN1998) else ""


METHOD = r"""
Each mode moves with the design ordinate at its own period. The first mode's base shear is its effective mass times its
ordinate, $V_1 = M_1^{*} S_a(T_1)$. The code's static base shear stands beside the modal one for comparison, or for
scaling where the edition asks for it; its period, coefficient and the bound that governs are worked out line by line.
"""

DEMAND = Step(
    "demand",
    1,
    "Design demand",
    DemandOptions,
    DemandResult,
    ("storeys", "modes", "participation", "basis"),
    run,
    METHOD,
)
