"""Participation of modes in a movement of the base: factors, effective masses and heights, modes needed."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from calcsheet.core.arrays import Array, Frozen, agrees
from calcsheet.core.errors import ModelError
from calcsheet.core.model import Model
from calcsheet.core.modes import TIE, Modes

SINGLE = 0.05
"""Effective mass share from which a single mode is counted as significant (EN 1998-1:2004, 4.3.3.3.1(3))."""


@dataclass(frozen=True, eq=False)
class Participation(Frozen):
    """Participation of m modes in one direction of excitation.

    Parameters
    ----------
    direction : str
        Direction of excitation.
    omega, period : (m,) array
        Circular frequency [rad/s] and period [s] of each mode.
    total_mass : float
        ιᵀMι, the mass that the direction moves [t].
    gamma : (m,) array
        Γ = ψᵀMι/ψᵀMψ of the mass-normalised shapes [t^1/2].
    gamma_roof : (m,) array
        Γψ at the top level: the factor of the shape scaled to 1 there.
    effective_mass : (m,) array
        (ψᵀMι)²/ψᵀMψ [t].
    share : (m,) array
        Effective mass over total mass.
    cumulative : (m,) array
        Running sum of the shares.
    effective_height : (m,) array
        Base moment over base shear of each mode's inertia forces [m]; negative where the two oppose.
    target : float
        Share of the total mass to be reached.
    needed : int or None
        Number of modes, from the first, whose shares reach the target, repeated ones counted together; None where
        those kept do not.
    significant : tuple of int
        Modes, from 1, with a share above `SINGLE`; repeated ones share theirs.
    first_excitation, first_mass : float
        φᵀMι and φᵀMφ of the main mode's shape scaled to 1 at the top level [t]; both 0 where the top does not move, or
        the shape is one choice of many.
    main : int
        Main mode of the direction, from 0: the first of a planar model, that of the largest effective mass where one model
        moves in several directions.
    """

    direction: str
    omega: Array = field(metadata=agrees(rtol=1e-9))
    period: Array = field(metadata=agrees(rtol=1e-9))
    total_mass: float = field(metadata=agrees(rtol=1e-12))
    gamma: Array = field(metadata=agrees(group="omega", squared=True, atol=1e-8))
    gamma_roof: Array = field(metadata=agrees(group="omega", atol=1e-7))
    effective_mass: Array = field(metadata=agrees(group="omega", rtol=1e-8))
    share: Array = field(metadata=agrees(group="omega", atol=1e-9))
    cumulative: Array = field(metadata=agrees(group="omega", running=True, atol=1e-8))
    effective_height: Array = field(metadata=agrees(group="omega", weight="effective_mass", atol=1e-7))
    target: float
    needed: int | None
    significant: tuple[int, ...]
    first_excitation: float = field(metadata=agrees(rtol=1e-7))
    first_mass: float = field(metadata=agrees(rtol=1e-7))
    main: int = 0


def participation(model: Model, modes: Modes, direction: str, target: float = 0.9) -> Participation:
    """Participation of the modes in one direction.

    Parameters
    ----------
    model : Model
        The model.
    modes : Modes
        Its modes, m of them.
    direction : str
        One of the model's directions.
    target : float
        Share of the total mass to be reached, above 0 and at most 1.

    Returns
    -------
    Participation

    Raises
    ------
    ModelError
        A target outside (0, 1].

    Notes
    -----
    With L = ψᵀMι: Γ = L/M_n, effective mass L²/M_n, effective height Σ h m ψ / L, M_n = ψᵀMψ = 1.
    A. K. Chopra, Dynamics of Structures, section 13.2 (from memory).
    """
    if not 0.0 < target <= 1.0:
        raise ModelError("target share of the mass", f"{target:g}", "must be above 0 and at most 1")
    iota = model.influence[model.direction.index(direction)]
    weighted = (model.mass * iota)[:, None] * modes.psi
    gamma = weighted.sum(axis=0)
    moment = (model.height[np.asarray(model.level_of)][:, None] * weighted).sum(axis=0)
    total = float(iota @ (model.mass * iota))
    effective = gamma**2
    share = effective / total
    cumulative = np.cumsum(share)
    together = share.copy()
    last = np.arange(1, share.size + 1)
    for group in modes.repeated:
        members = slice(group[0] - 1, group[-1])
        together[members] = share[members].sum()
        last[members] = group[-1]
    reached = last[cumulative >= target * (1.0 - 1e-12)]
    top = int(np.flatnonzero(iota)[-1])
    main = int(np.argmax(together)) if len(model.direction) > 1 else 0
    at_top = modes.psi[top, main]
    alone = not any(main + 1 in group for group in modes.repeated)
    moves = alone and abs(at_top) > TIE * np.abs(modes.psi[:, main]).max()
    return Participation(
        direction=direction,
        omega=modes.omega,
        period=modes.period,
        total_mass=total,
        gamma=gamma,
        gamma_roof=gamma * modes.psi[top],
        effective_mass=effective,
        share=share,
        cumulative=cumulative,
        effective_height=np.divide(moment, gamma, out=np.zeros_like(gamma), where=gamma != 0.0),
        target=target,
        needed=int(reached[0]) if reached.size else None,
        significant=tuple(int(i) + 1 for i in np.flatnonzero(together > SINGLE)),
        first_excitation=float(gamma[main] / at_top) if moves else 0.0,
        first_mass=float(1.0 / at_top**2) if moves else 0.0,
        main=main,
    )
