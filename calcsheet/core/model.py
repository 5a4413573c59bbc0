"""A model as everything downstream sees it: degrees of freedom, levels, directions, influence vectors."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from calcsheet.core.arrays import Array, Frozen, positive
from calcsheet.core.errors import ModelError
from calcsheet.core.lateral import Lateral
from calcsheet.core.planar import above
from calcsheet.core.rigidfloors import DIRECTIONS, Floors, LineOfResistance, floors_of
from calcsheet.core.second_order import Critical
from calcsheet.core.springs import BaseSprings
from calcsheet.core.standing import Standing, critical_load, standing
from calcsheet.core.storeys import Plan, StiffnessSet, Storeys


@dataclass(frozen=True, eq=False)
class Model(Frozen):
    """A building reduced to N degrees of freedom on L levels, fixed at the effective base.

    Parameters
    ----------
    level : tuple of str
        Names of the levels, lowest first, L of them.
    height : (L,) array
        Height of each level above the effective base [m].
    mass : (N,) array
        Mass [t], or rotational inertia [t·m²], of each degree of freedom.
    level_of : tuple of int
        The level, from 0, that each degree of freedom belongs to.
    direction : tuple of str
        Directions of excitation, d of them, such as ("x",).
    influence : (d, N) array
        Displacement of each degree of freedom when the base moves by 1 in each direction, ι.
    lateral : Chain, StiffnessMatrix, FlexibilityMatrix, Stick, Standing or Floors
        Lateral stiffness, of N degrees of freedom.
    tilt : (L,) array or None
        Gravity load at and above each storey over its height [kN/m], where it is in the stiffness.

    Raises
    ------
    ModelError
        A mass that is not finite and above zero, or arrays that do not fit each other.
    """

    level: tuple[str, ...]
    height: Array
    mass: Array
    level_of: tuple[int, ...]
    direction: tuple[str, ...]
    influence: Array
    lateral: Lateral | Standing | Floors
    tilt: Array | None = None

    def __post_init__(self) -> None:
        super().__post_init__()
        for what, size in (
            ("mass", self.mass.size),
            ("level_of", len(self.level_of)),
            ("influence", self.influence.shape[-1]),
        ):
            if size != self.lateral.size:
                raise ModelError(
                    what, f"{size} entries", f"must have {self.lateral.size}, as the lateral stiffness has"
                )
        if self.height.shape != (self.levels,):
            raise ModelError("height", f"{self.height.size} entries", f"must have {self.levels}, one a level")
        object.__setattr__(self, "mass", positive(self.mass, "mass [t]", [self.level[i] for i in self.level_of]))

    @property
    def size(self) -> int:
        """Number of degrees of freedom, N."""
        return int(self.mass.size)

    @property
    def levels(self) -> int:
        """Number of levels, L."""
        return len(self.level)

    @cached_property
    def level_mass(self) -> Array:
        """Translational mass of each level, (L,) [t], the mean of its directions."""
        moving = np.abs(self.influence).max(axis=0) > 0.0
        return self.by_level(np.where(moving, self.mass, 0.0)) / np.maximum(self.by_level(moving.astype(float)), 1.0)

    def along(self, direction: str, values: Array) -> Array:
        """The part, (L, m), of `values` of the degrees of freedom, (N, m), that belongs to one `direction`."""
        return self.by_level(self.influence[self.direction.index(direction)][:, None] * values)

    def gravity_shear(self, u: Array) -> Array | None:
        """What gravity loads in the stiffness push each storey with, (N, m) [kN], at displacements u, (N, m).

        Its frames hold that beside the shear of the forces. None where no loads are in the stiffness.
        """
        if self.tilt is None:
            return None
        if isinstance(self.lateral, Floors):
            return self.lateral.gravity_shear(u)
        return self.tilt[:, None] * self.lateral.drift(u)

    def by_level(self, values: Array) -> Array:
        """Sums over the degrees of freedom of each level, (L, …), of values (N, …)."""
        sums = np.zeros((self.levels, *values.shape[1:]))
        np.add.at(sums, np.asarray(self.level_of), values)
        return sums


def spatial_model(floors: Floors, mass: Array, tilt: Array | None = None) -> Model:
    """The model of rigid floors, in both directions at once.

    Parameters
    ----------
    floors : Floors
        Lateral stiffness and plan.
    mass : (L,) array
        Mass of each level [t].
    tilt : (L,) array or None
        As `Model` takes it.
    """
    return Model(
        level=floors.level,
        height=np.cumsum(floors.storey_height),
        mass=floors.inertia(mass),
        level_of=tuple(np.repeat(np.arange(floors.levels), 3).tolist()),
        direction=DIRECTIONS,
        influence=floors.influence,
        lateral=floors,
        tilt=tilt,
    )


def models_of(storeys: Storeys, stiffness: str) -> tuple[Model, ...]:
    """The models of a building: a planar one for each direction that the stiffness set gives, or one of rigid floors.

    Parameters
    ----------
    storeys : Storeys
        The building.
    stiffness : str
        Name of the stiffness set.

    Returns
    -------
    tuple of Model
        One translation a level each, x before y; or x, y and a rotation a level in one.

    Raises
    ------
    ModelError
        No such set, a stiffness of another size than the levels, or gravity loads that buckle the building.
    """
    if storeys.plan is not None:
        return (_spatial(storeys, storeys.plan, stiffness),)
    lateral = set_of(storeys, stiffness).lateral
    load = above(gravity_of(storeys)) if storeys.second_order else None
    n = len(storeys.level)
    return tuple(
        Model(
            level=storeys.level,
            height=storeys.elevation - storeys.base_elevation,
            mass=storeys.mass,
            level_of=tuple(range(n)),
            direction=(d,),
            influence=np.ones((1, n)),
            lateral=standing(lateral[d], storeys.storey_height, springs_of(storeys, d), load, storeys.level),
            tilt=None if load is None else load / storeys.storey_height,
        )
        for d in sorted(lateral)
    )


def _spatial(storeys: Storeys, plan: Plan, stiffness: str) -> Model:
    gravity = gravity_of(storeys) if storeys.second_order else None
    tilt = None if gravity is None else above(gravity) / storeys.storey_height
    return spatial_model(floors_of_plan(storeys, plan, stiffness, gravity), storeys.mass, tilt)


def floors_of_plan(storeys: Storeys, plan: Plan, stiffness: str, gravity: Array | None = None) -> Floors:
    """Rigid floors of a building.

    Parameters
    ----------
    storeys : Storeys
        The building.
    plan : Plan
        Its plan.
    stiffness : str
        Name of the stiffness set.
    gravity : (L,) array or None
        Gravity load of each level that acts on the drifts [kN].
    """
    lateral = set_of(storeys, stiffness).lateral
    lines = [LineOfResistance(line.name, line.x, line.y, line.angle, lateral[line.name]) for line in plan.lines]
    return floors_of(storeys.level, storeys.storey_height, plan.centre, plan.gyration, lines, gravity)


def set_of(storeys: Storeys, stiffness: str) -> StiffnessSet:
    """A stiffness set by its name.

    Parameters
    ----------
    storeys : Storeys
        The building.
    stiffness : str
        Name of the set.

    Raises
    ------
    ModelError
        No such set.
    """
    for given in storeys.stiffness:
        if given.name == stiffness:
            return given
    names = " or ".join(f'"{s.name}"' for s in storeys.stiffness)
    raise ModelError("stiffness set", f'got "{stiffness}"', f"must be {names}")


def springs_of(storeys: Storeys, direction: str) -> BaseSprings:
    """Springs at the base in a direction, none where it is fixed.

    Parameters
    ----------
    storeys : Storeys
        The building.
    direction : str
        "x" or "y".
    """
    return storeys.springs.get(direction, BaseSprings())


def critical_of(storeys: Storeys, stiffness: str, model: Model) -> Critical | None:
    """Elastic critical load factor of a model's gravity loads, None where none are given.

    Parameters
    ----------
    storeys : Storeys
        The building.
    stiffness : str
        Name of the stiffness set.
    model : Model
        One of its models with that set.
    """
    if storeys.gravity is None or not storeys.gravity.any():
        return None
    if isinstance(model.lateral, Floors):
        floors = model.lateral
        return (floors if floors.loaded else replace(floors, gravity=storeys.gravity)).critical
    (direction,) = model.direction
    lateral, springs = set_of(storeys, stiffness).lateral[direction], springs_of(storeys, direction)
    return critical_load(lateral, storeys.storey_height, springs, above(storeys.gravity))


def gravity_of(storeys: Storeys) -> Array:
    """Gravity load of each level, (n,) [kN].

    Parameters
    ----------
    storeys : Storeys
        The building.

    Raises
    ------
    ModelError
        Its table has none.
    """
    if storeys.gravity is None:
        raise ModelError("gravity load", "not given", "must be given with second-order effects in the stiffness")
    return storeys.gravity
