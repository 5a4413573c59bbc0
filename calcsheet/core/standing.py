"""A planar model on springs at its base, with its gravity load in the stiffness.

The base moves by u₀ and turns by θ₀ under the whole building, without mass: levels move by u₀ + θ₀h beside their own
displacement. Both are condensed out. Gravity loads act on the drifts, which springs at the base are part of.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import ClassVar

import numpy as np
from scipy import linalg

from calcsheet.core.arrays import Array, Frozen
from calcsheet.core.chain import Chain
from calcsheet.core.condense import condensed
from calcsheet.core.lateral import Lateral
from calcsheet.core.planar import Planar, drifts
from calcsheet.core.rooted import Rooted
from calcsheet.core.second_order import Critical, critical, over, refuse_buckled, softened
from calcsheet.core.springs import BaseSprings


@dataclass(frozen=True, eq=False)
class Standing(Rooted, Planar, Frozen):
    """Lateral stiffness of a planar model on base springs, less its geometric stiffness.

    Parameters
    ----------
    lateral : Chain, StiffnessMatrix, FlexibilityMatrix or Stick
        The building on a fixed base, n levels.
    storey_height : (n,) array
        Height of each storey [m].
    springs : BaseSprings
        The springs.
    load : (n,) array
        Gravity load at and above each storey [kN]; zero where it is not in the stiffness.
    """

    lateral: Lateral
    storey_height: Array
    springs: BaseSprings
    load: Array
    kind: ClassVar[str] = "on springs"

    @property
    def size(self) -> int:
        """Number of degrees of freedom, n."""
        return self.lateral.size

    @property
    def asymmetry(self) -> float:
        """Largest |A - Aᵀ| over the largest |A| of the matrix given."""
        return self.lateral.asymmetry

    @cached_property
    def whole_root(self) -> Array:
        """C of the levels, then of the base's movement and turning where they have springs, without gravity load."""
        c, n = self.lateral.root, self.size
        modes = [(self.springs.translation, np.ones(n)), (self.springs.rocking, np.cumsum(self.storey_height))]
        given = [(k, rigid) for k, rigid in modes if k is not None]
        top = np.hstack([c, *(-(c @ rigid)[:, None] for _, rigid in given)])
        foot = np.hstack([np.zeros((len(given), n)), np.diag(np.sqrt([k for k, _ in given]))])
        return np.vstack([top, foot])

    @cached_property
    def gravity_root(self) -> Array:
        """D with the geometric stiffness DᵀD of the same degrees of freedom, (n, N)."""
        d = np.zeros((self.size, self.whole_root.shape[1]))
        d[:, : self.size] = drifts(np.eye(self.size))
        if self.springs.translation is not None:
            d[0, self.size] = -1.0
        return np.sqrt(self.load / self.storey_height)[:, None] * d

    @cached_property
    def root(self) -> Array:
        """Upper triangular C with CᵀC = K, (n, n), the base condensed out."""
        whole = softened(self.whole_root, self._pushed) if self.load.any() else self.whole_root
        return condensed(whole, range(self.size))

    def critical(self) -> Critical:
        """Elastic critical load factor of the load, which may not be all zero."""
        return critical(self._pushed, self.load)

    @cached_property
    def _pushed(self) -> Array:
        return over(self.gravity_root, self.whole_root)

    def displacement(self, f: Array) -> Array:
        """Displacements K⁻¹f, (n, m) [m], of forces f, (n, m) [kN]: from the flexibility, not from the root."""
        moved = self._flexible(np.vstack([f, np.zeros((1, f.shape[1]))]))
        if self.load.any():
            moved = linalg.lu_solve(self._amplifier, moved, check_finite=False)
        return moved[:-1]

    def drift(self, u: Array) -> Array:
        """Storey drifts, (n, m), of displacements u, (n, m): the base's movement is none, its turning is part of them."""
        found = drifts(u)
        if self.springs.translation is not None:
            found[0] -= self.force(u).sum(axis=0) / self.springs.translation
        return found

    def _flexible(self, f: Array) -> Array:
        """Displacements of the levels and, last, of the base, (n + 1, m), of forces there, without gravity load."""
        height = np.cumsum(self.storey_height)
        moved = np.zeros((1, f.shape[1]))
        if self.springs.translation is not None:
            moved = f.sum(axis=0, keepdims=True) / self.springs.translation
        u = self.lateral.displacement(f[:-1]) + moved
        if self.springs.rocking is not None:
            u = u + np.outer(height, height @ f[:-1]) / self.springs.rocking
        return np.vstack([u, moved])

    @cached_property
    def _amplifier(self) -> tuple[Array, Array]:
        """LU factors of I - F K_G, over levels and base."""
        d = np.eye(self.size, self.size + 1) - np.eye(self.size, self.size + 1, k=-1)
        d[0, -1] = -1.0
        geometric = d.T @ ((self.load / self.storey_height)[:, None] * d)
        return linalg.lu_factor(np.eye(self.size + 1) - self._flexible(geometric))


def standing(
    lateral: Lateral, storey_height: Array, springs: BaseSprings, load: Array | None, names: Sequence[str]
) -> Lateral | Standing:
    """A lateral stiffness with base springs and gravity load.

    Parameters
    ----------
    lateral : Chain, StiffnessMatrix, FlexibilityMatrix or Stick
        The building on a fixed base.
    storey_height : (n,) array
        Height of each storey [m].
    springs : BaseSprings
        Springs at its base.
    load : (n,) array or None
        Gravity load at and above each storey [kN]; None where it is not in the stiffness.
    names : sequence of str
        Names of the levels, lowest first.

    Returns
    -------
    Chain, StiffnessMatrix, FlexibilityMatrix, Stick or Standing
        The chain stays one, of stiffnesses k - P/h, and keeps its solver.

    Raises
    ------
    ModelError
        Its gravity load buckles it: the storey is named.
    """
    loaded = load is not None and bool(load.any())
    if springs.fixed and not loaded:
        return lateral
    held = Standing(lateral, storey_height, springs, np.zeros(lateral.size) if load is None else load)
    if loaded:
        refuse_buckled(held.critical(), tuple(names))
    if springs.fixed and isinstance(lateral, Chain):
        return Chain(lateral.storey - held.load / storey_height)
    return held


def critical_load(lateral: Lateral, storey_height: Array, springs: BaseSprings, load: Array) -> Critical | None:
    """Elastic critical load factor of a building, None without any load.

    Parameters
    ----------
    lateral, storey_height, springs
        As `standing` takes them.
    load : (n,) array
        Gravity load at and above each storey [kN].
    """
    return Standing(lateral, storey_height, springs, load).critical() if load.any() else None
