"""Edges of rigid floors: what rotation adds to displacements and drifts there, accidental eccentricities included.

Sources
-------
EN 1998-1:2004, 4.3.2, 4.3.3.3.3 and 4.3.3.5.1; ASCE/SEI 7-16, 12.8.4 and Table 12.3-1 (all from memory).
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from calcsheet.core.arrays import Array, Frozen, agrees
from calcsheet.core.combine import Rule, combined
from calcsheet.core.plan import amplification, displaced, point_drifts, static
from calcsheet.core.planar import above
from calcsheet.core.rigidfloors import DIRECTIONS, Floors

EDGE = agrees(rtol=1e-6, atol=1e-9)
SECOND = 0.3
"""Share of the other direction's excitation that is added (EN 1998-1:2004, 4.3.3.5.1(3), from memory)."""


@dataclass(frozen=True, eq=False)
class Edges(Frozen):
    """Combined peaks at the two edges square to a direction, unscaled; the lower coordinate's edge first.

    Parameters
    ----------
    displacement : (L, 2) array
        Displacement of each level along the direction [m].
    drift : (L, 2) array
        Drift of each storey along it [m].
    """

    displacement: Array = field(metadata=EDGE)
    drift: Array = field(metadata=EDGE)


def edges(floors: Floors, u: Array, related: Array, rule: Rule, direction: str, extent: Array) -> Edges:
    """Peaks at the edges, each combined from its own modal values.

    Parameters
    ----------
    floors : Floors
        L levels.
    u : (3L, m) array
        Modal displacements of the floors.
    related : (m, m) array
        Correlation of their columns.
    rule : {"SRSS", "CQC", "absolute", "grouped"}
        Rule of combination.
    direction : {"x", "y"}
        Direction of the displacements wanted.
    extent : (L, 4) array
        Each floor from and to in x, from and to in y [m].
    """
    axis = DIRECTIONS.index(direction)
    sides = [
        (
            combined(displaced(floors, u, x, y)[axis], related, rule),
            combined(point_drifts(floors, u, x, y)[axis], related, rule),
        )
        for x, y in _edge_points(extent, direction)
    ]
    return Edges(np.column_stack([s[0] for s in sides]), np.column_stack([s[1] for s in sides]))


def line_shears(floors: Floors, u: Array, related: Array, rule: Rule) -> tuple[Array, ...]:
    """Peaks of the storey shears of each line, (n,) each [kN], combined from their own modal values.

    Parameters
    ----------
    floors, u, related, rule
        As `edges` takes them.
    """
    return tuple(combined(floors.line_shear(u, line), related, rule) for line in floors.lines)


def with_the_other(along: Array, across: Array) -> Array:
    """Peaks under excitations in both directions, (…): the larger of 100 % and 30 %, either way.

    Parameters
    ----------
    along, across : (…) array
        Peaks of one quantity under excitation in each direction.
    """
    return np.maximum(along + SECOND * across, SECOND * along + across)


def both_directions(along: Edges, across: Edges) -> Edges:
    """Peaks at the edges under excitations in both directions.

    Parameters
    ----------
    along, across : Edges
        Peaks along one direction, under excitation in it and in the other.
    """
    return Edges(with_the_other(along.displacement, across.displacement), with_the_other(along.drift, across.drift))


def larger_of(first: Edges, *others: Edges) -> Edges:
    """The largest of several peaks, edge by edge.

    Parameters
    ----------
    first, *others : Edges
        Peaks of one direction.
    """
    return Edges(
        np.max([e.displacement for e in (first, *others)], axis=0), np.max([e.drift for e in (first, *others)], axis=0)
    )


