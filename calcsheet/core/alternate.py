"""A second, independent route to the first frequencies: the largest eigenvalues of the flexibility."""

from __future__ import annotations

import numpy as np
from scipy import linalg
from scipy.sparse.linalg import LinearOperator, eigsh

from calcsheet.core.arrays import Array
from calcsheet.core.model import Model

DENSE_UP_TO = 200
"""Degrees of freedom up to which the whole flexibility matrix is formed."""
SPREAD = 1e-6
"""Share of the largest ω⁻² below which a value of this route has too few digits to confirm another."""


def first_frequencies(model: Model, count: int) -> Array:
    """First circular frequencies from F M ψ = ω⁻² ψ.

    Nothing of the first route is used. Column by column the flexibility is what the model displaces under unit
    forces; ω⁻² are the eigenvalues of M^(1/2) F M^(1/2), by a dense symmetric solver or, on larger models, by Lanczos
    iteration (each step is one inverse iteration: inertia forces of the last shape give the next).

    Parameters
    ----------
    model : Model
        N degrees of freedom.
    count : int
        Number of frequencies wanted, 1 to N.

    Returns
    -------
    (c,) array
        Ascending [rad/s]; c ≤ `count`, frequencies above 1000 times the first are left out.

    Notes
    -----
    K.-J. Bathe, Finite Element Procedures (1996), chapter 11, on inverse and Lanczos iteration (from memory).
    """
    root = np.sqrt(model.mass)[:, None]

    def swept(shapes: Array) -> Array:
        return root * model.lateral.displacement(root * shapes.reshape(model.size, -1))

    if model.size <= DENSE_UP_TO:
        squares = linalg.eigvalsh(swept(np.eye(model.size)), check_finite=False)[::-1][:count]
    else:
        operator = LinearOperator((model.size, model.size), matvec=swept, matmat=swept, dtype=float)
        squares = np.sort(eigsh(operator, k=count, v0=root[:, 0], return_eigenvectors=False))[::-1]
    return 1.0 / np.sqrt(squares[squares > SPREAD * squares[0]])
