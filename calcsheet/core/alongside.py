"""What stands beside the given columns of a storey table while it is typed: sums from the roof down, ratios, elevations.

A level that isn't known yet (NaN) leaves open what depends on it, and nothing else.
"""

from __future__ import annotations

import numpy as np

from calcsheet.core.arrays import Array


def elevations(height: Array, foot: float) -> Array:
    """Return the elevation of each level [m], lowest first.

    Parameters
    ----------
    height : (n,) array
        Height of the storey below each level [m].
    foot : float
        Elevation of the foot of the lowest storey [m].
    """
    return foot + np.cumsum(height)


def heights(elevation: Array, foot: float) -> Array:
    """Return the height of the storey below each level [m], lowest first.

    Parameters
    ----------
    elevation : (n,) array
        Elevation of each level [m].
    foot : float
        Elevation of the foot of the lowest storey [m].
    """
    return np.diff(elevation, prepend=foot)


def at_and_above(values: Array) -> Array:
    """Return the sum of a quantity over each level and those above it, lowest first.

    Parameters
    ----------
    values : (n,) array
        Masses, weights or loads of the levels.
    """
    return np.cumsum(values[::-1])[::-1]


def to_level_below(values: Array) -> Array:
    """Return each level's value over that of the level below it, lowest first; NaN for the lowest.

    Parameters
    ----------
    values : (n,) array
        Masses of the levels.
    """
    ratios = np.full(len(values), np.nan)
    with np.errstate(divide="ignore", invalid="ignore"):  # a level without mass has no ratio
        ratios[1:] = values[1:] / values[:-1]
    return np.where(np.isfinite(ratios), ratios, np.nan)
