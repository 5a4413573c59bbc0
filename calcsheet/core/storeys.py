"""What a storey table says, in core units (m, kN, t), from the effective base up."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from calcsheet.core.arrays import Array, Frozen
from calcsheet.core.lateral import Lateral
from calcsheet.core.springs import BaseSprings


@dataclass(frozen=True, eq=False)
class LevelBelow:
    """A level at or below the effective base: listed, outside the model and its mass shares.

    Parameters
    ----------
    level : str
        Name of the level.
    elevation : float
        Elevation [m].
    mass : float
        Mass [t], 0 or above.
    """

    level: str
    elevation: float
    mass: float


@dataclass(frozen=True)
class PlanLine:
    """Where a line of resistance runs in the plan.

    Parameters
    ----------
    name : str
        Its name.
    x, y : float
        A point on it [m].
    angle : float
        Its direction, from x towards y [rad].
    """

    name: str
    x: float
    y: float
    angle: float


@dataclass(frozen=True, eq=False)
class Plan(Frozen):
    """The plan of floors that are rigid in it.

    Parameters
    ----------
    centre : (n, 2) array
        Centre of mass of each level [m].
    gyration : (n,) array
        Radius of gyration of each level's mass about it [m].
    lines : tuple of PlanLine
        The lines of resistance.
    extent : (n, 4) array or None
        Each floor from and to in x, from and to in y [m]; None where it is not given.
    """

    centre: Array
    gyration: Array
    lines: tuple[PlanLine, ...]
    extent: Array | None = None


@dataclass(frozen=True, eq=False)
class StiffnessSet:
    """A named set of lateral stiffnesses with the ground it stands on.

    Parameters
    ----------
    name : str
        Name of the set, such as "cracked".
    ground : str
        Why these values: the engineer's words.
    lateral : mapping of str to Chain, StiffnessMatrix, FlexibilityMatrix or Stick
        Lateral stiffness by direction, "x" and "y" (one or both); of rigid floors by line of resistance.
    """

    name: str
    ground: str
    lateral: Mapping[str, Lateral]


@dataclass(frozen=True, eq=False)
class Storeys:
    """A building as its storey table gives it.

    Parameters
    ----------
    base : str
        Name of the effective base: a level's name, or "base" for the foot of the lowest storey.
    base_elevation : float
        Elevation of the effective base [m].
    level : tuple of str
        Levels above the effective base, lowest first, n of them.
    elevation : (n,) array
        Elevation of each level [m].
    storey_height : (n,) array
        Height of the storey below each level [m].
    mass : (n,) array
        Mass of each level [t].
    below : tuple of LevelBelow
        Levels at or below the effective base, lowest first.
    stiffness : tuple of StiffnessSet
        The named sets.
    forces, drifts : str
        Names of the sets that serve forces and drifts.
    given : {"mass", "weight", "take-off"}
        What the table gave, the other follows from it; or that the masses come from the mass take-off.
    gravity : (n,) array or None
        Gravity load of each level for second-order effects [kN]; None where the table has none.
    area : (n,) array or None
        Floor area of each level [m²]; None where the table has none.
    springs : mapping of str to BaseSprings
        Springs at the base by direction; a direction without any is fixed.
    second_order : bool
        Whether the gravity loads are in the stiffness.
    plan : Plan or None
        The plan of rigid floors; None where each direction is planar.
    """

    base: str
    base_elevation: float
    level: tuple[str, ...]
    elevation: Array
    storey_height: Array
    mass: Array
    below: tuple[LevelBelow, ...]
    stiffness: tuple[StiffnessSet, ...]
    forces: str
    drifts: str
    given: str = "mass"
    gravity: Array | None = None
    area: Array | None = None
    springs: Mapping[str, BaseSprings] = field(default_factory=dict)
    second_order: bool = False
    plan: Plan | None = None
