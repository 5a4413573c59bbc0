"""Edges of rigid floors under the design demand, accidental eccentricities included."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from functools import partial

import numpy as np

from calcsheet.core.arrays import Array, Frozen, agrees
from calcsheet.core.basis import Basis
from calcsheet.core.design import Drifts
from calcsheet.core.edges import Edges, StaticTorsion, both_directions, edges, larger_of, shift, static_torsion
from calcsheet.core.errors import ModelError
from calcsheet.core.floors import DIRECTIONS, Floors
from calcsheet.core.model import Model, models_of
from calcsheet.core.modes import Modes, modes_of
from calcsheet.core.participation import participation
from calcsheet.core.peaks import responses
from calcsheet.core.plan import shifted
from calcsheet.core.response import left_over, related
from calcsheet.core.storeys import Storeys
from calcsheet.steps.plan import floors_of_model
from calcsheet.steps.step import Caution, Done, Line, Number, Outcome, Step, plain

IRREGULAR = 1.2
"""Edge drift over the mean of both edges from which a plan is torsionally irregular (ASCE/SEI 7-16, Table 12.3-1)."""


@dataclass(frozen=True)
class TorsionOptions:
    """What is asked of the step.

    Parameters
    ----------
    accidental : float
        Accidental eccentricity over the floor's side.
    """

    accidental: float = 0.05


@dataclass(frozen=True, eq=False)
class DirectionTorsion(Frozen):
    """Edges of one direction, with the stiffness set that serves drifts.

    Parameters
    ----------
    direction : str
        "x" or "y".
    nominal : Edges
        Under excitation in the direction, masses where they are.
    accidental : Edges
        The largest of that and of masses shifted either way.
    both : Edges
        That with excitation in the other direction.
    static : StaticTorsion or None
        Static forces beside the centres of mass; None where the edition has none.
    factor : float
        What brings elastic drifts to design drifts, the edition's factor times its scale.
    amplified : (n,) array
        Second-order factor of each storey.
    design : (n, 2) array
        Design drift of each storey at both edges: accidental × factor × second order [m].
    limit : (n,) array
        Its limit [m].
    share : (n, 2) array
        Design drift over its limit.
    worst : tuple of int
        Storey and edge, from 0, of the largest share.
    """

    direction: str
    nominal: Edges
    accidental: Edges
    both: Edges
    static: StaticTorsion | None
    factor: float = field(metadata=agrees(rtol=1e-8))
    amplified: Array = field(metadata=agrees(rtol=1e-6))
    design: Array = field(metadata=agrees(rtol=1e-6, atol=1e-9))
    limit: Array = field(metadata=agrees(rtol=1e-6, atol=1e-9))
    share: Array = field(metadata=agrees(rtol=1e-6))
    worst: tuple[int, ...]


@dataclass(frozen=True, eq=False)
class TorsionResult:
    """Edges in each direction.

    Parameters
    ----------
    stiffness : str
        Name of the stiffness set that serves drifts.
    directions : tuple of DirectionTorsion
        x before y.
    """

    stiffness: str
    directions: tuple[DirectionTorsion, ...]


def run(options: TorsionOptions, storeys: Done, modes: Done, basis: Done, demand: Done, drift: Done) -> Outcome:
    building: Storeys = storeys.inputs
    (model, *_) = models_of(building, building.drifts)
    floors, extent = floors_of_model(model.lateral), building.plan.extent if building.plan else None
    if extent is None:
        raise ModelError(
            "floors.csv", "no extent of the plan", "must be given: plan x from, plan x to, plan y from, plan y to"
        )
    given: Basis = basis.inputs
    solved = modes.result.models[0].modes
    keep = solved.omega.size
    if modes.result.stiffness != building.drifts:
        solved = modes_of(model, keep)
    found: list[DirectionTorsion] = []
    lines: list[Line] = []
    cautions: list[Caution] = []
    for item, of in zip(drift.result.directions, demand.result.directions, strict=True):
        d, other = item.direction, DIRECTIONS[1 - DIRECTIONS.index(item.direction)]
        nominal = _peaks(given, model, solved, d, d, extent)
        away = shift(extent, d, options.accidental)
        moved = [_shifted(given, model, floors, sign * away, keep, d, extent) for sign in (1.0, -1.0)]
        largest = larger_of(nominal, *moved)
        both = both_directions(largest, _peaks(given, model, solved, d, other, extent))
        static = None
        if of.static is not None:
            force, _ = given.edition.distribution(of.facts, of.static)
            static = static_torsion(floors, force, d, extent, options.accidental)
        result = _designed(item, nominal, largest, both, static)
        at = f"result/directions/{len(found)}"
        found.append(result)
        lines += _lines(result, building.level, at)
        cautions += _cautions(result, building.level, at)
    return Outcome(TorsionResult(building.drifts, tuple(found)), tuple(lines), tuple(cautions))


def _peaks(basis: Basis, model: Model, modes: Modes, along: str, excited: str, extent: Array) -> Edges:
    """Edges along one direction under excitation in one."""
    edition, period = basis.edition, modes.period
    spectrum = partial(edition.ordinates, excited)
    rest = left_over(spectrum, basis.residual, float(period[-1]), period.size, model.size)
    part = participation(model, modes, excited)
    u, _, _ = responses(model, modes, part, spectrum(period), rest)
    correlated = related(modes, basis.combination, edition.damping().value, rest is not None)
    return edges(floors_of_model(model.lateral), u, correlated, basis.combination, along, extent)


def _shifted(
    basis: Basis, model: Model, floors: Floors, away: Array, keep: int, direction: str, extent: Array
) -> Edges:
    """Edges with the masses moved; what is asked stays where it was."""
    moved = replace(model, lateral=shifted(floors, away))
    return _peaks(basis, moved, modes_of(moved, keep), direction, direction, extent)


def _designed(
    item: Drifts, nominal: Edges, accidental: Edges, both: Edges, static: StaticTorsion | None
) -> DirectionTorsion:
    factor = item.factor.value * item.scale
    amplified = np.ones(item.limit.size) if item.second_order is None else item.second_order.factor
    design = accidental.drift * factor * amplified[:, None]
    share = design / item.limit[:, None]
    worst = np.unravel_index(int(np.argmax(share)), share.shape)
    return DirectionTorsion(
        direction=item.direction,
        nominal=nominal,
        accidental=accidental,
        both=both,
        static=static,
        factor=factor,
        amplified=amplified,
        design=design,
        limit=item.limit,
        share=share,
        worst=(int(worst[0]), int(worst[1])),
    )


def _lines(item: DirectionTorsion, levels: tuple[str, ...], at: str) -> list[Line]:
    i, edge = item.worst
    of = f'storey below level "{plain(levels[i])}", {item.direction}, {_edge(item.direction, edge)}'
    drift = Number(float(item.accidental.drift[i, edge]), "displacement", f"{at}/accidental/drift/{i}/{edge}")
    factor = Number(item.factor, "ratio", f"{at}/factor")
    second = Number(float(item.amplified[i]), "ratio", f"{at}/amplified/{i}")
    design = Number(float(item.design[i, edge]), "displacement", f"{at}/design/{i}/{edge}")
    limit = Number(float(item.limit[i]), "displacement", f"{at}/limit/{i}")
    share = Number(float(item.share[i, edge]), "share", f"{at}/share/{i}/{edge}")
    return [
        Line(
            f"Design drift at the edge, {of}",
            "largest elastic edge drift × factor × second order",
            "{0} × {1} × {2}",
            (drift, factor, second),
            design,
            "masses shifted either way",
        ),
        Line(f"Share of the drift limit at the edge, {of}", "design drift / limit", "{0} / {1}", (design, limit), share, "ratio"),
    ]  # fmt: skip


def _edge(direction: str, edge: int) -> str:
    across = "y" if direction == "x" else "x"
    return f"edge of {'lower' if edge == 0 else 'higher'} {across}"


def _cautions(item: DirectionTorsion, levels: tuple[str, ...], at: str) -> list[Caution]:
    cautions, d = [], item.direction
    i, edge = item.worst
    if item.share[i, edge] > 1.0:
        number = Number(float(item.share[i, edge]), "share", f"{at}/share/{i}/{edge}")
        text = f'The drift in {d} exceeds its limit at an edge: {{0}} of it, in the storey below "{plain(levels[i])}".'
        cautions.append(Caution(f"edge-drift-exceeds-{d}", text, (number,), answer=True))
    if item.static is not None and float(item.static.ratio.max()) > IRREGULAR:
        k = int(np.argmax(item.static.ratio))
        number = Number(float(item.static.ratio[k]), "ratio", f"{at}/static/ratio/{k}")
        text = (
            f"Under static forces in {d} beside the centres of mass the larger edge drift is {{0}} times the mean of both, in "
            f'the storey below "{plain(levels[k])}": beyond {IRREGULAR:g} ASCE/SEI 7-16, Table 12.3-1, speaks of torsional '
            "irregularity, beyond 1.4 of an extreme one (from memory)."
        )
        cautions.append(Caution(f"torsional-irregularity-{d}", text, (number,), answer=True))
    return cautions


METHOD = r"""
Displacements and drifts at the edges are combined from their own modal values. Accidental eccentricities move the masses
of all levels to one side and to the other, square to the excitation, and the modes are found anew; the largest of the
three counts. Excitation in the other direction adds 30 % of its own edge values, or the other way round (EN 1998-1:2004,
4.3.3.5.1(3), from memory). Beside it stand static forces at the same eccentricities: the ratio of edge drifts and

$$A_x = \left(\frac{\delta_{max}}{1.2\,\delta_{avg}}\right)^{2}$$

come from them alone, with $A_x = 1$ (ASCE/SEI 7-16, 12.8.4.3 and Table 12.3-1, from memory), never from combined values.
"""

TORSION = Step(
    "torsion",
    1,
    "Edges and accidental torsion",
    TorsionOptions,
    TorsionResult,
    ("storeys", "modes", "basis", "demand", "drift"),
    run,
    METHOD,
)
