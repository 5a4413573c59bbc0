"""Response spectrum analysis of one direction: correlation of modes and combined values; nothing scaled."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field

import numpy as np

from calcsheet.core.arrays import Array, Frozen, agrees
from calcsheet.core.codes.edition import Facts
from calcsheet.core.combine import Rule, combined, correlation
from calcsheet.core.model import Model
from calcsheet.core.modes import Modes
from calcsheet.core.peaks import Peaks
from calcsheet.core.plan import plan_facts
from calcsheet.core.rigidfloors import Floors
from calcsheet.core.totals import GRAVITY

PEAK = agrees(rtol=1e-6, atol=1e-9)


@dataclass(frozen=True, eq=False)
class Combined(Frozen):
    """Peaks combined, each quantity from its own modal values; unscaled, at the edition's force level.

    Parameters
    ----------
    force, shear, moment, displacement, drift : (n,) array
        As in `Peaks`, lowest level or storey first [kN, kN, kN·m, m, m].
    held : (n,) array or None
        As in `Peaks` [kN].
    """

    force: Array = field(metadata=PEAK)
    shear: Array = field(metadata=PEAK)
    moment: Array = field(metadata=PEAK)
    displacement: Array = field(metadata=PEAK)
    drift: Array = field(metadata=PEAK)
    held: Array | None = field(default=None, metadata=PEAK)


def related(modes: Modes, rule: Rule, damping: float, residual: bool) -> Array:
    """Correlation of the columns of `Peaks`, (m, m): the residual is related to no mode, but adds to absolute sums.

    Parameters
    ----------
    modes : Modes
        The modes.
    rule : {"SRSS", "CQC", "absolute", "grouped"}
        Rule of combination.
    damping : float
        Damping ratio for CQC.
    residual : bool
        Whether a last column holds the residual.
    """
    found = correlation(modes.omega, damping, rule)
    if not residual:
        return found
    beside = np.full((1, found.shape[0]), 1.0 if rule == "absolute" else 0.0)
    return np.block([[found, beside.T], [beside, np.ones((1, 1))]])


def combine(found: Peaks, correlated: Array, rule: Rule) -> Combined:
    """All quantities of `Peaks` combined.

    Parameters
    ----------
    found : Peaks
        Signed modal peaks.
    correlated : (m, m) array
        Correlation of their columns.
    rule : {"SRSS", "CQC", "absolute", "grouped"}
        Rule of combination.
    """
    held = None if found.held is None else combined(found.held, correlated, rule)
    return Combined(
        force=combined(found.force, correlated, rule),
        shear=combined(found.shear, correlated, rule),
        moment=combined(found.moment, correlated, rule),
        displacement=combined(found.displacement, correlated, rule),
        drift=combined(found.drift, correlated, rule),
        held=held,
    )


def facts_of(
    model: Model,
    period: float,
    direction: str,
    *,
    share_of_three: float | None = None,
    other_period: float | None = None,
) -> Facts:
    """What the checklist may ask about a model in one direction.

    Parameters
    ----------
    model : Model
        The model.
    period : float
        First period [s].
    direction : str
        "x" or "y".
    share_of_three : float, optional
        Share of the mass in the first three modes.
    other_period : float, optional
        First period in the other direction [s].
    """
    return Facts(
        direction=direction,
        period=period,
        height=model.height,
        storey_height=np.diff(model.height, prepend=0.0),
        weight=model.level_mass * GRAVITY,
        share_of_three=share_of_three,
        other_period=other_period,
        plan=plan_facts(model.lateral, direction) if isinstance(model.lateral, Floors) else None,
    )


def left_over(
    ordinates: Callable[[Array], Array], choice: str, last_period: float, kept: int, size: int
) -> float | None:
    """Ordinate for what the modes kept leave out, None where nothing is left out or the choice is "none".

    Parameters
    ----------
    ordinates : callable
        Ordinates [m/s²] at periods [s].
    choice : {"last ordinate", "zero period", "none"}
        The ordinate at the last period kept, or the one at period 0, which a design spectrum has reduced already.
    last_period : float
        Last period kept [s].
    kept, size : int
        Modes kept and degrees of freedom.
    """
    if kept == size or choice == "none":
        return None
    at = 0.0 if choice == "zero period" else last_period
    return float(ordinates(np.array([at]))[0])
