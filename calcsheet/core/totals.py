"""Sums of a storey table: mass, weight, height, and how far neighbouring storeys differ."""

from __future__ import annotations

from dataclasses import dataclass, field

from calcsheet.core.alongside import at_and_above
from calcsheet.core.arrays import Array, Frozen, agrees
from calcsheet.core.storeys import Storeys

GRAVITY = 9.80665
"""Standard acceleration of gravity [m/s²] (ISO 80000-3)."""


@dataclass(frozen=True, eq=False)
class Totals(Frozen):
    """Sums over the levels above the effective base.

    Parameters
    ----------
    mass : float
        Total mass [t].
    weight : float
        Total weight [kN].
    mass_below : float
        Mass listed at or below the effective base, outside every share [t].
    height : float
        Height of the top level above the effective base [m].
    mass_above : (n,) array
        Mass at and above each level [t].
    weight_of_level : (n,) array
        Weight of each level [kN].
    weight_per_area : (n,) array or None
        Weight over floor area of each level [kN/m²]; None where no area is given.
    """

    mass: float = field(metadata=agrees(rtol=1e-12))
    weight: float = field(metadata=agrees(rtol=1e-12))
    mass_below: float = field(metadata=agrees(rtol=1e-12))
    height: float = field(metadata=agrees(rtol=1e-12))
    mass_above: Array = field(metadata=agrees(rtol=1e-12))
    weight_of_level: Array = field(metadata=agrees(rtol=1e-12))
    weight_per_area: Array | None = field(metadata=agrees(rtol=1e-12))


def totals(storeys: Storeys) -> Totals:
    """Sums of a storey table.

    Parameters
    ----------
    storeys : Storeys
        n levels above the effective base.

    Returns
    -------
    Totals
    """
    above = at_and_above(storeys.mass)
    return Totals(
        mass=float(above[0]),
        weight=float(above[0]) * GRAVITY,
        mass_below=float(sum(level.mass for level in storeys.below)),
        height=float(storeys.elevation[-1] - storeys.base_elevation),
        mass_above=above,
        weight_of_level=storeys.mass * GRAVITY,
        weight_per_area=None if storeys.area is None else storeys.mass * GRAVITY / storeys.area,
    )
