"""A lateral stiffness K held through a square root: K = CᵀC.

Stick models and floors on lines of resistance lose half the digits of their first frequencies once K is formed, since
its largest frequency is ten thousand times the first and more. The circular frequencies are the singular values of
C·M^(-1/2): there the loss is the root of that.

Sources
-------
G. H. Golub, C. F. Van Loan, Matrix Computations, on singular values and the symmetric matrix [0 A; Aᵀ 0] (from memory).
B. N. Parlett, The Symmetric Eigenvalue Problem, on Sturm counts (from memory).
"""

from __future__ import annotations

from abc import ABC, abstractmethod

import numpy as np
from scipy import linalg
from scipy.linalg import lapack

from calcsheet.core.arrays import Array


class Rooted(ABC):
    """Lateral stiffness of n degrees of freedom through its square root."""

    @property
    @abstractmethod
    def root(self) -> Array:
        """Upper triangular C with CᵀC = K, (n, n)."""

    @property
    def size(self) -> int:
        """Number of degrees of freedom, n."""
        return int(self.root.shape[1])

    def modes(self, mass: Array, keep: int) -> tuple[Array, Array]:
        """First `keep` frequencies, (keep,) [rad/s], and mass-normalised shapes, (n, keep), for `mass`, (n,) [t]."""
        scale = np.sqrt(mass)
        _, values, rows = linalg.svd(self.root / scale, check_finite=False)
        return values[::-1][:keep], (rows[::-1][:keep] / scale).T

    def force(self, u: Array) -> Array:
        """Restoring forces Ku, (n, m) [kN], of displacements u, (n, m) [m]."""
        return self.root.T @ (self.root @ u)

    def displacement(self, f: Array) -> Array:
        """Displacements K⁻¹f, (n, m) [m], of forces f, (n, m) [kN]."""
        half = linalg.solve_triangular(self.root, f, trans="T", check_finite=False)
        return linalg.solve_triangular(self.root, half, check_finite=False)

    def energy(self, u: Array) -> Array:
        """Products uᵀKu, (m, m), of displacements u, (n, m)."""
        strain = self.root @ u
        return strain.T @ strain

    def count_below(self, mass: Array, omega: Array) -> Array:
        """Number of frequencies below each of `omega`, (s,) [rad/s], for `mass`, (n,) [t], by the Sturm sequence.

        It runs over the tridiagonal form of [0 A; Aᵀ 0], A = C·M^(-1/2), with eigenvalues ±ω.
        """
        scaled, n = self.root / np.sqrt(mass), self.size
        both = np.zeros((2 * n, 2 * n), order="F")
        both[:n, n:], both[n:, :n] = scaled, scaled.T
        work = int(lapack.dsytrd_lwork(2 * n, lower=1)[0])
        _, diagonal, off, _, _ = lapack.dsytrd(both, lower=1, lwork=work, overwrite_a=1)
        return negatives(diagonal, off, np.asarray(omega, dtype=float)) - float(n)


def negatives(diagonal: Array, off: Array, shift: Array) -> Array:
    """Number of eigenvalues of a symmetric tridiagonal matrix below each shift, by the signs of its pivots.

    Parameters
    ----------
    diagonal, off : (n,), (n - 1,) array
        The matrix.
    shift : (s,) array
        The shifts.

    Returns
    -------
    (s,) array
    """
    pivot = diagonal[0] - shift
    count = (pivot < 0.0).astype(float)
    with np.errstate(divide="ignore"):  # a pivot of exactly 0 gives an infinite one next: the count stays right
        for entry, square in zip(diagonal[1:].tolist(), (off**2).tolist(), strict=True):
            pivot = (entry - shift) - square / pivot
            count += pivot < 0.0
    return count
