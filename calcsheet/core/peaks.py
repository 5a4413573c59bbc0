"""Modal peaks under a response spectrum: forces, storey shears, overturning moments, displacements, drifts."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from calcsheet.core.arrays import Array, Frozen, agrees
from calcsheet.core.errors import ModelError
from calcsheet.core.model import Model
from calcsheet.core.modes import Modes
from calcsheet.core.participation import Participation
from calcsheet.core.planar import above


@dataclass(frozen=True, eq=False)
class Peaks(Frozen):
    """Signed modal peaks in one direction, a column a mode; a last column for the residual where modes are left out.

    Parameters
    ----------
    ordinate : (m,) array
        Pseudo-acceleration of each column [m/s²].
    force : (L, m) array
        Lateral force at each level [kN].
    shear : (L, m) array
        Shear of the storey below each level [kN].
    moment : (L, m) array
        Overturning moment at the foot of the storey below each level, of the shear held [kN·m].
    displacement : (L, m) array
        Displacement of each level [m].
    drift : (L, m) array
        Drift of the storey below each level [m].
    residual : bool
        Whether the last column is the residual.
    held : (L, m) array or None
        Shear that the frames of each storey hold [kN]: that of the forces, and with gravity loads in the stiffness P/h
        times the drift besides; None where it is that of the forces.
    """

    ordinate: Array = field(metadata=agrees(rtol=1e-8))
    force: Array = field(metadata=agrees(rtol=1e-6, atol=1e-6))
    shear: Array = field(metadata=agrees(rtol=1e-6, atol=1e-6))
    moment: Array = field(metadata=agrees(rtol=1e-6, atol=1e-6))
    displacement: Array = field(metadata=agrees(rtol=1e-6, atol=1e-9))
    drift: Array = field(metadata=agrees(rtol=1e-6, atol=1e-9))
    residual: bool
    held: Array | None = field(default=None, metadata=agrees(rtol=1e-6, atol=1e-6))


def peaks(
    model: Model, modes: Modes, part: Participation, ordinate: Array, residual_ordinate: float | None = None
) -> Peaks:
    """Modal peaks of every quantity.

    Parameters
    ----------
    model : Model
        The model.
    modes : Modes
        Its modes, m of them.
    part : Participation
        Their participation in the direction of excitation.
    ordinate : (m,) array
        Pseudo-acceleration at each mode's period [m/s²].
    residual_ordinate : float, optional
        Pseudo-acceleration that the masses move with which the modes kept do not; no residual where omitted [m/s²].

    Returns
    -------
    Peaks

    Raises
    ------
    ModelError
        As many ordinates as modes are not given, or one is not finite and at or above 0.

    Notes
    -----
    f_n = Γ_n M ψ_n Sa_n and u_n = Γ_n ψ_n Sa_n/ω_n², of which those along the direction are given;
    the residual's force is M(ι - Σ Γ_n ψ_n) Sa_r, applied statically.
    A. K. Chopra, Dynamics of Structures, sections 13.2 and 13.7 (from memory).
    """
    u, acting, ordinates = responses(model, modes, part, ordinate, residual_ordinate)
    force, drift = (model.along(part.direction, values) for values in (acting, model.lateral.drift(u)))
    shear = above(force)
    pushed = model.gravity_shear(u)
    held = None if pushed is None else shear + model.along(part.direction, pushed)
    storey = np.diff(model.height, prepend=0.0)[:, None]
    return Peaks(
        ordinate=ordinates,
        force=force,
        shear=shear,
        moment=above((shear if held is None else held) * storey),
        displacement=model.along(part.direction, u),
        drift=drift,
        residual=residual_ordinate is not None,
        held=held,
    )


def responses(
    model: Model, modes: Modes, part: Participation, ordinate: Array, residual_ordinate: float | None = None
) -> tuple[Array, Array, Array]:
    """Displacements and forces of every degree of freedom, a column a mode, and one for the residual.

    Parameters
    ----------
    model, modes, part, ordinate, residual_ordinate
        As `peaks` takes them.

    Returns
    -------
    u : (N, m) array
        Displacements [m, rad].
    acting : (N, m) array
        Forces [kN, kN·m].
    ordinates : (m,) array
        Pseudo-acceleration of each column [m/s²].

    Raises
    ------
    ModelError
        As `peaks`.
    """
    if ordinate.shape != modes.omega.shape:
        raise ModelError("ordinates", f"{ordinate.size} given", f"must be {modes.omega.size}, one a mode")
    for value in (*ordinate, 0.0 if residual_ordinate is None else residual_ordinate):
        if not 0.0 <= value < np.inf:
            raise ModelError("ordinate", f"got {value:g} m/s²", "must be finite and at or above 0")
    shapes = part.gamma * modes.psi
    u = shapes * ordinate / modes.omega**2
    acting = model.mass[:, None] * shapes * ordinate
    if residual_ordinate is not None:
        iota = model.influence[model.direction.index(part.direction)]
        left = (model.mass * (iota - shapes.sum(axis=1)) * residual_ordinate)[:, None]
        acting = np.hstack([acting, left])
        u = np.hstack([u, model.lateral.displacement(left)])
        ordinate = np.append(ordinate, residual_ordinate)
    return u, acting, ordinate
