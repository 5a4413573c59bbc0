"""Lateral flexibilities from the stored numbers alone, by statics: for the second route.

Sources
-------
Principle of virtual forces (S. P. Timoshenko and J. M. Gere, Mechanics of Materials, from memory).
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


def standing_flexibility(given: Mapping[str, Any], lateral: Mapping[str, Any], direction: str) -> Array:
    """Flexibility matrix, (n, n) [m/kN], of a stored direction on its base springs, gravity loads included if they count.

    The displacements of levels and base under unit forces are F̂; gravity loads P push storeys sideways by P/h times their
    drift, so that F̂ becomes (I - F̂ DᵀP/hD)⁻¹F̂ with the drifts D of levels over base.

    Parameters
    ----------
    given : mapping
        Inputs of the storeys.
    lateral : mapping
        The stored lateral stiffness.
    direction : str
        "x" or "y".
    """
    height, load = heights(given), counted_load(given)
    moved, turned = base_flexibility(given, direction)
    above_base = np.append(np.cumsum(height), 0.0)
    whole: Array = np.zeros((height.size + 1, height.size + 1))
    whole[:-1, :-1] = flexibility(lateral)
    whole += moved + turned * np.outer(above_base, above_base)
    if load.any():
        drift = np.eye(height.size, height.size + 1) - np.eye(height.size, height.size + 1, k=-1)
        drift[0, -1] = -1.0
        pushed = drift.T @ ((load / height)[:, None] * drift)
        whole = np.array(np.linalg.solve(np.eye(height.size + 1) - whole @ pushed, whole), dtype=float)
    return whole[:-1, :-1]


def heights(given: Mapping[str, Any]) -> Array:
    """Height of the storey below each level, (n,) [m]."""
    return np.diff(np.array(given["elevation"], dtype=float), prepend=given["base_elevation"])


def counted_load(given: Mapping[str, Any]) -> Array:
    """Gravity load at and above each storey that is in the stiffness, (n,) [kN]; zero where none is."""
    if not given.get("second_order"):
        return np.zeros(len(given["elevation"]))
    return np.cumsum(np.array(given["gravity"], dtype=float)[::-1])[::-1]


def base_flexibility(given: Mapping[str, Any], direction: str) -> tuple[float, float]:
    """Movement [m/kN] and turning [rad/kN·m] of the base under a unit force and a unit moment."""
    springs = given.get("springs", {}).get(direction, {})
    moved, turned = (springs.get(name) for name in ("translation", "rocking"))
    return 1.0 / moved if moved else 0.0, 1.0 / turned if turned else 0.0


def flexibility(lateral: Mapping[str, Any]) -> Array:
    """Flexibility matrix, (n, n) [m/kN], of a stored lateral stiffness on a fixed base.

    In a storey chain a force at a level strains the storeys below it alone: F_ij is the sum of 1/k over those that levels
    i and j both stand on. In a cantilever stick each of these storeys adds ∫(z_i - z)(z_j - z)dz/EI + h/GA_s; the
    integrand is a parabola, which Simpson's rule integrates exactly.
    """
    if lateral["kind"] == "storey chain":
        climbed = np.cumsum(1.0 / np.array(lateral["storey"], dtype=float))
        n = np.arange(climbed.size)
        return climbed[np.minimum(n[:, None], n[None, :])]
    if lateral["kind"] == "cantilever stick":
        return _stick(lateral)
    given = np.array(lateral["matrix"], dtype=float)
    given = (given + given.T) / 2.0
    return np.linalg.inv(given) if lateral["kind"] == "stiffness matrix" else given


def _stick(lateral: Mapping[str, Any]) -> Array:
    height, bending = (np.array(lateral[name], dtype=float) for name in ("storey_height", "bending"))
    sheared = np.zeros(height.size) if lateral["shear"] is None else height / np.array(lateral["shear"], dtype=float)
    top = np.cumsum(height)
    found = np.zeros((height.size, height.size))
    for k, h in enumerate(height):
        arms = [(weight, top[k:] - top[k] + share * h) for weight, share in ((1, 1.0), (4, 0.5), (1, 0.0))]
        bent = sum(weight * np.outer(arm, arm) for weight, arm in arms) * h / 6.0
        found[k:, k:] += bent / bending[k] + sheared[k]
    return found
