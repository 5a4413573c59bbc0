"""Design values of one direction: drifts with their limit and second order, storey actions scaled by the edition."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from calcsheet.core.arrays import Array, Frozen, agrees
from calcsheet.core.codes.edition import Edition, Factor, Facts, Relation, Scaling, Screen, SecondOrder, Static
from calcsheet.core.errors import ModelError
from calcsheet.core.response import PEAK, Combined

SAME = 1e-9
"""Relative difference up to which a drift counts as not capped: two spectra on one plateau differ by rounding."""


@dataclass(frozen=True, eq=False)
class Drifts(Frozen):
    """Design drifts of one direction.

    Parameters
    ----------
    direction : str
        "x" or "y".
    elastic : (n,) array
        Combined drift of each storey at the force level, unscaled [m].
    factor : Factor
        What brings it to the design drift.
    second_order : SecondOrder or None
        Second-order effects; None where the edition has no check or no gravity load is given.
    second_order_note : str
        Why there is none, or empty.
    gravity : (n,) array
        Gravity load at and above each storey, zero where none is given [kN].
    shear : (n,) array
        Combined shear of each storey at the force level, unscaled [kN].
    storey_height : (n,) array
        Height of each storey [m].
    design : (n,) array
        Design drift of each storey [m].
    limit : (n,) array
        Its limit [m].
    share : (n,) array
        Design drift over its limit.
    worst : int
        Storey, from 0, with the largest share.
    limit_relation : Relation
        How the limit of the lowest storey comes about.
    displacement : (n,) array
        Design displacement of each level; the second-order factor is the largest at and below it [m].
    separation : float or None
        Displacement to be kept clear of a neighbour that does not move [m].
    separation_clause : str
        Its source.
    first : (n,) array
        Design drift of each storey before scale and second order: elastic times factor, or the elastic spectrum's [m].
    capped : bool
        Whether in the worst storey the elastic spectrum's drift governs.
    scale : float
        What the edition multiplies drifts by.
    stiffness : (n,) array
        Shear held by each storey over its drift, combined [kN/m].
    screens : tuple of Screen
        Irregularities looked at.
    """

    direction: str
    elastic: Array = field(metadata=PEAK)
    factor: Factor
    second_order: SecondOrder | None
    second_order_note: str
    gravity: Array = field(metadata=agrees(rtol=1e-9))
    shear: Array = field(metadata=PEAK)
    storey_height: Array = field(metadata=agrees(rtol=1e-9))
    design: Array = field(metadata=PEAK)
    limit: Array = field(metadata=PEAK)
    share: Array = field(metadata=agrees(rtol=1e-6))
    worst: int
    limit_relation: Relation
    displacement: Array = field(metadata=PEAK)
    separation: float | None = field(metadata=PEAK)
    separation_clause: str
    first: Array = field(metadata=PEAK)
    capped: bool
    scale: float = field(metadata=agrees(rtol=1e-8))
    stiffness: Array = field(metadata=agrees(rtol=1e-6))
    screens: tuple[Screen, ...]


def drifts(
    edition: Edition, facts: Facts, found: Combined, scaling: Scaling, gravity: Array | None, cap: Combined | None
) -> Drifts:
    """Design drifts of one direction.

    Parameters
    ----------
    edition : Edition
        The code edition.
    facts : Facts
        The building in this direction.
    found : Combined
        Response with the stiffness set that serves drifts, unscaled.
    scaling : Scaling
        Its factor on drifts is applied to drifts and displacements, and not to the stability coefficient.
    gravity : (n,) array or None
        Gravity load at and above each storey [kN].
    cap : Combined or None
        Response to the elastic spectrum, which displacements need not exceed; None where the edition has no such cap.

    Returns
    -------
    Drifts
    """
    factor = edition.drift(facts.direction)
    uncapped, top = factor.value * found.drift, factor.value * found.displacement
    first = uncapped
    if cap is not None:
        first, top = np.minimum(uncapped, cap.drift), np.minimum(top, cap.displacement)
    load = np.zeros(first.size) if gravity is None else gravity
    second, note = edition.second_order(facts, load, found.shear, first, found.held is not None), ""
    if second is None:
        note = "not in this edition"
    elif gravity is None:
        second, note = None, "gravity load column is missing"
    amplified = np.ones(first.size) if second is None else second.factor
    limit, relation = edition.drift_limit(facts)
    design = first * scaling.drifts * amplified
    displacement = top * scaling.drifts * np.maximum.accumulate(amplified)
    share = design / limit
    worst = int(np.argmax(share))
    separation, clause = edition.separation(float(displacement[-1]))
    with np.errstate(divide="ignore", invalid="ignore"):
        stiffness = (found.shear if found.held is None else found.held) / found.drift
    if not np.isfinite(stiffness).all():
        raise ModelError("storey drift", "0 in a storey", "must be above 0: the spectrum gives no response")
    return Drifts(
        direction=facts.direction,
        elastic=found.drift,
        factor=factor,
        second_order=second,
        second_order_note=note,
        gravity=load,
        shear=found.shear,
        storey_height=facts.storey_height,
        design=design,
        limit=limit,
        share=share,
        worst=worst,
        limit_relation=relation,
        displacement=displacement,
        separation=separation,
        separation_clause=clause,
        first=first,
        capped=bool(first[worst] < uncapped[worst] * (1.0 - SAME)),
        scale=scaling.drifts,
        stiffness=stiffness,
        screens=edition.irregularities(facts, stiffness, first),
    )


@dataclass(frozen=True, eq=False)
class Actions(Frozen):
    """Storey actions of one direction.

    Parameters
    ----------
    direction : str
        "x" or "y".
    scaling : Scaling
        What modal results are multiplied by.
    amplified : (n,) array
        Second-order factor of each storey, 1 where there is none; with second-order effects in the stiffness no factor of
        the edition's, but the shear that the storey holds over that of the forces.
    shear : (n,) array
        Design shear of each storey: combined × scaling × second order [kN].
    moment : (n,) array
        Design overturning moment at each storey's foot; the edition's second-order factor is the largest at and above it
        [kN·m].
    equivalent : (n,) array
        Differences of the design shears, one a level [kN].
    modal_base_shear, design_base_shear : float
        Combined modal base shear, and the design one [kN].
    weight : float
        Seismic weight [kN].
    static : Static or None
        The static base shear.
    static_force : (n,) array
        Its forces, zero where there is none [kN].
    static_clause : str
        Clause of their distribution.
    overturning : float
        Design overturning moment at the base over the weight [m].
    torsion : float or None
        Multiplier for accidental torsion at the edge of a planar model; None where it is not assessed, or floors rotate.
    """

    direction: str
    scaling: Scaling
    amplified: Array = field(metadata=agrees(rtol=1e-6))
    shear: Array = field(metadata=PEAK)
    moment: Array = field(metadata=PEAK)
    equivalent: Array = field(metadata=agrees(rtol=1e-6, atol=1e-6))
    modal_base_shear: float = field(metadata=PEAK)
    design_base_shear: float = field(metadata=PEAK)
    weight: float = field(metadata=agrees(rtol=1e-9))
    static: Static | None
    static_force: Array = field(metadata=PEAK)
    static_clause: str
    overturning: float = field(metadata=PEAK)
    torsion: float | None = field(metadata=agrees(rtol=1e-12))


def actions(
    edition: Edition, facts: Facts, found: Combined, scaling: Scaling, static: Static | None, second: SecondOrder | None
) -> Actions:
    """Storey actions of one direction.

    Parameters
    ----------
    edition : Edition
        The code edition.
    facts : Facts
        The building in this direction.
    found : Combined
        Response with the stiffness set that serves forces, unscaled.
    scaling : Scaling
        What modal results are multiplied by.
    static : Static or None
        The static base shear.
    second : SecondOrder or None
        Second-order effects found with the drifts.

    Returns
    -------
    Actions
    """
    force, clause = (np.zeros(facts.weight.size), "") if static is None else edition.distribution(facts, static)
    modal = float(found.shear[0])
    amplified = np.ones(found.shear.size) if second is None else second.factor
    above = np.maximum.accumulate(amplified[::-1])[::-1]
    if found.held is not None:  # the moment is that of the shears held
        amplified, above = found.held / found.shear, np.ones(found.shear.size)
    shear = found.shear * scaling.forces * amplified
    moment = found.moment * scaling.forces * above
    return Actions(
        direction=facts.direction,
        scaling=scaling,
        amplified=amplified,
        shear=shear,
        moment=moment,
        equivalent=shear - np.append(shear[1:], 0.0),
        modal_base_shear=modal,
        design_base_shear=float(shear[0]),
        weight=facts.total,
        static=static,
        static_force=force,
        static_clause=clause,
        overturning=float(moment[0]) / facts.total,
        torsion=edition.torsion(facts.direction)[0] if facts.plan is None else None,
    )