@dataclass(frozen=True, eq=False)
class StaticTorsion(Frozen):
    """Static forces beside the centres of mass, both ways.

    Parameters
    ----------
    force : (L,) array
        Static force at each level [kN].
    eccentricity : (L,) array
        Accidental eccentricity of each level [m].
    edge : (L, 2) array
        Displacements of the edges under the way that gives the larger ratio at the top [m].
    ratio : (L,) array
        Larger edge drift over the mean of both edges, of each storey; the larger of both ways.
    amplification : (L,) array
        A_x of each level; the larger of both ways.
    torque : (L,) array
        Torque of each storey by the accidental eccentricities alone, not amplified [kN·m].
    """

    force: Array = field(metadata=EDGE)
    eccentricity: Array = field(metadata=agrees(rtol=1e-12))
    edge: Array = field(metadata=EDGE)
    ratio: Array = field(metadata=agrees(rtol=1e-6))
    amplification: Array = field(metadata=agrees(rtol=1e-6))
    torque: Array = field(metadata=agrees(rtol=1e-6, atol=1e-6))


def static_torsion(floors: Floors, force: Array, direction: str, extent: Array, share: float) -> StaticTorsion:
    """Static forces at accidental eccentricities, both ways, not amplified.

    Parameters
    ----------
    floors : Floors
        L levels.
    force : (L,) array
        Static force at each level [kN].
    direction : {"x", "y"}
        Its direction.
    extent : (L, 4) array
        Each floor from and to in x, from and to in y [m].
    share : float
        Accidental eccentricity over the floor's side square to the direction.

    Notes
    -----
    The ratio is taken from static forces with A_x = 1 (ASCE/SEI 7-16, Table 12.3-1, from memory), never from combined
    peaks, which have lost their signs.
    """
    axis, away = DIRECTIONS.index(direction), accidental(extent, direction, share)
    found = []
    for sign in (1.0, -1.0):
        u = static(floors, force, direction, sign * away)
        points = _edge_points(extent, direction)
        moved = np.column_stack([displaced(floors, u, x, y)[axis][:, 0] for x, y in points])
        drift = np.column_stack([point_drifts(floors, u, x, y)[axis][:, 0] for x, y in points])
        ratio = np.abs(drift).max(axis=1) / np.abs(drift.mean(axis=1))
        found.append((ratio, moved, np.array([amplification(row) for row in moved.tolist()])))
    worst = int(found[1][0][-1] > found[0][0][-1])
    return StaticTorsion(
        force=force,
        eccentricity=away,
        edge=found[worst][1],
        ratio=np.maximum(found[0][0], found[1][0]),
        amplification=np.maximum(found[0][2], found[1][2]),
        torque=above(force * away),
    )


def accidental(extent: Array, direction: str, share: float) -> Array:
    """Accidental eccentricity of each level, (L,) [m].

    Parameters
    ----------
    extent : (L, 4) array
        Each floor from and to in x, from and to in y [m].
    direction : {"x", "y"}
        Direction of the forces.
    share : float
        The eccentricity over the floor's side square to it.

    Notes
    -----
    e_a = ±0.05 L: EN 1998-1:2004, 4.3.2(1); ASCE/SEI 7-16, 12.8.4.2 (from memory).
    """
    side = extent[:, 3] - extent[:, 2] if direction == "x" else extent[:, 1] - extent[:, 0]
    return share * side


def shift(extent: Array, direction: str, share: float) -> Array:
    """What shifted masses are moved by for forces in a direction, (L, 2) [m]; square to it.

    Parameters
    ----------
    extent, direction, share
        As `accidental` takes them.
    """
    away = accidental(extent, direction, share)
    none = np.zeros(away.size)
    return np.column_stack([none, away] if direction == "x" else [away, none])


def _edge_points(extent: Array, direction: str) -> list[tuple[Array, Array]]:
    """A point of each of the two edges square to a direction, of each level."""
    if direction == "x":
        return [(extent[:, 0], extent[:, 2]), (extent[:, 0], extent[:, 3])]
    return [(extent[:, 0], extent[:, 2]), (extent[:, 1], extent[:, 2])]
