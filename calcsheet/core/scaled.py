"""A building with all its masses and stiffnesses multiplied."""

from __future__ import annotations

from dataclasses import replace

from calcsheet.core.chain import Chain
from calcsheet.core.matrix import FlexibilityMatrix, StiffnessMatrix
from calcsheet.core.storeys import Lateral, Storeys


def scaled(storeys: Storeys, mass: float, stiffness: float) -> Storeys:
    """Return a building with its masses and stiffnesses multiplied, gravity loads as they are.

    Parameters
    ----------
    storeys : Storeys
        The building.
    mass, stiffness : float
        Factors above 0, on the masses above the effective base and on all sets of stiffnesses.
    """
    sets = (
        replace(given, lateral={d: _scaled(lateral, stiffness) for d, lateral in given.lateral.items()})
        for given in storeys.stiffness
    )
    return replace(storeys, mass=storeys.mass * mass, stiffness=tuple(sets))


def _scaled(lateral: Lateral, factor: float) -> Lateral:
    if isinstance(lateral, Chain):
        return Chain(storey=lateral.storey * factor)
    if isinstance(lateral, StiffnessMatrix):
        return StiffnessMatrix(matrix=lateral.matrix * factor)
    return FlexibilityMatrix(matrix=lateral.matrix / factor)
