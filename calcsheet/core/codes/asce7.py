"""What ASCE/SEI 7-16 and 7-22 have in common: chapter 12 for buildings. Clauses from memory.

Left out: the cap on S_DS for regular buildings of up to five storeys (12.8.1.3), the bounds on categories by T_S (11.6), and
the C_s of 7-22 read from its multi-period spectrum (12.8.1.1); static drifts, which may use the uncapped period (12.8.6.2).
To be confirmed: equation numbers of 7-22, which are not cited.
"""

from __future__ import annotations

from abc import abstractmethod
from dataclasses import dataclass, field
from typing import ClassVar

import numpy as np

from calcsheet.core.arrays import Array
from calcsheet.core.codes.asce7_screens import vertical
from calcsheet.core.codes.asce7_spectrum import two_period_relation
from calcsheet.core.codes.common import amplified, at_top, by_height, closest, stability, up_to_static
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

FOOT = 0.3048
IMPORTANCE = {"I": 1.0, "II": 1.0, "III": 1.25, "IV": 1.5}
"""I_e by risk category (Table 1.5-2)."""
PERIOD_FEET = {
    "steel moment frame": (0.028, 0.8),
    "concrete moment frame": (0.016, 0.9),
    "eccentric or buckling-restrained braces": (0.03, 0.75),
    "other": (0.02, 0.75),
}
PERIOD_METRES = {
    "steel moment frame": (0.0724, 0.8),
    "concrete moment frame": (0.0466, 0.9),
    "eccentric or buckling-restrained braces": (0.0731, 0.75),
    "other": (0.0488, 0.75),
}
"""C_t and x for heights in feet and in metres (Table 12.8-2)."""
LOW = "low with accommodating finishes"
DRIFT = {
    "other": {"I": 0.020, "II": 0.020, "III": 0.015, "IV": 0.010},
    LOW: {"I": 0.025, "II": 0.025, "III": 0.020, "IV": 0.015},
    "masonry cantilever walls": {"I": 0.010, "II": 0.010, "III": 0.010, "IV": 0.010},
    "other masonry walls": {"I": 0.007, "II": 0.007, "III": 0.007, "IV": 0.007},
}
"""Allowable storey drift over storey height (Table 12.12-1); the second row is for up to four storeys."""
FALLING, FAR, NEAR_FAULT = "S_D1/(T R/I_e)", "S_D1 T_L/(T² R/I_e)", "0.5 S_1/(R/I_e)"
MOMENT_FRAMES = ("steel moment frame", "concrete moment frame")


