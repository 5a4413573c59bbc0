"""What a building's floors and storeys carry: loads with their places, and masses with places of their own."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from calcsheet.core.arrays import Array, Frozen

PERMANENT, VARIABLE = KINDS = ("permanent", "variable")
"""Kinds of load."""


@dataclass(frozen=True)
class Place:
    """Where the loads of one kind are.

    Parameters
    ----------
    storey : bool
        They stand in a storey: half to the level above, half to the level below.
    edge : bool
        They run along the floor's edge; else they are spread over the floor.
    amount : {"area", "length"}
        What says how much of them there is.
    value : {"area load", "unit weight"}
        What their value is.
    """

    storey: bool
    edge: bool
    amount: str = "area"
    value: str = "area load"


PLACES: Mapping[str, Place] = {
    "floor": Place(storey=False, edge=False),
    "parapet": Place(storey=False, edge=True),
    "façade": Place(storey=True, edge=True, amount="length"),
    "walls": Place(storey=True, edge=False, amount="length"),
    "columns": Place(storey=True, edge=False, value="unit weight"),
}
"""The places of loads, by name."""


@dataclass(frozen=True)
class Load:
    """A load.

    Parameters
    ----------
    name : str
        Its name.
    kind : {"permanent", "variable"}
        Its kind.
    place : str
        A key of `PLACES`.
    value : float
        Load per area [kN/m²]; of columns, their unit weight [kN/m³].
    share : float or None
        The share of it that the masses hold, 0 to 1; None where no share is stated, which counts as 0.
    clause : str
        The clause that asks for the share; may be empty.
    """

    name: str
    kind: str
    place: str
    value: float
    share: float | None
    clause: str

    @property
    def counted(self) -> float:
        """The value that the masses hold [kN/m² or kN/m³]."""
        return self.value * (self.share or 0.0)


@dataclass(frozen=True)
class OtherMass:
    """A mass with a place of its own: plant, a tank, a stair.

    Parameters
    ----------
    level : str
        The level that carries it.
    name : str
        What it is.
    weight : float
        Its weight [kN].
    x, y : float
        Its centre in the plan [m].
    plan_x, plan_y : float
        Its sides [m]; 0 for a point.
    """

    level: str
    name: str
    weight: float
    x: float
    y: float
    plan_x: float
    plan_y: float


@dataclass(frozen=True, eq=False)
class Floors(Frozen):
    """What a building's floors and storeys carry, the lowest of n levels first.

    Parameters
    ----------
    level : tuple of str
        The levels.
    below : int
        How many of them lie at or below the effective base.
    storey_height : (n,) array
        Height of the storey below each level [m].
    area : (n,) array
        Floor area [m²].
    plan_x, plan_y : (n,) array
        Sides of the rectangle that stands for the floor [m].
    centre_x, centre_y : (n,) array
        Centre of the floor in the plan [m].
    own_radius : tuple of float or None
        Radius of gyration of the floor about its centre [m]; None: that of the rectangle.
    load : tuple of Load
        L loads.
    amount : (n, L) array
        How much of each load: area on the level [m²], length of façade or walls [m] or section of columns [m²] in
        the storey below it.
    other : tuple of OtherMass
        Masses with places of their own.
    stated : (n,) array or None
        Masses that the storey table states by itself [t]; None where it states none.
    unused : tuple of str
        What the tables hold that isn't known, a sentence each.
    """

    level: tuple[str, ...]
    below: int
    storey_height: Array
    area: Array
    plan_x: Array
    plan_y: Array
    centre_x: Array
    centre_y: Array
    own_radius: tuple[float | None, ...]
    load: tuple[Load, ...]
    amount: Array
    other: tuple[OtherMass, ...]
    stated: Array | None = None
    unused: tuple[str, ...] = ()
