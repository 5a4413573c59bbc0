"""Degrees of freedom without mass, condensed out exactly.

A stiffness K = CᵀC is held through a square root C, so that nothing is squared. Turned to upper triangular form with
the degrees of freedom to be left out first,

    C = Q [R₁₁ R₁₂; 0 R₂₂],

the forces there are zero where R₁₁ u₁ = -R₁₂ u₂, and what is left is R₂₂ᵀR₂₂ = K₂₂ - K₂₁ K₁₁⁻¹ K₁₂.

Sources
-------
R. J. Guyan, "Reduction of stiffness and mass matrices", AIAA Journal 3 (1965); exact where no mass is left out (from
memory). G. H. Golub, C. F. Van Loan, Matrix Computations, on QR factors and Schur complements (from memory).
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from scipy import linalg

from calcsheet.core.arrays import Array
from calcsheet.core.errors import ModelError

RIGID = 1e-12
"""A diagonal entry of the triangular root below this share of its column is a movement that meets no resistance."""


def condensed(root: Array, keep: Sequence[int], names: Sequence[str] | None = None) -> Array:
    """Square root of the stiffness of the degrees of freedom kept, the others being free of force.

    Parameters
    ----------
    root : (r, N) array
        C with K = CᵀC.
    keep : sequence of int
        The k degrees of freedom kept, from 0, in the order wanted.
    names : sequence of str, optional
        Name of each degree of freedom, for messages; its number, from 1, where omitted.

    Returns
    -------
    (k, k) array
        Upper triangular R with RᵀR the condensed stiffness.

    Raises
    ------
    ModelError
        A mechanism: a movement that meets no resistance, named by its degree of freedom.
    """
    kept = list(keep)
    left = [i for i in range(root.shape[1]) if i not in set(kept)]
    order = left + kept
    rows = np.vstack([root[:, order], np.zeros((max(len(order) - root.shape[0], 0), len(order)))])
    (triangle,) = linalg.qr(rows, mode="r", check_finite=False)
    triangle = triangle[: len(order)]
    diagonal, size = np.abs(np.diag(triangle)), np.linalg.norm(root[:, order], axis=0)
    loose = ~(diagonal > RIGID * size)
    if loose.any():
        dof = order[int(np.argmax(loose))]
        name = names[dof] if names is not None else f"degree of freedom {dof + 1}"
        raise ModelError(f"lateral stiffness, {name}", "a mechanism", "every displacement must meet resistance")
    return triangle[len(left) :, len(left) :]
