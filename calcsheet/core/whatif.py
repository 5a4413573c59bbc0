"""What if every mass, or every stiffness of a direction, were another: the whole model multiplied, and solved anew."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from functools import partial

from calcsheet.core.arrays import Array, Frozen
from calcsheet.core.basis import Basis
from calcsheet.core.errors import ModelError
from calcsheet.core.model import Model, models_of
from calcsheet.core.modes import Modes, modes_of
from calcsheet.core.participation import Participation, participation
from calcsheet.core.peaks import peaks
from calcsheet.core.response import combine, left_over, related
from calcsheet.core.storeys import Storeys


@dataclass(frozen=True, eq=False)
class Answered(Frozen):
    """What a building answers in one direction.

    Parameters
    ----------
    direction : str
        "x" or "y".
    period : (m,) array
        Period of each mode [s].
    share : (m,) array
        Effective mass of each mode over the mass that the direction moves.
    base_shear : float or None
        Combined modal base shear, unscaled [kN]; None without a demand.
    """

    direction: str
    period: Array
    share: Array
    base_shear: float | None


def multiplied(storeys: Storeys, mass: float, stiffness: str, along: Mapping[str, float]) -> Storeys:
    """The building with every mass and every lateral stiffness of one set multiplied.

    Parameters
    ----------
    storeys : Storeys
        The building.
    mass : float
        Factor on the mass of each level.
    stiffness : str
        Name of the stiffness set; the others stay as they are.
    along : mapping of str to float
        Factor on that set's stiffnesses by direction; 1 where a direction is left out.

    Returns
    -------
    Storeys
        Gravity loads and floor areas stay as they are.

    Raises
    ------
    ModelError
        Rigid floors, or a factor that leaves a mass or stiffness not finite and above 0.
    """
    if storeys.plan is not None:
        raise ModelError("what-if", "rigid floors", "must be a planar model")
    sets = tuple(
        replace(s, lateral={d: lateral.times(along.get(d, 1.0)) for d, lateral in s.lateral.items()})
        if s.name == stiffness
        else s
        for s in storeys.stiffness
    )
    return replace(storeys, mass=storeys.mass * mass, stiffness=sets)


def answered(storeys: Storeys, stiffness: str, keep: int | None, basis: Basis | None) -> tuple[Answered, ...]:
    """Periods, effective-mass shares and the modal base shear of a building in each direction.

    Parameters
    ----------
    storeys : Storeys
        The building.
    stiffness : str
        Name of the stiffness set.
    keep : int or None
        Number of modes in each direction; all with None.
    basis : Basis or None
        Edition, rule of combination and residual of the demand; no base shear with None.

    Returns
    -------
    tuple of Answered
        x before y.

    Raises
    ------
    ModelError
        A model that can't be solved, or a period outside of the edition's spectrum.

    Notes
    -----
    The base shear is Σ f_n = M*_n S_a(T_n) of each mode, combined by the basis's rule: A. K. Chopra, Dynamics of
    Structures, section 13.7 (from memory).
    """
    found = []
    for model in models_of(storeys, stiffness):
        modes = modes_of(model, None if keep is None else min(keep, model.size))
        for direction in model.direction:
            part = participation(model, modes, direction)
            shear = None if basis is None else _base_shear(model, modes, part, basis)
            found.append(Answered(direction, modes.period, part.share, shear))
    return tuple(found)


def _base_shear(model: Model, modes: Modes, part: Participation, basis: Basis) -> float:
    edition, kept = basis.edition, modes.period.size
    ordinates = partial(edition.ordinates, part.direction)
    rest = left_over(ordinates, basis.residual, float(modes.period[-1]), kept, model.size)
    found = peaks(model, modes, part, ordinates(modes.period), rest)
    correlated = related(modes, basis.combination, edition.damping().value, found.residual)
    return float(combine(found, correlated, basis.combination).shear[0])
