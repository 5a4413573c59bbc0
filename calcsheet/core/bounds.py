"""Bounds of the first frequency that need no eigenvalue: Rayleigh from above, Dunkerley from below."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from calcsheet.core.arrays import Array, Frozen, agrees
from calcsheet.core.model import Model
from calcsheet.core.totals import GRAVITY


@dataclass(frozen=True, eq=False)
class Bounds(Frozen):
    """Bounds of ω₁ and the static displacements that the upper one comes from.

    Parameters
    ----------
    displacement : (N,) array
        Displacements under forces M·ι·g, the weights applied sideways [m].
    work : float
        Σ f_i u_i, forces times displacements [kN·m].
    inertia : float
        Σ m_i u_i² [t·m²].
    rayleigh : float
        Upper bound of ω₁: Rayleigh quotient of those displacements [rad/s].
    dunkerley : float
        Lower bound of ω₁: (Σ m_i f_ii)^(-1/2) [rad/s].
    """

    displacement: Array = field(metadata=agrees(rtol=1e-9))
    work: float = field(metadata=agrees(rtol=1e-9))
    inertia: float = field(metadata=agrees(rtol=1e-9))
    rayleigh: float = field(metadata=agrees(rtol=1e-9))
    dunkerley: float = field(metadata=agrees(rtol=1e-9))


def rayleigh_quotient(model: Model, shape: Array) -> float:
    """φᵀKφ/φᵀMφ, at or above ω₁² [s^-2].

    Parameters
    ----------
    model : Model
        N degrees of freedom.
    shape : (N,) array
        Any shape φ but zero, to any scale.

    Notes
    -----
    R. W. Clough, J. Penzien, Dynamics of Structures, on Rayleigh's method (from memory).
    """
    return float(model.lateral.energy(shape[:, None])[0, 0] / (shape @ (model.mass * shape)))


def bounds(model: Model, gravity: float = GRAVITY) -> Bounds:
    """Bounds of the first circular frequency.

    Parameters
    ----------
    model : Model
        N degrees of freedom.
    gravity : float
        Acceleration of the sideways load [m/s²]; the bounds do not depend on it.

    Returns
    -------
    Bounds

    Notes
    -----
    ω₁² ≤ Σ f_i u_i / Σ m_i u_i² for the displacements u under forces f, the quotient uᵀKu/uᵀMu with Ku = f.
    ω₁⁻² ≤ Σ ω_n⁻² = tr(FM) (Dunkerley). R. W. Clough, J. Penzien, Dynamics of Structures, on Rayleigh's method;
    R. D. Blevins, Formulas for Natural Frequency and Mode Shape, on Dunkerley's (both from memory).
    """
    force = gravity * model.mass * model.influence.sum(axis=0)
    u = model.lateral.displacement(force[:, None])[:, 0]
    work, inertia = float(force @ u), float(u @ (model.mass * u))
    own = np.diag(model.lateral.displacement(np.eye(model.size)))
    return Bounds(
        displacement=u,
        work=work,
        inertia=inertia,
        rayleigh=float(np.sqrt(work / inertia)),
        dunkerley=float(1.0 / np.sqrt(own @ model.mass)),
    )
