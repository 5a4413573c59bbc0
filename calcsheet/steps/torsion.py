"""Edges of rigid floors under the design demand, accidental eccentricities included."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from functools import partial

import numpy as np

from calcsheet.core.arrays import Array, Frozen, agrees
from calcsheet.core.basis import Basis
from calcsheet.core.design import Drifts
from calcsheet.core.edges import (
    Edges,
    StaticTorsion,
    both_directions,
    edges,
    larger_of,
    line_shears,
    shift,
    static_torsion,
    with_the_other,
)
from calcsheet.core.errors import ModelError
from calcsheet.core.model import Model, models_of
from calcsheet.core.modes import Modes, modes_of
from calcsheet.core.participation import participation
from calcsheet.core.peaks import responses
from calcsheet.core.plan import shifted
from calcsheet.core.response import left_over, related
from calcsheet.core.rigidfloors import DIRECTIONS, Floors
from calcsheet.core.storeys import Storeys
from calcsheet.steps.drift import DriftResult
from calcsheet.steps.peaks import PeaksResult
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
class LineShears(Frozen):
    """Design storey shears of one line of resistance, lowest first, with the stiffness set that serves forces.

    Scaled by the edition and with its second-order factor; the largest of masses where they are and shifted either way.

    Parameters
    ----------
    name : str
        The line.
    x, y : (n,) array
        Under excitation in x and in y [kN].
    both : (n,) array
        Under both [kN].
    """

    name: str
    x: Array = field(metadata=agrees(rtol=1e-6, atol=1e-6))
    y: Array = field(metadata=agrees(rtol=1e-6, atol=1e-6))
    both: Array = field(metadata=agrees(rtol=1e-6, atol=1e-6))


@dataclass(frozen=True, eq=False)
class TorsionResult:
    """Edges in each direction, and the lines.

    Parameters
    ----------
    stiffness_forces, stiffness : str
        Names of the stiffness sets that serve forces and drifts.
    directions : tuple of DirectionTorsion
        x before y.
    lines : tuple of LineShears
        In the order of the plan.
    """

    stiffness_forces: str
    stiffness: str
    directions: tuple[DirectionTorsion, ...]
    lines: tuple[LineShears, ...]


def run(
    options: TorsionOptions, storeys: Done, modes: Done, basis: Done, demand: Done, peaks: Done, drift: Done
) -> Outcome:
    building: Storeys = storeys.inputs
    (model, *_) = models_of(building, building.drifts)
    floors, extent = floors_of_model(model.lateral), building.plan.extent if building.plan else None
    if extent is None:
        allowed = "must be given: plan x from, plan x to, plan y from, plan y to"
        raise ModelError("plan.csv", "no extent of the plan", allowed)
    served, solved, given = modes.result.stiffness, modes.result.models[0].modes, basis.inputs
    keep = solved.omega.size
    forcing = None
    if served != building.drifts:
        (stronger, *_) = models_of(building, served)
        forcing = {d: _excited(given, stronger, solved, d, extent, options.accidental) for d in DIRECTIONS}
        solved = modes_of(model, keep)
    drifting = {d: _excited(given, model, solved, d, extent, options.accidental) for d in DIRECTIONS}
    found: list[DirectionTorsion] = []
    lines: list[Line] = []
    cautions: list[Caution] = []
    for item, of in zip(drift.result.directions, demand.result.directions, strict=True):
        d, other = item.direction, DIRECTIONS[1 - DIRECTIONS.index(item.direction)]
        nominal, *moved = (edges(*case, given.combination, d, extent) for case in drifting[d])
        largest = larger_of(nominal, *moved)
        both = both_directions(largest, edges(*drifting[other][0], given.combination, d, extent))
        static = None
        if of.static is not None:
            force, _ = given.edition.distribution(of.facts, of.static)
            static = static_torsion(floors, force, d, extent, options.accidental)
        result = _designed(item, nominal, largest, both, static)
        at = f"result/directions/{len(found)}"
        found.append(result)
        lines += _lines(result, building.level, at)
        cautions += _cautions(result, building.level, at)
    shears = _shears(given, forcing or drifting, peaks.result, drift.result)
    return Outcome(TorsionResult(served, building.drifts, tuple(found), shears), tuple(lines), tuple(cautions))


Case = tuple[Floors, Array, Array]
"""Floors, their modal displacements, the correlation of these."""


def _excited(
    basis: Basis, model: Model, modes: Modes, direction: str, extent: Array, share: float
) -> tuple[Case, Case, Case]:
    """Modal displacements under excitation in a direction: masses where they are, then shifted either way."""
    floors, away = floors_of_model(model.lateral), shift(extent, direction, share)
    keep = modes.omega.size
    moved = [replace(model, lateral=shifted(floors, sign * away)) for sign in (1.0, -1.0)]
    return (
        _case(basis, model, modes, direction),
        _case(basis, moved[0], modes_of(moved[0], keep), direction),
        _case(basis, moved[1], modes_of(moved[1], keep), direction),
    )


def _case(basis: Basis, model: Model, modes: Modes, direction: str) -> Case:
    edition, period = basis.edition, modes.period
    spectrum = partial(edition.ordinates, direction)
    rest = left_over(spectrum, basis.residual, float(period[-1]), period.size, model.size)
    u, _, _ = responses(model, modes, participation(model, modes, direction), spectrum(period), rest)
    correlated = related(modes, basis.combination, edition.damping().value, rest is not None)
    return floors_of_model(model.lateral), u, correlated


def _shears(
    basis: Basis, excited: Mapping[str, Sequence[Case]], peaks: PeaksResult, drift: DriftResult
) -> tuple[LineShears, ...]:
    """Design shears of every line."""
    largest = {}
    for item, peak in zip(drift.directions, peaks.directions, strict=True):
        each = [line_shears(*case, basis.combination) for case in excited[item.direction]]
        factor = peak.scaling.forces * _second_order(item)
        largest[item.direction] = [
            np.max(shears, axis=0) * factor[: shears[0].size] for shears in zip(*each, strict=True)
        ]
    names = [line.name for line in excited["x"][0][0].lines]
    return tuple(
        LineShears(name, x, y, with_the_other(x, y))
        for name, x, y in zip(names, largest["x"], largest["y"], strict=True)
    )


def _second_order(item: Drifts) -> Array:
    """Second-order factor of each storey, 1 where there is none."""
    return np.ones(item.limit.size) if item.second_order is None else item.second_order.factor


def _designed(
    item: Drifts, nominal: Edges, accidental: Edges, both: Edges, static: StaticTorsion | None
) -> DirectionTorsion:
    factor = item.factor.value * item.scale
    amplified = _second_order(item)
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
        cautions.append(Caution("edge-drift-exceeds", text, (number,), answer=True, subject=d))
    if item.static is not None and float(item.static.ratio.max()) > IRREGULAR:
        k = int(np.argmax(item.static.ratio))
        number = Number(float(item.static.ratio[k]), "ratio", f"{at}/static/ratio/{k}")
        text = (
            f"Under static forces in {d} beside the centres of mass the larger edge drift is {{0}} times the mean of both, in "
            f'the storey below "{plain(levels[k])}": beyond {IRREGULAR:g} ASCE/SEI 7-16, Table 12.3-1, speaks of torsional '
            "irregularity, beyond 1.4 of an extreme one (from memory)."
        )
        cautions.append(Caution("torsional-irregularity", text, (number,), answer=True, subject=d))
    return cautions


METHOD = r"""
Displacements and drifts at the edges, and storey shears of the lines, are combined from their own modal values.
Accidental eccentricities move the masses of all levels to one side and to the other, square to the excitation, and the
modes are found anew; the largest of the three counts. Shears are scaled as the storey shears are. Excitation in the other
direction adds 30 % of its own values, or the other way round (EN 1998-1:2004, 4.3.3.5.1(3), from memory). Beside it stand
static forces at the same eccentricities: the ratio of edge drifts and

$$A_x = \left(\frac{\delta_{max}}{1.2\,\delta_{avg}}\right)^{2}$$

come from them alone, with $A_x = 1$ (ASCE/SEI 7-16, 12.8.4.3 and Table 12.3-1, from memory), never from combined values.
"""

TORSION = Step(
    "torsion",
    1,
    "Edges and accidental torsion",
    TorsionOptions,
    TorsionResult,
    ("storeys", "modes", "basis", "demand", "peaks", "drift"),
    run,
    METHOD,
)