@dataclass(frozen=True)
class ASCE7(Edition):
    """Parameters of ASCE/SEI 7 for a building.

    Parameters
    ----------
    s_ds, s_d1 : float
        Design spectral accelerations S_DS and S_D1 over g.
    s_1 : float
        Mapped spectral acceleration S_1 over g.
    t_l : float
        Long-period transition period T_L [s].
    site_class : str
        Site class.
    risk_category : {"I", "II", "III", "IV"}
        Risk category.
    r_x, r_y, c_d_x, c_d_y : float
        Response modification coefficient and deflection amplification factor in each direction.
    system_x, system_y : str
        Lateral system for the approximate period, a key of `PERIOD_FEET`.
    structure : str
        Row of the table of allowable drifts, a key of `DRIFT`.
    rho : float
        Redundancy factor.
    shear_ratio : float
        β, ratio of shear demand to shear capacity of a storey in the limit of θ.
    height_unit : {"ft", "m"}
        Unit of the height in the approximate period.
    """

    s_ds: float = field(metadata=key(above=0.0, up_to=5.0, help="S_DS over g"))
    s_d1: float = field(metadata=key(above=0.0, up_to=5.0, help="S_D1 over g"))
    s_1: float = field(metadata=key(least=0.0, up_to=5.0, help="S_1 over g"))
    t_l: float = field(metadata=key(above=0.0, up_to=20.0, help="T_L in s"))
    site_class: str = field(metadata=key(choices=("A", "B", "C", "D", "E", "F"), help="site class"))
    risk_category: str = field(metadata=key(choices=tuple(IMPORTANCE), help="risk category"))
    r_x: float = field(metadata=key(least=1.0, help="R in x"))
    r_y: float = field(metadata=key(least=1.0, help="R in y"))
    c_d_x: float = field(metadata=key(least=1.0, help="C_d in x"))
    c_d_y: float = field(metadata=key(least=1.0, help="C_d in y"))
    system_x: str = field(metadata=key(choices=tuple(PERIOD_FEET), help="lateral system in x"))
    system_y: str = field(metadata=key(choices=tuple(PERIOD_FEET), help="lateral system in y"))
    structure: str = field(default="other", metadata=key(choices=tuple(DRIFT), help="row of the table of drifts"))
    rho: float = field(default=1.0, metadata=key(choices=(1.0, 1.3), help="redundancy factor"))
    shear_ratio: float = field(default=1.0, metadata=key(above=0.0, up_to=1.0, help="beta of the limit of theta"))
    height_unit: str = field(default="ft", metadata=key(choices=("ft", "m"), help="unit of height"))

    equations: ClassVar[bool] = True
    """Whether equations are cited by number."""
    level: ClassVar[str] = (
        "design force level: importance factor I_e and R are in; redundancy ρ, overstrength, vertical effect, load "
        "combinations and accidental torsion are not"
    )
    mass_irregularity: ClassVar[bool] = True

    def __post_init__(self) -> None:
        if self.t_l <= self.t_s:
            raise ModelError("t_l", f"got {self.t_l:g} s with T_S = {self.t_s:.3g} s", "must be above T_S = S_D1/S_DS")

    # ---- shared quantities -------------------------------------------------------------------------------------------

    def _reduction(self, direction: str) -> float:
        """R/I_e in a direction."""
        return (self.r_x if direction == "x" else self.r_y) / self.importance().value

    def _c_d(self, direction: str) -> float:
        return self.c_d_x if direction == "x" else self.c_d_y

    def _system(self, direction: str) -> str:
        return self.system_x if direction == "x" else self.system_y

    @property
    def t_s(self) -> float:
        """T_S = S_D1/S_DS [s]."""
        return self.s_d1 / self.s_ds

    @property
    def category(self) -> str:
        """Seismic design category (11.6)."""
        if self.s_1 >= 0.75:
            return "F" if self.risk_category == "IV" else "E"
        steps = "ABCD"
        high = self.risk_category == "IV"
        short = int(np.searchsorted([0.167, 0.33, 0.50], self.s_ds, side="right"))
        long = int(np.searchsorted([0.067, 0.133, 0.20], self.s_d1, side="right"))
        worst = max(short, long)
        return steps[min(worst + (1 if high and worst else 0), 3)]

    def two_period(self, period: Array) -> Array:
        """Two-period design spectrum S_a, (m,), over g at each period, (m,) [s] (7-16, 11.4.6; 7-22, 11.4.5.2)."""
        t, t_0 = np.asarray(period, dtype=float), 0.2 * self.t_s
        rising = self.s_ds * (0.4 + 0.6 * t / t_0)
        falling = self.s_d1 / np.maximum(t, self.t_s) * np.minimum(self.t_l / np.maximum(t, self.t_s), 1.0)
        return np.where(t < t_0, rising, np.where(t <= self.t_s, self.s_ds, falling))

    def spectrum(self, period: Array) -> Array:
        """Design spectrum S_a, (m,), over g at each period, (m,) [s]."""
        return self.two_period(period)

    def spectrum_relation(self, period: float) -> tuple[Relation, ...]:
        """How S_a over g comes about at a period [s], S_a last."""
        ordinate = float(self.two_period(np.array([period]))[0])
        clause = "11.4.6" if self.equations else "11.4.5.2"
        return two_period_relation(self.s_ds, self.s_d1, self.t_l, period, ordinate, clause)

    def limit_of_period(self) -> float:
        """C_u (Table 12.8-1)."""
        return float(np.interp(self.s_d1, [0.1, 0.15, 0.2, 0.3], [1.7, 1.6, 1.5, 1.4]))

    def coefficient(self, period: float, reduction: float) -> tuple[float, str]:
        """Seismic response coefficient C_s and the expression that governs (12.8.1.1).

        Parameters
        ----------
        period : float
            Period used [s].
        reduction : float
            R/I_e.
        """
        upper, lower = self._bounds(period, reduction)
        return max([min(upper), *lower], key=lambda bound: bound[0])

    def _bounds(self, period: float, reduction: float) -> tuple[list[tuple[float, str]], list[tuple[float, str]]]:
        """What C_s need not exceed and what it may not fall below, each with its expression."""
        times = self._beyond_plateau()
        cap = times * self.s_d1 / period * min(self.t_l / period, 1.0)
        by_cap = ("1.5 " if times > 1.0 else "") + (FALLING if period <= self.t_l else FAR)
        upper = [(self.s_ds / reduction, "S_DS/(R/I_e)"), (cap / reduction, by_cap)]
        lower = [(0.044 * self.s_ds * self.importance().value, "0.044 S_DS I_e"), (0.01, "0.01")]
        if self.s_1 >= 0.6:
            lower.append((self.near_fault(reduction), NEAR_FAULT))
        return upper, lower

    def near_fault(self, reduction: float) -> float:
        """0.5 S_1/(R/I_e) where S_1 ≥ 0.6, else 0 (7-16, Eq. 12.8-6); `reduction` is R/I_e."""
        return 0.5 * self.s_1 / reduction if self.s_1 >= 0.6 else 0.0

    # ---- the checklist -----------------------------------------------------------------------------------------------

    def permitted(self, facts: Facts) -> Answer:
        asked, clause = self._site()
        more = " Category A asks for no more than 11.7." if self.category == "A" else ""
        return Answer(
            f"Seismic design category {self.category}: modal response spectrum analysis is permitted for every building."
            f"{more} Site class {self.site_class}: {asked or 'the spectrum needs no study of the site'}.",
            f"11.6, 12.6, {clause}",
            "judgement" if asked else "passes",
        )

    @abstractmethod
    def _site(self) -> tuple[str, str]:
        """What the site class asks for beyond the spectrum given, empty where nothing, and the clause."""

    def _beyond_plateau(self) -> float:
        """Factor on the falling branches of C_s."""
        return 1.0

    def _eq(self, clause: str, number: str) -> str:
        return f"{clause}, Eq. ({number})" if self.equations else clause

    def importance(self) -> Factor:
        return Factor("I_e", IMPORTANCE[self.risk_category], "Table 1.5-2")

    def ordinates(self, direction: str, period: Array) -> Array:
        return self.spectrum(period) * GRAVITY / self._reduction(direction)

    def ordinate_relation(self, direction: str, period: float) -> tuple[Relation, ...]:
        found = self.spectrum_relation(period)
        r, i_e = Value(self.r_x if direction == "x" else self.r_y, "ratio"), Value(self.importance().value, "ratio")
        ordinate = Value(float(self.ordinates(direction, np.array([period]))[0]), "acceleration")
        values = (found[-1].result, Value(GRAVITY, "acceleration"), r, i_e)
        how = "{0} × {1} / ({2} / {3})"
        return *found, Relation("Design ordinate at T₁", "S_a g/(R/I_e)", how, values, ordinate, "12.9.1.2")

    def damping(self) -> Factor:
        return Factor("ξ", 0.05, "11.4: the spectrum stands for 5 %; 12.9.1.3")

    def elastic_ordinates(self, direction: str, period: Array) -> Array | None:
        return None

    def static(self, facts: Facts) -> Static:
        c_t, power = (PERIOD_FEET if self.height_unit == "ft" else PERIOD_METRES)[self._system(facts.direction)]
        height = facts.top / FOOT if self.height_unit == "ft" else facts.top
        approximate = c_t * height**power
        longest = self.limit_of_period() * approximate
        period = min(facts.period, longest)
        reduction = self._reduction(facts.direction)
        coefficient, why = self.coefficient(period, reduction)
        compared = [
            self._expression(f"{side} bound of C_s", found, expression, period, reduction)
            for side, bounds in zip(("Upper", "Lower"), self._bounds(period, reduction), strict=True)
            for found, expression in bounds
            if expression != why
        ]
        shear = coefficient * facts.total
        relations = (
            Relation(
                "Approximate period", f"T_a = C_t h_n^x, h_n in {self.height_unit}", f"{c_t:g} × ({{0}})^{power:g}",
                (Value(facts.top, "feet" if self.height_unit == "ft" else "metres"),), Value(approximate, "period"),
                "12.8.2.1, Table 12.8-2",
            ),
            Relation(
                "Longest period used", "C_u T_a", "{0} × {1}",
                (Value(self.limit_of_period(), "ratio"), Value(approximate, "period")), Value(longest, "period"),
                "12.8.2, Table 12.8-1",
            ),
            *compared,
            self._expression("Seismic response coefficient", coefficient, why, period, reduction, "C_s = "),
            Relation(
                "Static base shear", "V = C_s W", "{0} × {1}", (Value(coefficient, "coefficient"), Value(facts.total, "force")),
                Value(shear, "force"), self._eq("12.8.1", "12.8-1"),
            ),
        )  # fmt: skip
        return Static(approximate, longest, period, coefficient, shear, why, relations, "12.8.1")

    def _expression(
        self, what: str, found: float, why: str, period: float, reduction: float, symbol: str = ""
    ) -> Relation:
        """An expression for C_s with its values; `found` is what it gives."""
        r, s_ds, s_d1 = Value(reduction, "ratio"), Value(self.s_ds, "ratio"), Value(self.s_d1, "ratio")
        t, t_l, s_1 = Value(period, "period"), Value(self.t_l, "period"), Value(self.s_1, "ratio")
        i_e = Value(self.importance().value, "ratio")
        substitution, values, number = {
            "S_DS/(R/I_e)": ("{0} / {1}", (s_ds, r), "12.8-2"),
            FALLING: ("{0} / ({1} × {2})", (s_d1, t, r), "12.8-3"),
            FAR: ("{0} × {1} / (({2})² × {3})", (s_d1, t_l, t, r), "12.8-4"),
            "0.044 S_DS I_e": ("0.044 × {0} × {1}", (s_ds, i_e), "12.8-5"),
            "0.01": ("0.01", (), "12.8-5"),
            NEAR_FAULT: ("0.5 × {0} / {1}", (s_1, r), "12.8-6"),
        }[why.removeprefix("1.5 ")]
        if why.startswith("1.5 "):
            substitution = f"1.5 × {substitution}"
        clause = self._eq("12.8.1.1", number) + (", 11.4.8" if self._beyond_plateau() > 1.0 else "")
        return Relation(what, symbol + why, substitution, values, Value(found, "coefficient"), clause)

    def distribution(self, facts: Facts, static: Static) -> tuple[Array, str]:
        return by_height(facts, static.shear, self.exponent(static.period)), self._eq("12.8.3", "12.8-12")

    def distribution_relation(self, facts: Facts, static: Static) -> tuple[Relation, ...]:
        k, t = self.exponent(static.period), Value(static.period, "period")
        relation, how = {
            1.0: ("k = 1, for T ≤ 0.5 s", "1, for {0} ≤ 0.5 s"),
            2.0: ("k = 2, for T ≥ 2.5 s", "2, for {0} ≥ 2.5 s"),
        }.get(k, ("k = 1 + (T − 0.5 s)/2 s", "1 + ({0} − 0.5 s) / 2 s"))
        power = Relation("Exponent of the heights", relation, how, (t,), Value(k, "ratio"), "12.8.3")
        return power, at_top(facts, static.shear, k, "^k", self._eq("12.8.3", "12.8-12"))

    @staticmethod
    def exponent(period: float) -> float:
        """k at a period [s]: 1 up to 0.5 s, 2 from 2.5 s, linear between (12.8.3)."""
        return float(np.interp(period, [0.5, 2.5], [1.0, 2.0]))

    def modes(self) -> Answer:
        return Answer(
            "All modes, 100 % of the mass, those under 0.05 s at 0.05 s; or at least 90 % of the mass in each direction.",
            "12.9.1.1",
        )

    def combination(self) -> tuple[tuple[Rule, ...], str]:
        return ("CQC", "SRSS"), "12.9.1.3"

    def independent(self, period: Array) -> Answer:
        ratio = closest(period)
        close = ratio > 0.9
        text = f"neighbouring periods in a ratio of up to {ratio:.3f}; the edition gives no number for close modes"
        return Answer(text, "12.9.1.3", "judgement" if close else "passes")

    def scaling(self, facts: Facts, modal: float, static: Static | None) -> Scaling:
        assert static is not None
        forces = up_to_static(static.shear, modal)
        drifts = forces if static.governing == NEAR_FAULT else 1.0
        if forces == 1.0:
            text = "The modal base shear is at or above the static one: nothing is scaled"
        elif drifts == 1.0:
            text = f"Forces are multiplied by {forces:.3f}, static over modal base shear; drifts are not"
        else:
            text = (
                f"Forces and drifts are multiplied by {forces:.3f}, static over modal base shear: {NEAR_FAULT} governs"
            )
        return Scaling(forces, drifts, f"{text}.", "12.9.1.4.1, 12.9.1.4.2")

    def torsion(self, direction: str) -> tuple[float | None, Answer]:
        return None, Answer(
            "Accidental torsion needs a model with rotation; a planar one cannot show it.",
            "12.8.4.2, 12.9.1.5",
            "not assessed",
        )

    def drift(self, direction: str) -> Factor:
        return Factor("C_d/I_e", self._c_d(direction) / self.importance().value, self._eq("12.8.6", "12.8-15"))

    def drift_limit(self, facts: Facts) -> tuple[Array, Relation]:
        if self.structure == LOW and facts.height.size > 4:
            raise ModelError(
                "structure", f'got "{LOW}" with {facts.height.size} storeys', "goes with up to four storeys"
            )
        share = DRIFT[self.structure][self.risk_category]
        divided = self.category in "DEF" and self._system(facts.direction) in MOMENT_FRAMES
        rho = self.rho if divided else 1.0
        limit = share * facts.storey_height / rho
        relation = Relation(
            "Allowable drift, lowest storey", "Δ_a = α h / ρ" if divided else "Δ_a = α h",
            f"{share:g} × {{0}} / {rho:g}" if divided else f"{share:g} × {{0}}",
            (Value(float(facts.storey_height[0]), "length"),), Value(float(limit[0]), "displacement"),
            "12.12.1.1, Table 12.12-1" if divided else "12.12.1, Table 12.12-1",
        )  # fmt: skip
        return limit, relation

    def second_order(
        self, facts: Facts, gravity: Array, shear: Array, drift: Array, in_stiffness: bool = False
    ) -> SecondOrder:
        c_d, i_e = self._c_d(facts.direction), self.importance().value
        entering = drift * i_e / c_d
        theta = stability(gravity, entering, shear, facts.storey_height, in_stiffness)
        limit = min(0.5 / (self.shear_ratio * c_d), 0.25)
        if in_stiffness:
            return self._in_stiffness(theta, entering, limit)
        worst = float(theta.max())
        verdict: Verdict = "exceeds" if worst > limit else "passes"
        if worst > limit:
            text = "potentially unstable: to be redesigned"
        elif worst <= 0.1:
            text = "second-order effects need not be considered"
        else:
            text = "displacements and forces are multiplied by 1/(1 − θ)"
        clause = self._eq("12.8.7", "12.8-16")
        return SecondOrder(theta, entering, 0.1, limit, amplified(theta, 0.1), verdict, text, clause)

    def _in_stiffness(self, theta: Array, drift: Array, limit: float) -> SecondOrder:
        """θ of drifts that hold second-order effects: θ/(1 + θ) ≤ θ_max is θ ≤ θ_max/(1 − θ_max)."""
        below = f"θ/(1 + θ) is held against θ_max = {limit:.3g}"
        verdict: Verdict = "exceeds" if float(theta.max()) > limit / (1.0 - limit) else "passes"
        text = f"second-order effects are in the stiffness, and {below}"
        if verdict == "exceeds":
            text = f"potentially unstable, to be redesigned: {below}"
        clause = self._eq("12.8.7", "12.8-17")
        return SecondOrder(theta, drift, 0.1, limit / (1.0 - limit), np.ones(theta.size), verdict, text, clause)

    def irregularities(self, facts: Facts, stiffness: Array, drift: Array) -> tuple[Screen, ...]:
        return vertical(facts, stiffness, drift / facts.storey_height, self.category, self.mass_irregularity)

    def separation(self, displacement: float) -> tuple[float | None, str]:
        return displacement, "12.12.2, 12.12.3"
