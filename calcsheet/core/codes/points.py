"""A design spectrum as given points, with no code behind it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import ClassVar

import numpy as np

from calcsheet.core.arrays import Array
from calcsheet.core.codes.common import closest
from calcsheet.core.codes.edition import (
    NOT_HERE,
    Answer,
    Edition,
    Factor,
    Facts,
    Relation,
    Scaling,
    Screen,
    SecondOrder,
    Static,
    Value,
    key,
)
from calcsheet.core.combine import Rule
from calcsheet.core.errors import ModelError
from calcsheet.core.totals import GRAVITY


def interpolated(points: Sequence[tuple[float, float]], period: Array, between: str, hold_below: bool) -> Array:
    """Ordinates at periods from points.

    Parameters
    ----------
    points : sequence of (float, float)
        Period [s] and ordinate, periods strictly ascending, ordinates at or above 0.
    period : (m,) array
        Periods [s].
    between : {"linear", "log-log"}
        Interpolation.
    hold_below : bool
        Whether the first ordinate holds for shorter periods.

    Returns
    -------
    (m,) array
        In the points' own unit.

    Raises
    ------
    ModelError
        Points that are unsorted or negative, or a period outside them.
    """
    if len(points) < 2:
        raise ModelError("spectrum points", f"{len(points)} given", "must be two or more")
    t, a = np.array(points, dtype=float).T
    late = ~np.concatenate([[t[0] >= 0.0], np.diff(t) > 0.0])
    if late.any():
        raise ModelError(
            "spectrum points",
            f"period {t[np.argmax(late)]:g} s in point {np.argmax(late) + 1}",
            "must rise from point to point, from 0 or above",
        )
    bad = ~(np.isfinite(a) & (a >= 0.0))
    if bad.any():
        raise ModelError(
            "spectrum points",
            f"ordinate {a[np.argmax(bad)]:g} in point {np.argmax(bad) + 1}",
            "must be finite and at or above 0",
        )
    if between == "log-log" and (t[0] <= 0.0 or (a <= 0.0).any()):
        raise ModelError("spectrum points", "a period or an ordinate of 0", "must be above 0 for log-log interpolation")
    outside = ~(period <= t[-1] * (1.0 + 1e-12))
    if not hold_below:
        outside |= period < t[0] * (1.0 - 1e-12)
    if outside.any():
        worst = float(period[np.argmax(outside)])
        raise ModelError("period", f"{worst:.4g} s", f"must lie within the spectrum's points, {t[0]:g} to {t[-1]:g} s")
    inside = np.clip(period, t[0], t[-1])
    if between == "log-log":
        return np.exp(np.interp(np.log(inside), np.log(t), np.log(a)))
    return np.interp(inside, t, a)


def between_points(
    points: Sequence[tuple[float, float]], period: float, between: str, what: str, clause: str
) -> tuple[Relation, ...]:
    """How `interpolated` comes to the ordinate at one period, the ordinate last.

    Parameters
    ----------
    points : sequence of (float, float)
        Period [s] and ordinate over g.
    period : float
        Period [s], within the points or below the first, whose ordinate then holds.
    between : {"linear", "log-log"}
        Interpolation.
    what : str
        Name of the ordinate.
    clause : str
        Its source.
    """
    t, a = np.array(points, dtype=float).T
    result = Value(float(interpolated(points, np.array([period]), between, hold_below=True)[0]), "ratio")
    if period <= t[0]:
        values = (Value(float(a[0]), "ratio"), Value(period, "period"), Value(float(t[0]), "period"))
        return (Relation(what, "S = S_i, for T ≤ T_i", "{0}, for {1} ≤ {2}", values, result, clause),)
    j = min(int(np.searchsorted(t, period)), t.size - 1)
    at, t_i, t_j = Value(period, "period"), Value(float(t[j - 1]), "period"), Value(float(t[j]), "period")
    s_i, s_j = Value(float(a[j - 1]), "ratio"), Value(float(a[j]), "ratio")
    if between == "linear":
        how = "{0} + ({1} − {0}) × ({2} − {3}) / ({4} − {3})"
        relation = "S = S_i + (S_j − S_i)(T − T_i)/(T_j − T_i)"
        return (Relation(what, relation, how, (s_i, s_j, at, t_i, t_j), result, clause),)
    power = Value(float(np.log(period / t[j - 1]) / np.log(t[j] / t[j - 1])), "ratio")
    return (
        Relation(
            "Place between two points", "p = ln(T/T_i)/ln(T_j/T_i)", "ln({0} / {1}) / ln({2} / {1})", (at, t_i, t_j),
            power, clause,
        ),
        Relation(what, "S = S_i (S_j/S_i)^p", "{0} × ({1} / {0})^{2}", (s_i, s_j, power), result, clause),
    )  # fmt: skip


@dataclass(frozen=True)
class GivenPoints(Edition):
    """A spectrum as given points.

    Parameters
    ----------
    points : tuple of (float, float)
        Period [s] and design ordinate over g, reduced as the design needs it.
    between : {"linear", "log-log"}
        Interpolation.
    hold_below : bool
        Whether the first ordinate holds for shorter periods: a stated choice.
    damping_ratio : float
        Damping that the ordinates stand for.
    drift_factor_x, drift_factor_y : float
        What drifts at these ordinates are multiplied by for design drifts.
    drift_share : float
        Limit of the design drift over storey height.
    """

    points: tuple[tuple[float, float], ...] = field(metadata=key(file=True, help="period in s, ordinate over g"))
    between: str = field(default="linear", metadata=key(choices=("linear", "log-log"), help="interpolation"))
    hold_below: bool = field(default=False, metadata=key(help="hold the first ordinate below the first period"))
    damping_ratio: float = field(default=0.05, metadata=key(above=0.0, below=1.0, help="damping ratio"))
    drift_factor_x: float = field(default=1.0, metadata=key(above=0.0, help="factor on drifts in x"))
    drift_factor_y: float = field(default=1.0, metadata=key(above=0.0, help="factor on drifts in y"))
    drift_share: float = field(default=0.010, metadata=key(above=0.0, up_to=0.1, help="limit of drift over height"))

    name: ClassVar[str] = "given points"
    kind: ClassVar[str] = name
    level: ClassVar[str] = "as the points were given: what they include is for their origin to say"

    @property
    def reach(self) -> float:
        return self.points[-1][0]

    def permitted(self, facts: Facts) -> Answer:
        return Answer(
            "Given points name no code: whether this analysis is permitted is not assessed.", NOT_HERE, "not assessed"
        )

    def importance(self) -> Factor:
        return Factor("I", 1.0, NOT_HERE)

    def ordinates(self, direction: str, period: Array) -> Array:
        found = interpolated(self.points, np.asarray(period, dtype=float), self.between, self.hold_below)
        return found * GRAVITY

    def ordinate_relation(self, direction: str, period: float) -> tuple[Relation, ...]:
        found = between_points(self.points, period, self.between, "Given ordinate over g at T₁", "as given")
        ordinate = Value(float(self.ordinates(direction, np.array([period]))[0]), "acceleration")
        values = (found[-1].result, Value(GRAVITY, "acceleration"))
        return *found, Relation("Design ordinate at T₁", "S g", "{0} × {1}", values, ordinate, "as given")

    def elastic_ordinates(self, direction: str, period: Array) -> Array | None:
        return None

    def damping(self) -> Factor:
        return Factor("ξ", self.damping_ratio, "as given with the points")

    def static(self, facts: Facts) -> Static | None:
        return None

    def distribution(self, facts: Facts, static: Static) -> tuple[Array, str]:
        raise ModelError("static forces", "asked of given points", "need a code edition")

    def distribution_relation(self, facts: Facts, static: Static) -> tuple[Relation, ...]:
        raise ModelError("static forces", "asked of given points", "need a code edition")

    def modes(self) -> Answer:
        return Answer("Given points ask for no number of modes.", NOT_HERE, "not assessed")

    def combination(self) -> tuple[tuple[Rule, ...], str]:
        return ("CQC", "SRSS", "grouped", "absolute"), NOT_HERE

    def independent(self, period: Array) -> Answer:
        text = f"neighbouring periods in a ratio of up to {closest(period):.3f}; given points name no limit"
        return Answer(text, NOT_HERE, "not assessed")

    def scaling(self, facts: Facts, modal: float, static: Static | None) -> Scaling:
        return Scaling(1.0, 1.0, "Nothing is scaled: given points have no static base shear.", NOT_HERE)

    def torsion(self, direction: str) -> tuple[float | None, Answer]:
        return None, Answer("Torsion is not assessed: the model is planar.", NOT_HERE, "not assessed")

    def drift(self, direction: str) -> Factor:
        return Factor("factor on drifts", self.drift_factor_x if direction == "x" else self.drift_factor_y, "as given")

    def drift_limit(self, facts: Facts) -> tuple[Array, Relation]:
        limit = self.drift_share * facts.storey_height
        relation = Relation(
            "Drift limit, lowest storey", "α h", f"{self.drift_share:g} × {{0}}",
            (Value(float(facts.storey_height[0]), "length"),), Value(float(limit[0]), "displacement"), "as given",
        )  # fmt: skip
        return limit, relation

    def second_order(
        self, facts: Facts, gravity: Array, shear: Array, drift: Array, in_stiffness: bool = False
    ) -> SecondOrder | None:
        return None

    def irregularities(self, facts: Facts, stiffness: Array, drift: Array) -> tuple[Screen, ...]:
        return (Screen("irregularities", "not assessed", "given points name no code", "", NOT_HERE),)

    def separation(self, displacement: float) -> tuple[float | None, str]:
        return None, NOT_HERE
