"""The storey chain: one translation a level, each storey a spring between two levels.

With the storey stiffnesses k and the drift matrix B (Bu)_i = u_i - u_(i-1), the lateral stiffness is K = BᵀkB, and
the circular frequencies are the singular values of the bidiagonal factor √k·B·M^(-1/2). Each is found to full
relative accuracy, whatever the ratio of the stiffnesses, since the factor's entries carry it and the algorithms used
keep it.

Sources
-------
J. W. Demmel, W. Kahan, "Accurate singular values of bidiagonal matrices", SIAM J. Sci. Stat. Comput. 11 (1990)
(from memory).
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import ClassVar

import numpy as np
from scipy import linalg

from calcsheet.core.arrays import Array, Frozen, positive
from calcsheet.core.given import Given
from calcsheet.core.planar import drifts

FEW = 4
"""Bisection serves where fewer than one mode in FEW is kept …"""
MANY = 100
"""… of a chain with more than MANY storeys."""


@dataclass(frozen=True, eq=False)
class Chain(Frozen):
    """Lateral stiffness of a storey chain.

    Parameters
    ----------
    storey : (n,) array
        Stiffness of each storey, lowest first [kN/m].

    Raises
    ------
    ModelError
        A stiffness that is not finite and above zero, by its number from the base.
    """

    storey: Array
    kind: ClassVar[str] = "storey chain"
    asymmetry: ClassVar[float] = 0.0
    columns: ClassVar[tuple[Given, ...]] = (Given("storey", "stiffness"),)
    table: ClassVar[str] = ""

    def __post_init__(self) -> None:
        object.__setattr__(self, "storey", positive(self.storey, "storey stiffness [kN/m]"))

    @classmethod
    def of(cls, columns: Mapping[str, Array | None], storey_height: Array) -> Chain:
        """A chain from its `columns` by field; `storey_height` is not used."""
        assert columns["storey"] is not None
        return cls(columns["storey"])

    def times(self, factor: float) -> Chain:
        """The same with every stiffness times `factor`."""
        return Chain(self.storey * factor)

    @property
    def size(self) -> int:
        """Number of degrees of freedom, n."""
        return int(self.storey.size)

    @property
    def root(self) -> Array:
        """C = √k·B with CᵀC = K, (n, n)."""
        return np.sqrt(self.storey)[:, None] * drifts(np.eye(self.size))

    def modes(self, mass: Array, keep: int) -> tuple[Array, Array]:
        """Frequencies and mass-normalised shapes of the first modes.

        Parameters
        ----------
        mass : (n,) array
            Mass of each level [t].
        keep : int
            Number of modes, at most n.

        Returns
        -------
        omega : (keep,) array
            Circular frequencies, ascending [rad/s].
        psi : (n, keep) array
            Shapes with ψᵀMψ = I [t^-1/2].
        """
        if self.size > MANY and keep * FEW < self.size:
            omega, shapes = self._bisected(mass, keep)
            # inverse iteration can leave clustered vectors short of orthogonal; the singular values then decide
            if np.abs(shapes.T @ shapes - np.eye(keep)).max() < 1e-11:
                return omega, shapes / np.sqrt(mass)[:, None]
        diagonal, above = self._factor(mass)
        _, values, rows = linalg.svd(
            np.diag(diagonal) + np.diag(above, 1), lapack_driver="gesvd", check_finite=False, overwrite_a=True
        )
        return values[::-1][:keep], (rows[::-1, ::-1][:keep] / np.sqrt(mass)).T

    def _factor(self, mass: Array) -> tuple[Array, Array]:
        """Diagonal and superdiagonal of √k·B·M^(-1/2), roof first (which makes it upper bidiagonal)."""
        k, m = self.storey[::-1], mass[::-1]
        return np.sqrt(k / m), -np.sqrt(k[:-1] / m[1:])

    def _golub_kahan(self, mass: Array) -> Array:
        """Off-diagonal, (2n - 1,), of the Golub-Kahan tridiagonal: zero diagonal, eigenvalues ±ω."""
        off = np.empty(2 * self.size - 1)
        off[0::2], off[1::2] = self._factor(mass)
        return off

    def _bisected(self, mass: Array, keep: int) -> tuple[Array, Array]:
        """First frequencies, and unit vectors M^(1/2)ψ, of the Golub-Kahan tridiagonal by bisection."""
        n = self.size
        omega, vectors = linalg.eigh_tridiagonal(
            np.zeros(2 * n),
            self._golub_kahan(mass),
            select="i",
            select_range=(n, n + keep - 1),
            lapack_driver="stebz",
            tol=2.0 * np.finfo(float).tiny,  # asks bisection for relative accuracy
            check_finite=False,
        )
        shapes = vectors[0::2][::-1]
        return omega, shapes / np.linalg.norm(shapes, axis=0)

    def drift(self, u: Array) -> Array:
        """Storey drifts (Bu), (n, …), of displacements u, (n, …)."""
        return drifts(u)

    def force(self, u: Array) -> Array:
        """Restoring forces Ku, (n, m) [kN], of displacements u, (n, m) [m]."""
        force = self.storey[:, None] * self.drift(u)
        force[:-1] -= force[1:]  # storey shears, less those of the storeys above
        return force

    def displacement(self, f: Array) -> Array:
        """Displacements K⁻¹f, (n, m) [m], of forces f, (n, m) [kN]: sums only, no cancellation for positive f."""
        shear = np.cumsum(f[::-1], axis=0)[::-1]
        return np.cumsum(shear / self.storey[:, None], axis=0)

    def energy(self, u: Array) -> Array:
        """Products uᵀKu, (m, m), of displacements u, (n, m), from the storey drifts."""
        strain = np.sqrt(self.storey)[:, None] * self.drift(u)
        return strain.T @ strain

    def storey_energy(self, u: Array) -> Array:
        """k_i·drift_i² of each storey, (n, m), of displacements u, (n, m)."""
        return self.storey[:, None] * self.drift(u) ** 2

    def count_below(self, mass: Array, omega: Array) -> Array:
        """Number of frequencies below each of `omega`, (s,) [rad/s], for `mass`, (n,) [t], by the Sturm sequence.

        The sequence runs over the Golub-Kahan tridiagonal, so that its counts too are right to relative accuracy.
        """
        shift = np.asarray(omega, dtype=float)
        pivots = np.empty((2 * self.size, shift.size))
        pivots[0] = -shift
        with np.errstate(divide="ignore"):  # a pivot of exactly 0 gives -inf next: the count stays right
            for i, square in enumerate((-(self._golub_kahan(mass) ** 2)).tolist()):
                np.divide(square, pivots[i], out=pivots[i + 1])
                pivots[i + 1] -= shift
        return (pivots < 0.0).sum(axis=0) - float(self.size)
