"""Gravity loads in the stiffness: P-Δ as a geometric stiffness on the storey drifts, and the load that buckles.

A gravity load P at and above a storey of height h pushes with P/h times its drift: K_G = Bᵀ(P/h)B is taken from K.
With K = CᵀC and K_G = DᵀD, K - K_G = Cᵀ(I - XᵀX)C for X = D C⁻¹, and the smallest λ with K - λK_G singular is
1/σ², σ the largest singular value of X. Nothing is squared that need not be.

Sources
-------
S. P. Timoshenko, J. M. Gere, Theory of Elastic Stability, on energy methods; EN 1993-1-1:2005, 5.2.1, on α_cr (both
from memory).
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from scipy import linalg

from calcsheet.core.arrays import Array, agrees
from calcsheet.core.errors import ModelError


@dataclass(frozen=True)
class Critical:
    """The gravity load that buckles a model elastically.

    Parameters
    ----------
    factor : float
        Elastic critical load factor: what the gravity loads would have to be multiplied by.
    storey : int
        Storey, from 0 at the base, in which the loads do the most work as it buckles.
    load : float
        Gravity load at and above that storey [kN].
    """

    factor: float = field(metadata=agrees(rtol=1e-8))
    storey: int
    load: float = field(metadata=agrees(rtol=1e-12))


def critical(x: Array, load: Array) -> Critical:
    """Elastic critical load factor.

    Parameters
    ----------
    x : (r, N) array
        X = D C⁻¹, as many rows for each of the n storeys.
    load : (n,) array
        Gravity load at and above each storey, not all zero [kN].
    """
    last = x.shape[1] - 1
    square, shape = linalg.eigh(x.T @ x, subset_by_index=(last, last))  # the largest loses no digits when squared
    work = ((x @ shape) ** 2).reshape(load.size, -1).sum(axis=1)
    storey = int(np.argmax(work))
    return Critical(float(1.0 / square[0]), storey, float(load[storey]))


def softened(root: Array, x: Array) -> Array:
    """Square root of K - K_G, (N, N), upper triangular where that of K is.

    Parameters
    ----------
    root : (N, N) array
        C, square, with K = CᵀC.
    x : (r, N) array
        X = D C⁻¹ with K_G = DᵀD.

    Raises
    ------
    numpy.linalg.LinAlgError
        K - K_G is not positive definite: the model has buckled.
    """
    return linalg.cholesky(np.eye(root.shape[0]) - x.T @ x) @ root


def over(gravity_root: Array, root: Array) -> Array:
    """X = D C⁻¹, (r, N).

    Parameters
    ----------
    gravity_root : (r, N) array
        D.
    root : (N, N) array
        C, square.
    """
    return linalg.solve(root.T, gravity_root.T, check_finite=False).T


def refuse_buckled(found: Critical, names: tuple[str, ...]) -> None:
    """Refuse a model that its gravity load buckles.

    Parameters
    ----------
    found : Critical
        Its critical load.
    names : tuple of str
        Names of the levels, lowest first.

    Raises
    ------
    ModelError
        A factor that is not above 1, naming the storey.
    """
    if not found.factor > 1.0:
        raise ModelError(
            f'storey below level "{names[found.storey]}"',
            f"gravity load {found.load:g} kN with an elastic critical load factor of {found.factor:.3g}",
            "must be above 1 with second-order effects in the stiffness: the building buckles",
        )
