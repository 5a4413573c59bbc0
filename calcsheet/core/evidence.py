"""Evidence that modes are what they are said to be, each figure with the limit it must keep."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from calcsheet.core.alternate import first_frequencies
from calcsheet.core.arrays import Array, agrees
from calcsheet.core.bounds import Bounds
from calcsheet.core.model import Model
from calcsheet.core.modes import Modes
from calcsheet.core.participation import Participation

BRACKET = 1e-8
"""Half-width, relative, of the bracket in which the Sturm count must find each frequency."""
SECOND_ROUTE = 8
"""Frequencies found again by the second route, at most."""


@dataclass(frozen=True)
class Evidence:
    """One figure of evidence.

    Parameters
    ----------
    key : str
        Short name, stable.
    what : str
        What is measured, in words.
    relation : str
        The measure as a formula.
    value : float
        The figure, 0 where all is exact.
    limit : float
        The largest figure accepted.
    within : bool
        Whether the figure keeps the limit.
    """

    key: str
    what: str
    relation: str
    value: float = field(metadata=agrees(below=1e-6))
    limit: float
    within: bool


def evidence_of_modes(model: Model, modes: Modes, bounds: Bounds) -> tuple[Evidence, ...]:
    """Evidence on frequencies and shapes.

    Parameters
    ----------
    model : Model
        N degrees of freedom.
    modes : Modes
        Its m modes.
    bounds : Bounds
        Bounds of the first frequency.

    Returns
    -------
    tuple of Evidence
        Orthogonality through M and K, residual, bounds, Sturm count, second route.

    Notes
    -----
    ψᵀKψ comes from the storey drifts and is divided by ω_i ω_j, pair by pair: a division by the largest ω² would hide
    an error of the first mode. The residual of a pair is the smaller of its stiffness and its flexibility form, each
    of which bounds the relative error of ω² (Parlett, The Symmetric Eigenvalue Problem, section 4.5, from memory).
    """
    m, psi, omega = model.mass[:, None], modes.psi, modes.omega
    unit = np.eye(omega.size)
    through_mass = np.abs(psi.T @ (m * psi) - unit).max()
    through_stiffness = np.abs(model.lateral.energy(psi) / np.outer(omega, omega) - unit).max()
    stiff = model.lateral.force(psi) / np.sqrt(m) / omega**2 - np.sqrt(m) * psi
    flexible = np.sqrt(m) * (model.lateral.displacement(m * psi) * omega**2 - psi)
    residual = np.minimum(np.linalg.norm(stiff, axis=0), np.linalg.norm(flexible, axis=0)).max()
    outside = max(bounds.dunkerley / omega[0] - 1.0, 1.0 - bounds.rayleigh / omega[0], 0.0)
    again = first_frequencies(model, min(omega.size, SECOND_ROUTE))
    apart = np.abs(again / omega[: again.size] - 1.0).max()
    return (
        _evidence("mass", "shapes orthogonal through the mass", "max |ψᵀMψ − I|", through_mass, 1e-10),
        _evidence(
            "stiffness", "shapes orthogonal through the stiffness", "max |ψᵢᵀKψⱼ/(ωᵢωⱼ) − I|", through_stiffness, 1e-8
        ),
        _evidence("residual", "residual of each pair", "max ‖Kψ − ω²Mψ‖/ω²", residual, 1e-8),
        _evidence("bounds", "first frequency between its bounds", "Dunkerley ≤ ω₁ ≤ Rayleigh", outside, 1e-10),
        _evidence(
            "sturm",
            "frequencies missed or doubled by the Sturm count",
            "count in ω(1 ± 10⁻⁸)",
            _miscounted(model, omega),
            0.0,
        ),
        _evidence(
            "second-route",
            f"second route: eigenvalues of the flexibility, modes 1 to {again.size}",
            "max |ω′/ω − 1|",
            apart,
            1e-8,
        ),
    )


def evidence_of_participation(part: Participation, kept: int, size: int) -> tuple[Evidence, ...]:
    """Evidence that effective masses add up: only where all modes are kept, else none.

    Parameters
    ----------
    part : Participation
        Participation in one direction.
    kept : int
        Number of modes kept.
    size : int
        Number of degrees of freedom.
    """
    if kept < size:
        return ()
    gap = abs(part.effective_mass.sum() / part.total_mass - 1.0)
    what = f"effective masses add up to the total mass, {part.direction}"
    return (_evidence(f"total-mass-{part.direction}", what, "|Σ effective mass / total − 1|", gap, 1e-10),)


def _miscounted(model: Model, omega: Array) -> float:
    """Number of bracket ends, below and above each frequency, where the inertia count differs from the list."""
    ends = np.concatenate([omega * (1.0 - BRACKET), omega * (1.0 + BRACKET)])
    counted = model.lateral.count_below(model.mass, ends)
    listed = np.searchsorted(omega, ends)
    wrong = counted != listed
    if omega.size < model.size:
        # a group that is cut by the number of modes kept has more members above
        last = ends > omega[-1]
        wrong &= ~(
            last & (counted > listed) & (model.lateral.count_below(model.mass, ends * (1 - 2 * BRACKET)) <= listed)
        )
    return float(wrong.sum())


def _evidence(key: str, what: str, relation: str, value: float, limit: float) -> Evidence:
    return Evidence(key, what, relation, float(value), limit, bool(value <= limit))
