"""Peak values of modes combined: SRSS, CQC, absolute sum, and absolute within close groups."""

from __future__ import annotations

from typing import Literal

import numpy as np
from numpy.typing import ArrayLike

from calcsheet.core.arrays import Array
from calcsheet.core.errors import ModelError

Rule = Literal["SRSS", "CQC", "absolute", "grouped"]
RULES: tuple[Rule, ...] = ("SRSS", "CQC", "absolute", "grouped")
GROUPED = 0.10
"""Modes whose frequencies differ by up to this share of the lower are close (IS 1893 (Part 1):2016, 7.7.5.3, from memory)."""


def correlation(omega: Array, damping: ArrayLike, rule: Rule) -> Array:
    """Correlation of the modes' peak responses.

    Parameters
    ----------
    omega : (m,) array
        Circular frequencies, in any order [rad/s].
    damping : float or (m,) array_like
        Damping ratio of all modes, or of each; above 0 and below 1.
    rule : {"SRSS", "CQC", "absolute", "grouped"}
        Rule of combination. For the last two the entries are 1 where absolute values are added; a close group goes on as
        long as neighbours are close, so that more is added rather than less.

    Returns
    -------
    (m, m) array
        Symmetric, 1 on the diagonal.

    Raises
    ------
    ModelError
        A damping ratio outside (0, 1), or an unknown rule.

    Notes
    -----
    CQC with ratios ξ_i, ξ_j and r = ω_j/ω_i:
    ρ = 8 √(ξ_i ξ_j)(ξ_i + r ξ_j) r^1.5 / ((1 - r²)² + 4 ξ_i ξ_j r (1 + r²) + 4 (ξ_i² + ξ_j²) r²).
    A. Der Kiureghian (1981); E. L. Wilson, A. Der Kiureghian, E. P. Bayo (1981), Earthquake Engineering and Structural
    Dynamics 9 (from memory).
    """
    if rule not in RULES:
        raise ModelError("rule of combination", f'got "{rule}"', f"must be {', '.join(RULES[:-1])} or {RULES[-1]}")
    size = omega.size
    xi = np.broadcast_to(np.asarray(damping, dtype=float), (size,))
    outside = ~((xi > 0.0) & (xi < 1.0))
    if outside.any():
        raise ModelError("damping ratio", f"got {xi[np.argmax(outside)]:g}", "must be above 0 and below 1")
    if rule == "SRSS":
        return np.eye(size)
    if rule == "absolute":
        return np.ones((size, size))
    if rule == "grouped":
        order = np.argsort(omega)
        ascending = omega[order]
        group = np.empty(size)
        group[order] = np.cumsum(np.concatenate([[0], np.diff(ascending) > GROUPED * ascending[:-1]]))
        return (group[:, None] == group[None, :]).astype(float)
    a, b, r = xi[:, None], xi[None, :], omega[None, :] / omega[:, None]
    top = 8.0 * np.sqrt(a * b) * (a + r * b) * r**1.5
    return top / ((1.0 - r**2) ** 2 + 4.0 * a * b * r * (1.0 + r**2) + 4.0 * (a**2 + b**2) * r**2)


def combined(peaks: Array, related: Array, rule: Rule) -> Array:
    """Peaks of the modes combined, each quantity from its own modal values.

    Parameters
    ----------
    peaks : (k, m) array
        Signed modal peaks of k quantities.
    related : (m, m) array
        Their correlation by the same rule.
    rule : {"SRSS", "CQC", "absolute", "grouped"}
        Rule of combination: "absolute" and "grouped" add absolute values where modes are related.

    Returns
    -------
    (k,) array
        At or above 0.
    """
    values = np.abs(peaks) if rule in ("absolute", "grouped") else peaks
    # rounding may leave a little less than 0 where modes cancel
    return np.sqrt(np.maximum(((values @ related) * values).sum(axis=1), 0.0))
