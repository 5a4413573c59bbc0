"""Mass take-off: what each level holds of the loads on floors and in storeys, where its mass lies and how it turns.

Positions x, y are in the plan. A part that is spread over a rectangle a × b turns about its own centre with
r² = (a² + b²)/12; one that runs along the rectangle's edge, with r² = (a + b)²/12.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike

from calcsheet.core.arrays import Array, Frozen, agrees
from calcsheet.core.errors import ModelError
from calcsheet.core.evidence import Evidence
from calcsheet.core.floors import PLACES, Floors
from calcsheet.core.totals import GRAVITY

LIMIT = 1e-12
"""Largest error accepted of a sum that is made in two ways."""


@dataclass(frozen=True, eq=False)
class LevelMasses(Frozen):
    """What a take-off gives, the lowest of n levels first.

    Parameters
    ----------
    counted : (L,) array
        What the masses hold of each load [kN/m² or kN/m³].
    by_load : (n, L) array
        Weight of each load at each level [kN].
    other : (n,) array
        Weight of the masses with places of their own [kN].
    weight : (n,) array
        Weight of each level [kN].
    mass : (n,) array
        Mass of each level [t].
    centre_x, centre_y : (n,) array
        Centre of mass [m].
    inertia : (n,) array
        Polar moment of inertia about the centre of mass [t·m²].
    radius : (n,) array
        Radius of gyration about the centre of mass [m].
    weight_per_area : (n,) array
        Weight over floor area [kN/m²].
    foot : float
        Weight of the lower half of the lowest storey, which no level carries [kN].
    total : float
        Weight of the levels above the effective base [kN].
    """

    counted: Array = field(metadata=agrees(rtol=1e-12))
    by_load: Array = field(metadata=agrees(rtol=1e-12))
    other: Array = field(metadata=agrees(rtol=1e-12))
    weight: Array = field(metadata=agrees(rtol=1e-12))
    mass: Array = field(metadata=agrees(rtol=1e-12))
    centre_x: Array = field(metadata=agrees(rtol=1e-9, atol=1e-9))
    centre_y: Array = field(metadata=agrees(rtol=1e-9, atol=1e-9))
    inertia: Array = field(metadata=agrees(rtol=1e-9))
    radius: Array = field(metadata=agrees(rtol=1e-9))
    weight_per_area: Array = field(metadata=agrees(rtol=1e-12))
    foot: float = field(metadata=agrees(rtol=1e-12))
    total: float = field(metadata=agrees(rtol=1e-12))


class Parts(NamedTuple):
    """Parts of a take-off: level, mass, centre, radius of gyration about it."""

    level: np.ndarray
    mass: Array
    x: Array
    y: Array
    radius: Array


class Gathered(NamedTuple):
    """Masses of n levels, their centres and polar moments of inertia about these."""

    mass: Array
    x: Array
    y: Array
    inertia: Array


def spread_radius(plan_x: ArrayLike, plan_y: ArrayLike) -> Array:
    """Radius of gyration, about its centre, of what is spread over a rectangle.

    Parameters
    ----------
    plan_x, plan_y : array_like
        Sides [m].
    """
    return np.sqrt((np.square(plan_x) + np.square(plan_y)) / 12.0)


def edge_radius(plan_x: ArrayLike, plan_y: ArrayLike) -> Array:
    """Radius of gyration, about its centre, of what runs along the edge of a rectangle.

    Parameters
    ----------
    plan_x, plan_y : array_like
        Sides [m].

    Notes
    -----
    The four sides, each with its own length³/12 and moved to the centre, add up to (a + b)³/6; over the length 2(a + b)
    this is (a + b)²/12.
    """
    return np.add(plan_x, plan_y) / np.sqrt(12.0)


def gathered(part: Parts, levels: int) -> Gathered:
    """Put parts together level by level (parallel axis theorem).

    Parameters
    ----------
    part : Parts
        The parts, each with its level.
    levels : int
        How many levels there are; one without mass has its centre at 0.
    """
    of = part.level

    def summed(values: Array) -> Array:
        return np.bincount(of, values, levels).astype(np.float64)

    mass = summed(part.mass)
    x, y = (_over(summed(part.mass * at), mass) for at in (part.x, part.y))
    moved = np.square(part.x - x[of]) + np.square(part.y - y[of])
    return Gathered(mass, x, y, summed(part.mass * (np.square(part.radius) + moved)))


def take_off(floors: Floors) -> LevelMasses:
    """Masses of the levels from what their floors and storeys carry.

    Parameters
    ----------
    floors : Floors
        n levels, L loads.

    Raises
    ------
    ModelError
        A level above the effective base has no weight.
    """
    below, above = by_row(floors)
    parts = parts_of(floors)
    found = gathered(parts, len(floors.level))
    for i in range(floors.below, len(floors.level)):
        if not found.mass[i] > 0.0:
            raise ModelError(f'weight of level "{floors.level[i]}"', "0 kN", "must be above 0 above the effective base")
    weight = found.mass * GRAVITY
    bare = found.mass == 0.0
    return LevelMasses(
        counted=np.array([load.counted for load in floors.load]),
        by_load=below + above,
        other=_others(floors),
        weight=weight,
        mass=found.mass,
        centre_x=np.where(bare, floors.centre_x, found.x),
        centre_y=np.where(bare, floors.centre_y, found.y),
        inertia=found.inertia,
        radius=np.sqrt(_over(found.inertia, found.mass)),
        weight_per_area=weight / floors.area,
        foot=float(below[0][_in_storey(floors)].sum()),
        total=float(weight[floors.below :].sum()),
    )


def by_row(floors: Floors) -> tuple[Array, Array]:
    """Weight that each level takes of its own row's loads, and of those of the storey above it.

    Parameters
    ----------
    floors : Floors
        n levels, L loads.

    Returns
    -------
    below, above : (n, L) array
        Load on the level and upper half of the storey below it; lower half of the storey above it [kN].
    """
    counted, storey = np.array([load.counted for load in floors.load]), _in_storey(floors)
    below = floors.amount * counted * np.where(storey, 0.5 * floors.storey_height[:, None], 1.0)
    above = np.zeros_like(below)
    above[:-1] = below[1:] * storey
    return below, above


def parts_of(floors: Floors) -> Parts:
    """All parts of all levels.

    Parameters
    ----------
    floors : Floors
        n levels, L loads.

    Notes
    -----
    The halves of a storey lie under each other: both have the centre and the size of the floor on top of it.
    """
    n = len(floors.level)
    edge = np.array([PLACES[load.place].edge for load in floors.load], dtype=bool)
    spread = spread_radius(floors.plan_x, floors.plan_y)
    own = np.array([s if r is None else r for s, r in zip(spread, floors.own_radius, strict=True)])
    around = edge_radius(floors.plan_x, floors.plan_y)
    level, weight, x, y, radius = [], [], [], [], []
    for of_load, first in zip(by_row(floors), (0, 1), strict=True):
        for chosen, turns in ((~edge, own), (edge, around)):
            level.append(np.arange(n - first))
            weight.append(of_load[: n - first, chosen].sum(axis=1))
            x.append(floors.centre_x[first:])
            y.append(floors.centre_y[first:])
            radius.append(turns[first:])
    other = floors.other
    level.append(np.array([floors.level.index(o.level) for o in other], dtype=int))
    weight.append(np.array([o.weight for o in other]))
    x.append(np.array([o.x for o in other]))
    y.append(np.array([o.y for o in other]))
    radius.append(spread_radius(np.array([o.plan_x for o in other]), np.array([o.plan_y for o in other])))
    mass = np.concatenate(weight) / GRAVITY
    return Parts(np.concatenate(level), mass, np.concatenate(x), np.concatenate(y), np.concatenate(radius))


def evidence_of_take_off(floors: Floors, found: LevelMasses) -> tuple[Evidence, ...]:
    """Evidence on a take-off: each sum made in another order.

    Parameters
    ----------
    floors : Floors
        What the floors carry.
    found : LevelMasses
        Its take-off.

    Returns
    -------
    tuple of Evidence
        Weights by load against weights by level; inertia about the origin, moved to the centre of mass, against the sum
        about the centre of mass.
    """
    whole = np.where(_in_storey(floors), floors.storey_height[:, None], 1.0) * floors.amount
    by_load = float(whole.sum(axis=0) @ np.array([load.counted for load in floors.load]))
    by_load += sum(o.weight for o in floors.other)
    by_level = float(found.weight.sum()) + found.foot
    part = parts_of(floors)
    far = np.square(part.x) + np.square(part.y)
    about_origin = np.bincount(part.level, part.mass * (np.square(part.radius) + far), len(floors.level))
    moved = about_origin - found.mass * (np.square(found.centre_x) + np.square(found.centre_y))
    scale = np.where(about_origin > 0.0, about_origin, 1.0)
    errors = {
        "weight": abs(by_level / by_load - 1.0) if by_load else 0.0,
        "inertia": float(np.max(np.abs(moved - found.inertia) / scale)),
    }
    words = {
        "weight": (
            "Mass take-off: weights of all loads against weights of all levels",
            "ΣW of levels + foot = ΣW of loads",
        ),
        "inertia": ("Mass take-off: inertia about the origin against that about the centre", "I₀ − m(x² + y²) = I"),
    }
    return tuple(
        Evidence(f"take-off-{key}", *words[key], error, LIMIT, error <= LIMIT) for key, error in errors.items()
    )


def _over(values: Array, mass: Array) -> Array:
    """Values over masses, 0 where there is no mass."""
    return np.divide(values, mass, out=np.zeros_like(mass), where=mass > 0.0)


def _in_storey(floors: Floors) -> np.ndarray:
    """Which loads stand in storeys."""
    return np.array([PLACES[load.place].storey for load in floors.load], dtype=bool)


def _others(floors: Floors) -> Array:
    """Weight of the masses with places of their own, by level [kN]."""
    at = np.array([floors.level.index(o.level) for o in floors.other], dtype=int)
    return np.bincount(at, [o.weight for o in floors.other], len(floors.level)).astype(float)
