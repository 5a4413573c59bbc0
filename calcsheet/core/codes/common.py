"""What editions share: static forces by height, ratio of base shears, stability, soft storeys and heavy levels."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from calcsheet.core.arrays import Array
from calcsheet.core.codes.edition import Facts, Relation, Value
from calcsheet.core.errors import ModelError

SAME = 1e-6
"""Relative difference up to which two storeys count as equal: stiffness is a quotient of combined values."""


def by_height(facts: Facts, shear: float, power: float) -> Array:
    """Static forces F_i = V w_i h_i^k / Σ w h^k.

    Parameters
    ----------
    facts : Facts
        The building, n levels.
    shear : float
        Base shear V [kN].
    power : float
        Exponent k.

    Returns
    -------
    (n,) array
        In kN, lowest level first.
    """
    share = facts.weight * facts.height**power
    return shear * share / share.sum()


def at_top(facts: Facts, shear: float, power: float, symbol: str, clause: str) -> Relation:
    """How the static force at the top level comes about, heights being taken over that of the top level.

    Parameters
    ----------
    facts : Facts
        The building, n levels.
    shear : float
        Base shear V [kN].
    power : float
        Exponent k.
    symbol : str
        The exponent as the relation shows it, such as "^k".
    clause : str
        Its source.
    """
    reduced = float((facts.weight * (facts.height / facts.top) ** power).sum())
    values = (Value(shear, "force"), Value(float(facts.weight[-1]), "force"), Value(reduced, "force"))
    force = Value(float(by_height(facts, shear, power)[-1]), "force")
    relation = f"F_n = V w_n / Σ w (h/h_n){symbol}"
    return Relation("Static force at the top level", relation, "{0} × {1} / {2}", values, force, clause)


def up_to_static(static: float, modal: float) -> float:
    """Static over modal base shear, at least 1: what brings modal forces up to the static base shear.

    Parameters
    ----------
    static, modal : float
        Base shears [kN].

    Raises
    ------
    ModelError
        A modal base shear that is not above 0.
    """
    if not modal > 0.0:
        raise ModelError("modal base shear", f"{modal:g} kN", "must be above 0 to be scaled")
    return max(1.0, static / modal)


def stability(gravity: Array, drift: Array, shear: Array, storey_height: Array, in_stiffness: bool = False) -> Array:
    """Stability coefficient θ = P Δ/(V h) of each storey.

    Parameters
    ----------
    gravity : (n,) array
        Gravity load P at and above each storey [kN].
    drift : (n,) array
        Drift Δ of each storey [m].
    shear : (n,) array
        Shear V of each storey, of the same set as the drift [kN].
    storey_height : (n,) array
        h [m].
    in_stiffness : bool
        The drift holds second-order effects: θ has no bound of its own, the stiffness has been found to hold its load.

    Returns
    -------
    (n,) array
        Lowest storey first.

    Raises
    ------
    ModelError
        A storey without shear, or one at θ ≥ 1, where its gravity load exceeds what its stiffness can hold.
    """
    if not (shear > 0.0).all():
        i = int(np.argmin(shear > 0.0))
        raise ModelError(
            f"shear of storey {i + 1} from the base", f"{shear[i]:g} kN", "must be above 0 for θ = P Δ/(V h)"
        )
    theta = gravity * drift / (shear * storey_height)
    if not in_stiffness and not (theta < 1.0).all():
        i = int(np.argmin(theta < 1.0))
        raise ModelError(
            f"stability coefficient of storey {i + 1} from the base",
            f"{theta[i]:.3g}",
            "must be below 1: the storey cannot carry its gravity load",
        )
    return theta


def amplified(theta: Array, ignore_up_to: float) -> Array:
    """1/(1 - θ) where θ is above the value up to which second-order effects are ignored, else 1.

    Parameters
    ----------
    theta : (n,) array
        Stability coefficients, below 1.
    ignore_up_to : float
        Value up to which the effect is ignored.
    """
    return np.where(theta > ignore_up_to, 1.0 / (1.0 - theta), 1.0)


def closest(period: Array) -> float:
    """Largest ratio T_j/T_i of neighbouring periods, T_j ≤ T_i; 0 for one mode.

    Parameters
    ----------
    period : (m,) array
        Periods, longest first [s].
    """
    return float((period[1:] / period[:-1]).max(initial=0.0))


def softer(stiffness: Array, of_next: float, of_three: float | None = None) -> list[int]:
    """Storeys, from 0 at the base, softer than a share of the one above or of the mean of the three above.

    Parameters
    ----------
    stiffness : (n,) array
        Storey stiffnesses, lowest first.
    of_next : float
        Share of the stiffness of the storey above.
    of_three : float, optional
        Share of the mean stiffness of the three storeys above; not asked of a storey with fewer above it.
    """
    found = []
    for i in range(stiffness.size - 1):
        least = of_next * stiffness[i + 1]
        if of_three is not None and i + 3 < stiffness.size:
            least = max(least, of_three * stiffness[i + 1 : i + 4].mean())
        if stiffness[i] < least * (1.0 - SAME):
            found.append(i)
    return found


def heavier(weight: Array, times: float) -> list[int]:
    """Levels, from 0, heavier than a multiple of a neighbour; a roof lighter than the floor below counts for nothing.

    Parameters
    ----------
    weight : (n,) array
        Weights, lowest first.
    times : float
        The multiple.
    """
    last = weight.size - 1
    found = []
    for i in range(weight.size):
        beside = [j for j in (i - 1, i + 1) if 0 <= j <= last and not (j == last and weight[last] < weight[i])]
        if any(weight[i] > times * weight[j] * (1.0 + SAME) for j in beside):
            found.append(i)
    return found


def listed(levels: Sequence[int], what: str) -> str:
    """Storeys or levels in words, counted from 1 at the base.

    Parameters
    ----------
    levels : sequence of int
        Counted from 0.
    what : str
        "storey" or "level".
    """
    if not levels:
        return f"no {what}"
    numbers = ", ".join(str(i + 1) for i in levels)
    return f"{what}{'s' if len(levels) > 1 else ''} {numbers} from the base"
