"""Lateral stiffness or flexibility given as a matrix, one translation a level.

A flexibility is used as it is, through F M ψ = ω⁻²ψ, and never inverted.

Sources
-------
B. N. Parlett, "The Symmetric Eigenvalue Problem" (1980), on inertia counts and residual bounds (from memory).
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import ClassVar, Self

import numpy as np
from scipy import linalg, sparse
from scipy.sparse.linalg import eigsh

from calcsheet.core.arrays import Array, Frozen
from calcsheet.core.errors import ModelError
from calcsheet.core.given import Given
from calcsheet.core.planar import Planar

ASYMMETRY_LIMIT = 1e-3
"""Largest |A - Aᵀ| over the largest |A| that is still taken as rounding of a symmetric matrix."""
DENSE_UP_TO = 400
"""Degrees of freedom above which few modes are found by sparse shift-invert."""


@dataclass(frozen=True, eq=False)
class _Matrix(Planar, Frozen):
    matrix: Array
    kind: ClassVar[str]
    quantity: ClassVar[str]
    columns: ClassVar[tuple[Given, ...]] = ()

    @classmethod
    def of(cls, columns: Mapping[str, Array | None], storey_height: Array) -> Self:
        """A matrix from `columns` by field; `storey_height` is not used."""
        assert columns["matrix"] is not None
        return cls(columns["matrix"])

    def __post_init__(self) -> None:
        super().__post_init__()
        a = self.matrix
        if a.ndim != 2 or a.shape[0] != a.shape[1] or a.size == 0:
            raise ModelError(
                self.quantity, f"an array of shape {a.shape}", "must be square, a row and a column a level"
            )
        if not np.isfinite(a).all():
            i, j = np.argwhere(~np.isfinite(a))[0] + 1
            raise ModelError(f"{self.quantity}, entry ({i}, {j}) from the base", f"{a[i - 1, j - 1]}", "must be finite")
        if self.asymmetry > ASYMMETRY_LIMIT:
            i, j = np.unravel_index(np.argmax(np.abs(a - a.T)), a.shape)
            raise ModelError(
                f"{self.quantity}, entries ({i + 1}, {j + 1}) and ({j + 1}, {i + 1}) from the base",
                f"{a[i, j]:g} and {a[j, i]:g}",
                f"must be equal within {ASYMMETRY_LIMIT:g} of the largest entry",
            )
        if (np.diag(a) <= 0.0).any():
            i = int(np.argmax(np.diag(a) <= 0.0))
            raise ModelError(
                f"{self.quantity}, entry ({i + 1}, {i + 1}) from the base",
                f"{a[i, i]:g}",
                "must be above 0: a force moves its own level its own way",
            )
        try:
            linalg.cholesky(self.symmetric)
        except linalg.LinAlgError:
            raise ModelError(
                self.quantity,
                "a matrix that is not positive definite",
                "every displacement must meet resistance (no mechanism)",
            ) from None

    @property
    def size(self) -> int:
        """Number of degrees of freedom, n."""
        return int(self.matrix.shape[0])

    @property
    def asymmetry(self) -> float:
        """Largest |A - Aᵀ| over the largest |A|."""
        return float(np.abs(self.matrix - self.matrix.T).max() / (np.abs(self.matrix).max() or 1.0))

    @property
    def symmetric(self) -> Array:
        """The symmetric part, ½(A + Aᵀ), (n, n)."""
        return 0.5 * (self.matrix + self.matrix.T)

    def energy(self, u: Array) -> Array:
        """Products uᵀKu, (m, m), of displacements u, (n, m)."""
        return u.T @ self.force(u)


@dataclass(frozen=True, eq=False)
class StiffnessMatrix(_Matrix):
    """Lateral stiffness matrix K.

    Parameters
    ----------
    matrix : (n, n) array
        Force at a level for unit displacement of another, lowest level first [kN/m].

    Raises
    ------
    ModelError
        Not square, not finite, unsymmetric beyond `ASYMMETRY_LIMIT`, or not positive definite.
    """

    kind: ClassVar[str] = "stiffness matrix"
    quantity: ClassVar[str] = "lateral stiffness matrix [kN/m]"
    table: ClassVar[str] = "stiffness"

    def times(self, factor: float) -> StiffnessMatrix:
        """The same with every stiffness times `factor`."""
        return StiffnessMatrix(self.matrix * factor)

    @property
    def root(self) -> Array:
        """Upper triangular C with CᵀC = K, (n, n)."""
        return linalg.cholesky(self.symmetric)

    def modes(self, mass: Array, keep: int) -> tuple[Array, Array]:
        """First `keep` frequencies, (keep,) [rad/s], and mass-normalised shapes, (n, keep), for `mass`, (n,) [t]."""
        root = np.sqrt(mass)
        scaled = self.symmetric / root[:, None] / root
        if self.size > DENSE_UP_TO and keep * 4 < self.size:
            squares, shapes = eigsh(sparse.csc_matrix(scaled), k=keep, sigma=0.0, v0=root)
            order = np.argsort(squares)
            squares, shapes = squares[order], shapes[:, order]
        else:
            squares, shapes = linalg.eigh(scaled, subset_by_index=(0, keep - 1))
        return np.sqrt(squares), shapes / root[:, None]

    def force(self, u: Array) -> Array:
        """Restoring forces Ku, (n, m) [kN], of displacements u, (n, m) [m]."""
        return self.symmetric @ u

    def displacement(self, f: Array) -> Array:
        """Displacements K⁻¹f, (n, m) [m], of forces f, (n, m) [kN]."""
        return linalg.cho_solve(linalg.cho_factor(self.symmetric), f)

    def count_below(self, mass: Array, omega: Array) -> Array:
        """Number of frequencies below each of `omega`, (s,) [rad/s], for `mass`, (n,) [t]: inertia of K - ω²M."""
        root = np.sqrt(mass)
        scaled = self.symmetric / root[:, None] / root
        return np.array([_negative(scaled - w * w * np.eye(self.size)) for w in omega], dtype=float)


@dataclass(frozen=True, eq=False)
class FlexibilityMatrix(_Matrix):
    """Lateral flexibility matrix F.

    Parameters
    ----------
    matrix : (n, n) array
        Displacement of a level for unit force at another, lowest level first [m/kN].

    Raises
    ------
    ModelError
        Not square, not finite, unsymmetric beyond `ASYMMETRY_LIMIT`, or not positive definite.
    """

    kind: ClassVar[str] = "flexibility matrix"
    quantity: ClassVar[str] = "lateral flexibility matrix [m/kN]"
    table: ClassVar[str] = "flexibility"

    def times(self, factor: float) -> FlexibilityMatrix:
        """The same with every stiffness times `factor`."""
        return FlexibilityMatrix(self.matrix / factor)

    @property
    def root(self) -> Array:
        """Lower triangular C with CᵀC = F⁻¹, (n, n)."""
        return linalg.solve_triangular(linalg.cholesky(self.symmetric, lower=True), np.eye(self.size), lower=True)

    def modes(self, mass: Array, keep: int) -> tuple[Array, Array]:
        """First `keep` frequencies, (keep,) [rad/s], and mass-normalised shapes, (n, keep), for `mass`, (n,) [t]."""
        n, root = self.size, np.sqrt(mass)
        scaled = self.symmetric * root[:, None] * root
        if n > DENSE_UP_TO and keep * 4 < n:
            inverse, shapes = eigsh(scaled, k=keep, which="LA", v0=root)
            order = np.argsort(inverse)[::-1]
        else:
            inverse, shapes = linalg.eigh(scaled, subset_by_index=(n - keep, n - 1))
            order = np.arange(keep)[::-1]
        return 1.0 / np.sqrt(inverse[order]), shapes[:, order] / root[:, None]

    def force(self, u: Array) -> Array:
        """Restoring forces f with Ff = u, (n, m) [kN], of displacements u, (n, m) [m]."""
        return linalg.cho_solve(linalg.cho_factor(self.symmetric), u)

    def displacement(self, f: Array) -> Array:
        """Displacements Ff, (n, m) [m], of forces f, (n, m) [kN]."""
        return self.symmetric @ f

    def count_below(self, mass: Array, omega: Array) -> Array:
        """Number of frequencies below each of `omega`, (s,) [rad/s], for `mass`, (n,) [t].

        It is the inertia of ω⁻²I - M^(1/2)FM^(1/2).
        """
        root = np.sqrt(mass)
        scaled = self.symmetric * root[:, None] * root
        return np.array([_negative(np.eye(self.size) / (w * w) - scaled) for w in omega], dtype=float)


def _negative(a: Array) -> int:
    """Number of negative eigenvalues of a symmetric matrix, from its LDLᵀ factors (Sylvester's law of inertia)."""
    _, d, _ = linalg.ldl(a)
    return int((linalg.eigvalsh_tridiagonal(np.diag(d), np.diag(d, -1)) < 0).sum())
