"""EN 1998-1:2004 with recommended values; nationally determined parameters are inputs. Clauses from memory.

The spectra are given up to 4 s (3.2.2.2); C_t H^(3/4) is for heights up to 40 m.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from math import isqrt
from typing import ClassVar

import numpy as np

from calcsheet.core.arrays import Array
from calcsheet.core.codes.common import amplified, at_top, by_height, closest, stability
from calcsheet.core.codes.edition import (
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
    Verdict,
    key,
)
from calcsheet.core.combine import Rule
from calcsheet.core.errors import ModelError
from calcsheet.core.totals import GRAVITY

Corners = tuple[float, float, float, float]

SPECTRA: dict[int, dict[str, Corners]] = {
    1: {
        "A": (1.0, 0.15, 0.4, 2.0),
        "B": (1.2, 0.15, 0.5, 2.0),
        "C": (1.15, 0.20, 0.6, 2.0),
        "D": (1.35, 0.20, 0.8, 2.0),
        "E": (1.4, 0.15, 0.5, 2.0),
    },
    2: {
        "A": (1.0, 0.05, 0.25, 1.2),
        "B": (1.35, 0.05, 0.25, 1.2),
        "C": (1.5, 0.10, 0.25, 1.2),
        "D": (1.8, 0.10, 0.30, 1.2),
        "E": (1.6, 0.05, 0.25, 1.2),
    },
}
"""S, T_B, T_C, T_D by type of spectrum and ground type (Tables 3.2 and 3.3)."""
IMPORTANCE = {"I": 0.8, "II": 1.0, "III": 1.2, "IV": 1.4}
"""γ_I (4.2.5(5), note)."""
REDUCTION = {"I": 0.5, "II": 0.5, "III": 0.4, "IV": 0.4}
"""ν (4.4.3.2(2), note)."""
DRIFT = {"brittle": 0.005, "ductile": 0.0075, "none": 0.010}
"""Limit of ν d_r over storey height by the non-structural elements (4.4.3.2(1))."""
PERIOD = {"steel moment frame": 0.085, "concrete moment frame": 0.075, "eccentric braces": 0.075, "other": 0.050}
"""C_t (4.3.3.2.2(3))."""


def damping_correction(damping: float) -> float:
    """η = √(10/(5 + ξ[%])), at least 0.55 (3.2.2.2(3), Eq. (3.6)), for the elastic spectrum alone.

    Parameters
    ----------
    damping : float
        Damping ratio ξ, above 0 and below 1.

    Raises
    ------
    ModelError
        A damping ratio outside its range.
    """
    if not 0.0 < damping < 1.0:
        raise ModelError("damping ratio", f"got {damping:g}", "must be above 0 and below 1")
    return max(float(np.sqrt(10.0 / (5.0 + 100.0 * damping))), 0.55)


def least_modes(levels: int) -> int:
    """Modes at least needed where effective masses cannot decide, k ≥ 3 √n (4.3.3.3.1(5)); the last at or below 0.20 s.

    Parameters
    ----------
    levels : int
        Storeys n above the foundation or a rigid basement.
    """
    return isqrt(9 * levels - 1) + 1


@dataclass(frozen=True)
class EN1998(Edition):
    """Parameters of EN 1998-1:2004.

    Parameters
    ----------
    ground_acceleration : float
        Reference peak ground acceleration on type A ground a_gR over g.
    spectrum : {1, 2}
        Type of the elastic spectrum.
    ground : {"A", "B", "C", "D", "E", "own"}
        Ground type; "own" with `corners`.
    importance_class : {"I", "II", "III", "IV"}
        Importance class.
    q_x, q_y : float
        Behaviour factor in each direction, at or above 1.
    system_x, system_y : str
        Lateral system, a key of `PERIOD`.
    elements : {"brittle", "ductile", "none"}
        Non-structural elements that the drift limit protects.
    beta : float
        Lower bound factor β of the design spectrum.
    corners : tuple of float
        Own S, T_B, T_C, T_D.
    edge_x, edge_y : float
        x/L_e in each direction of the action: distance of the outermost line of resistance from the centre of mass over that
        between the outermost two.
    q_d_x, q_d_y : float or None
        Displacement behaviour factor where it is not q.
    importance_factor, reduction_factor : float or None
        National γ_I and ν where they differ from the recommended ones.
    """

    ground_acceleration: float = field(metadata=key(above=0.0, up_to=2.0, help="a_gR over g"))
    spectrum: int = field(metadata=key(choices=(1, 2), help="type of the elastic spectrum"))
    ground: str = field(metadata=key(choices=("A", "B", "C", "D", "E", "own"), help="ground type"))
    importance_class: str = field(metadata=key(choices=tuple(IMPORTANCE), help="importance class"))
    q_x: float = field(metadata=key(least=1.0, help="behaviour factor in x"))
    q_y: float = field(metadata=key(least=1.0, help="behaviour factor in y"))
    system_x: str = field(metadata=key(choices=tuple(PERIOD), help="lateral system in x"))
    system_y: str = field(metadata=key(choices=tuple(PERIOD), help="lateral system in y"))
    elements: str = field(metadata=key(choices=tuple(DRIFT), help="non-structural elements"))
    beta: float = field(default=0.2, metadata=key(above=0.0, up_to=1.0, help="lower bound factor"))
    corners: tuple[float, ...] = field(default=(), metadata=key(length=4, above=0.0, help="own S, T_B, T_C, T_D"))
    edge_x: float = field(default=0.5, metadata=key(least=0.0, up_to=1.0, help="x/L_e of the edge, action in x"))
    edge_y: float = field(default=0.5, metadata=key(least=0.0, up_to=1.0, help="x/L_e of the edge, action in y"))
    q_d_x: float | None = field(default=None, metadata=key(least=1.0, help="displacement behaviour factor in x"))
    q_d_y: float | None = field(default=None, metadata=key(least=1.0, help="displacement behaviour factor in y"))
    importance_factor: float | None = field(default=None, metadata=key(above=0.0, help="national importance factor"))
    reduction_factor: float | None = field(
        default=None, metadata=key(above=0.0, up_to=1.0, help="national reduction factor")
    )

    name: ClassVar[str] = "EN 1998-1:2004"
    kind: ClassVar[str] = name
    level: ClassVar[str] = (
        "design force level: importance factor and behaviour factor q are in; load combination factors, vertical "
        "component, capacity design and accidental torsion are not"
    )

    def __post_init__(self) -> None:
        if (self.ground == "own") != bool(self.corners):
            raise ModelError(
                "corners", f'{len(self.corners)} values with ground "{self.ground}"', 'go with ground "own"'
            )
        if self.corners and not self.corners[1] < self.corners[2] < self.corners[3]:
            raise ModelError("corners", f"got {self.corners}", "must rise from T_B to T_C to T_D")

    @property
    def _corners(self) -> Corners:
        return self.corners if self.ground == "own" else SPECTRA[self.spectrum][self.ground]  # type: ignore[return-value]

    def _q(self, direction: str) -> float:
        return self.q_x if direction == "x" else self.q_y

    @property
    def _ag(self) -> float:
        """Design ground acceleration a_g = γ_I a_gR [m/s²]."""
        return self.importance().value * self.ground_acceleration * GRAVITY

    def permitted(self, facts: Facts) -> Answer:
        t_c = self._corners[2]
        limit = min(4.0 * t_c, 2.0)
        alone = "would" if facts.period <= limit else "would not"
        planar = " Two planar models ask for regularity in plan, or for what 4.3.3.1(8) says in its place."
        return Answer(
            f"Modal response spectrum analysis applies to every building. The lateral force method {alone} meet its limit "
            f"on the period, T₁ = {facts.period:.3g} s against min(4 T_C, 2.0 s) = {limit:.3g} s."
            f"{planar if facts.plan is None else ''}",
            "4.3.3.1(3), (7), 4.3.3.2.1(2)",
        )

    def importance(self) -> Factor:
        value = IMPORTANCE[self.importance_class] if self.importance_factor is None else self.importance_factor
        return Factor("γ_I", value, "4.2.5")

    def elastic(self, period: Array, damping: float = 0.05) -> Array:
        """Elastic ordinates S_e.

        Parameters
        ----------
        period : (m,) array
            Periods [s].
        damping : float
            Damping ratio.

        Returns
        -------
        (m,) array
            In m/s².

        Notes
        -----
        3.2.2.2, Eqs (3.2) to (3.5).
        """
        eta = damping_correction(damping)
        s, t_b, t_c, t_d = self._corners
        t = np.asarray(period, dtype=float)
        top = self._ag * s * eta * 2.5
        long = np.where(t > t_d, t_c * t_d / np.maximum(t, t_d) ** 2, t_c / np.maximum(t, t_c))
        return np.where(t < t_b, self._ag * s * (1.0 + t / t_b * (eta * 2.5 - 1.0)), top * np.minimum(long, 1.0))

    def ordinates(self, direction: str, period: Array) -> Array:
        s, t_b, t_c, t_d = self._corners
        q, t = self._q(direction), np.asarray(period, dtype=float)
        rising = self._ag * s * (2.0 / 3.0 + t / t_b * (2.5 / q - 2.0 / 3.0))
        long = np.where(t > t_d, t_c * t_d / np.maximum(t, t_d) ** 2, t_c / np.maximum(t, t_c))
        falling = self._ag * s * 2.5 / q * np.minimum(long, 1.0)
        return np.where(t < t_b, rising, np.where(t > t_c, np.maximum(falling, self.beta * self._ag), falling))

    def ordinate_relation(self, direction: str, period: float) -> tuple[Relation, ...]:
        s, t_b, t_c, t_d = self._corners
        a_g, soil, q = Value(self._ag, "acceleration"), Value(s, "ratio"), Value(self._q(direction), "ratio")
        t, b, c, d = (Value(v, "period") for v in (period, t_b, t_c, t_d))
        ordinate = float(self.ordinates(direction, np.array([period]))[0])
        design = Relation(
            "Design ground acceleration", "a_g = γ_I a_gR g", "{0} × {1} × {2}",
            (
                Value(self.importance().value, "ratio"), Value(self.ground_acceleration, "ratio"),
                Value(GRAVITY, "acceleration"),
            ),
            a_g, "3.2.1(3)",
        )  # fmt: skip
        what, plateau = "Design ordinate at T₁", self._ag * s * 2.5 / q.value
        if period < t_b:
            return design, Relation(
                what, "S_d = a_g S (2/3 + T/T_B (2.5/q − 2/3)), for T < T_B",
                "{0} × {1} × (2 / 3 + {2} / {3} × (2.5 / {4} − 2 / 3)), for {2} < {3}",
                (a_g, soil, t, b, q), Value(ordinate, "acceleration"), "3.2.2.5(4), Eq. (3.13)",
            )  # fmt: skip
        if period <= t_c:
            return design, Relation(
                what, "S_d = a_g S 2.5/q, for T_B ≤ T ≤ T_C", "{0} × {1} × 2.5 / {2}, for {3} ≤ {4} ≤ {5}",
                (a_g, soil, q, b, t, c), Value(ordinate, "acceleration"), "3.2.2.5(4), Eq. (3.14)",
            )  # fmt: skip
        if period <= t_d:
            falling = plateau * t_c / period
            relation = "S_d = a_g S (2.5/q) T_C/T, for T_C < T ≤ T_D"
            how, number = "{0} × {1} × 2.5 / {2} × {3} / {4}, for {3} < {4} ≤ {5}", "3.15"
        else:
            falling = plateau * t_c * t_d / period**2
            relation = "S_d = a_g S (2.5/q) T_C T_D/T², for T > T_D"
            how, number = "{0} × {1} × 2.5 / {2} × {3} × {5} / ({4})², for {4} > {5}", "3.16"
        governs = self.beta * self._ag > falling
        branch = Relation(
            "Branch of the period, below the lower bound" if governs else what, relation, how, (a_g, soil, q, c, t, d),
            Value(falling, "acceleration"), f"3.2.2.5(4), Eq. ({number})",
        )  # fmt: skip
        if not governs:
            return design, branch
        bound = Relation(
            what, "S_d = β a_g, the lower bound, which governs", "{0} × {1}", (Value(self.beta, "ratio"), a_g),
            Value(ordinate, "acceleration"), "3.2.2.5(4), note",
        )  # fmt: skip
        return design, branch, bound

    def elastic_ordinates(self, direction: str, period: Array) -> Array:
        return self.elastic(period)

    def damping(self) -> Factor:
        return Factor("ξ", 0.05, "3.2.2.5(2): the design spectrum holds the damping in q")

    def static(self, facts: Facts) -> Static:
        system = self.system_x if facts.direction == "x" else self.system_y
        c_t = PERIOD[system]
        approximate = c_t * facts.top**0.75
        t_c = self._corners[2]
        ordinate = float(self.ordinates(facts.direction, np.array([facts.period]))[0])
        reduced = facts.period <= 2.0 * t_c and facts.height.size > 2
        effective = 0.85 if reduced else 1.0
        shear = ordinate * facts.total / GRAVITY * effective
        relations = (
            Relation(
                "Empirical period", "T = C_t H^0.75", f"{c_t:g} × ({{0}})^0.75", (Value(facts.top, "metres"),),
                Value(approximate, "period"), "4.3.3.2.2(3)" + (": for heights up to 40 m" if facts.top > 40.0 else ""),
            ),
            Relation(
                "Static base shear", "F_b = S_d(T₁) λ W/g", f"{{0}} × {effective:g} × {{1}} / {{2}}",
                (Value(ordinate, "acceleration"), Value(facts.total, "force"), Value(GRAVITY, "acceleration")),
                Value(shear, "force"), "4.3.3.2.2(1)",
            ),
        )  # fmt: skip
        why = "S_d(T₁) m λ with λ = 0.85" if reduced else "S_d(T₁) m λ with λ = 1"
        return Static(
            approximate, None, facts.period, shear / facts.total, shear, why, relations, "4.3.3.2.2(1), Eq. (4.5)"
        )

    def distribution(self, facts: Facts, static: Static) -> tuple[Array, str]:
        return by_height(facts, static.shear, 1.0), "4.3.3.2.3(3), Eq. (4.11)"

    def distribution_relation(self, facts: Facts, static: Static) -> tuple[Relation, ...]:
        return (at_top(facts, static.shear, 1.0, "", "4.3.3.2.3(3), Eq. (4.11)"),)

    def modes(self) -> Answer:
        return Answer(
            "Effective masses of the modes used reach 90 %, or every mode above 5 % is used; where neither can be met, at "
            "least 3√n modes with the last period at or below 0.20 s.",
            "4.3.3.3.1(3) to (5)",
        )

    def combination(self) -> tuple[tuple[Rule, ...], str]:
        return ("CQC", "SRSS"), "4.3.3.3.2(2), (3)"

    def independent(self, period: Array) -> Answer:
        ratio = closest(period)
        text = f"neighbouring periods in a ratio of up to {ratio:.3f} against T_j ≤ 0.9 T_i"
        return Answer(text, "4.3.3.3.2(1), (2)", "passes" if ratio <= 0.9 else "exceeds")

    def scaling(self, facts: Facts, modal: float, static: Static | None) -> Scaling:
        return Scaling(1.0, 1.0, "Nothing is scaled: the static base shear is given for comparison.", "4.3.3.3")

    def torsion(self, direction: str) -> tuple[float | None, Answer]:
        edge = self.edge_x if direction == "x" else self.edge_y
        factor = 1.0 + 1.2 * edge
        return factor, Answer(
            "Two planar models, stiffness and mass symmetric in plan: actions of an element at distance x from the centre of "
            f"mass are multiplied by 1 + 1.2 x/L_e, {factor:.3g} at the edge where x/L_e = {edge:g}.",
            "4.3.3.3.3(3), 4.3.3.2.4(2)",
        )

    def drift(self, direction: str) -> Factor:
        own = self.q_d_x if direction == "x" else self.q_d_y
        if own is not None:
            return Factor("q_d", own, "4.3.4(1): as given; no more than the elastic spectrum gives")
        return Factor("q_d", self._q(direction), "4.3.4(1): q_d = q; no more than the elastic spectrum gives")

    def drift_limit(self, facts: Facts) -> tuple[Array, Relation]:
        nu = REDUCTION[self.importance_class] if self.reduction_factor is None else self.reduction_factor
        share = DRIFT[self.elements]
        limit = share * facts.storey_height / nu
        relation = Relation(
            "Drift limit, lowest storey", "d_r ≤ α h / ν", f"{share:g} × {{0}} / {nu:g}",
            (Value(float(facts.storey_height[0]), "length"),), Value(float(limit[0]), "displacement"), "4.4.3.2(1)",
        )  # fmt: skip
        return limit, relation

    def second_order(
        self, facts: Facts, gravity: Array, shear: Array, drift: Array, in_stiffness: bool = False
    ) -> SecondOrder:
        theta = stability(gravity, drift, shear, facts.storey_height, in_stiffness)
        worst = float(theta.max())
        verdict: Verdict = "passes"
        if worst <= 0.1:
            text = "second-order effects need not be taken into account"
        elif in_stiffness and worst <= 0.3:
            text = "second-order effects are in the stiffness"
        elif worst <= 0.2:
            text = "actions are multiplied by 1/(1 − θ)"
        elif worst <= 0.3:
            verdict = "judgement"
            text = "an explicit second-order analysis is called for; the values here are multiplied by 1/(1 − θ)"
        else:
            verdict, text = "exceeds", "not allowed: stiffen the building"
        factor = np.ones(theta.size) if in_stiffness else amplified(theta, 0.1)
        return SecondOrder(theta, drift, 0.1, 0.3, factor, verdict, text, "4.4.2.2(2) to (4)")

    def irregularities(self, facts: Facts, stiffness: Array, drift: Array) -> tuple[Screen, ...]:
        reduced = "reference value of q times 0.8 (4.2.3.1(7))"
        return (
            _along("stiffness", "storey stiffness over that above", stiffness[:-1] / stiffness[1:], reduced),
            _along("mass", "level weight over that below", facts.weight[1:] / facts.weight[:-1], reduced),
            Screen("strength along the height", "not assessed", "missing: storey strengths", reduced, "4.2.3.3(4)"),
            Screen("lateral systems to the top", "not assessed", "missing: their layout", reduced, "4.2.3.3(2)"),
            Screen("setbacks", "not assessed", "missing: plan dimensions of the levels", reduced, "4.2.3.3(5)"),
            _in_plan(facts),
        )

    def separation(self, displacement: float) -> tuple[float | None, str]:
        return displacement, "4.4.2.7(2)"


def _in_plan(facts: Facts) -> Screen:
    """Eccentricity within 0.30 of the torsional radius, and that at or above the radius of gyration."""
    name, consequence = "regularity in plan", "a spatial model (4.2.3.1(3))"
    plan = facts.plan
    if plan is None or plan.eccentricity is None or plan.radius is None:
        why = "as the model is planar" if plan is None else "as lines that bend have no centres of stiffness"
        text = f"missing: eccentricities and torsional radii, {why}"
        return Screen(name, "not assessed", text, consequence, "4.2.3.2")
    share, stiff = float((np.abs(plan.eccentricity) / plan.radius).max()), float((plan.radius / plan.gyration).min())
    exceeds = share > 0.3 or stiff < 1.0
    text = f"e_0/r up to {share:.2f}, against 0.30; r/l_s from {stiff:.2f}, against 1"
    return Screen(name, "exceeds" if exceeds else "passes", text, consequence if exceeds else "", "4.2.3.2(6)")


def _along(what: str, ratio: str, found: Array, consequence: str) -> Screen:
    name, clause = f"{what} along the height", "4.2.3.3(3)"
    if found.size == 0:
        return Screen(name, "passes", "one storey", "", clause)
    text = f"{ratio}: {found.min():.2f} to {found.max():.2f}; the edition gives no number"
    return Screen(name, "judgement", text, consequence, clause)
