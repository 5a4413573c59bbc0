"""What lateral models of one translation a level share."""

from __future__ import annotations

from abc import ABC, abstractmethod

import numpy as np

from calcsheet.core.arrays import Array


def drifts(u: Array) -> Array:
    """Storey drifts u_i - u_(i-1), (n, m); the base does not move.

    Parameters
    ----------
    u : (n, m) array
        Displacements, lowest level first.
    """
    return np.diff(u, axis=0, prepend=np.zeros((1, *u.shape[1:])))


def above(f: Array) -> Array:
    """Sums at and above each level, (n, …): storey shears, where the values are forces.

    Parameters
    ----------
    f : (n, …) array
        Values of the levels, lowest first.
    """
    return np.cumsum(f[::-1], axis=0)[::-1]


class Planar(ABC):
    """One translation a level, lowest first."""

    @abstractmethod
    def force(self, u: Array) -> Array:
        """Restoring forces Ku, (n, m) [kN], of displacements u, (n, m) [m]."""

    def drift(self, u: Array) -> Array:
        """Storey drifts, (n, m), of displacements u, (n, m)."""
        return drifts(u)

    def storey_energy(self, u: Array) -> Array:
        """Storey shear times difference of the levels' displacements, (n, m), of displacements u, (n, m).

        The sum is uᵀKu. In a model with bending one storey's product can be negative; the lowest storey's includes what
        springs at the base take.
        """
        return above(self.force(u)) * drifts(u)
