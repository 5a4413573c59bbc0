"""IS 1893 (Part 1):2016: one curve for the static method, one for the response spectrum method. Clauses from memory.

To be confirmed: letters of the items of Table 6; whether mass irregularity looks at the floor above as well as the one below
(here at both, the stricter reading).
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import ClassVar

import numpy as np

from calcsheet.core.arrays import Array
from calcsheet.core.codes.common import at_top, by_height, closest, heavier, listed, softer, up_to_static
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
    key,
)
from calcsheet.core.combine import GROUPED, Rule
from calcsheet.core.errors import ModelError
from calcsheet.core.totals import GRAVITY

ZONE = {"II": 0.10, "III": 0.16, "IV": 0.24, "V": 0.36}
"""Zone factor Z (Table 3)."""
LEAST = {"II": 0.007, "III": 0.011, "IV": 0.016, "V": 0.024}
"""Least base shear over seismic weight (7.2.2, Table 7)."""
SOIL = {"hard": (0.40, 1.00, 0.25), "medium": (0.55, 1.36, 0.34), "soft": (0.67, 1.67, 0.42)}
"""End of the plateau [s], numerator of the falling branch [s], and ordinate beyond 4 s (6.4.2)."""
PERIOD = {"concrete moment frame": 0.075, "composite moment frame": 0.080, "steel moment frame": 0.085}
"""Coefficient of h^0.75 of moment frames without infill (7.6.2(a))."""
WALLS = "concrete walls"
SYSTEMS = (*PERIOD, WALLS, "other")


@dataclass(frozen=True)
class IS1893(Edition):
    """Parameters of IS 1893 (Part 1):2016.

    Parameters
    ----------
    zone : {"II", "III", "IV", "V"}
        Seismic zone.
    soil : {"hard", "medium", "soft"}
        Soil type.
    importance_value : {1.0, 1.2, 1.5}
        Importance factor I.
    r_x, r_y : float
        Response reduction factor in each direction.
    system_x, system_y : str
        Lateral system for the approximate period, one of `SYSTEMS`.
    base_x, base_y : float or None
        Base dimension of the building along each direction, for concrete walls and "other" systems [m].
    wall_area_x, wall_area_y : float or None
        Effective area A_w of the walls of the first storey in each direction, for concrete walls [m²].
    """

    zone: str = field(metadata=key(choices=tuple(ZONE), help="seismic zone"))
    soil: str = field(metadata=key(choices=tuple(SOIL), help="soil type"))
    importance_value: float = field(metadata=key(choices=(1.0, 1.2, 1.5), help="importance factor"))
    r_x: float = field(metadata=key(least=1.0, help="R in x"))
    r_y: float = field(metadata=key(least=1.0, help="R in y"))
    system_x: str = field(metadata=key(choices=SYSTEMS, help="lateral system in x"))
    system_y: str = field(metadata=key(choices=SYSTEMS, help="lateral system in y"))
    base_x: float | None = field(
        default=None, metadata=key(above=0.0, quantity="length", help="base dimension along x")
    )
    base_y: float | None = field(
        default=None, metadata=key(above=0.0, quantity="length", help="base dimension along y")
    )
    wall_area_x: float | None = field(
        default=None, metadata=key(above=0.0, quantity="area", help="effective area of the walls in x")
    )
    wall_area_y: float | None = field(
        default=None, metadata=key(above=0.0, quantity="area", help="effective area of the walls in y")
    )

    name: ClassVar[str] = "IS 1893 (Part 1):2016"
    kind: ClassVar[str] = name
    level: ClassVar[str] = (
        "design force level: importance factor I and response reduction factor R are in; partial load factors, vertical "
        "component and accidental torsion are not"
    )

    def __post_init__(self) -> None:
        for direction, system in (("x", self.system_x), ("y", self.system_y)):
            needed = {"base": system in (WALLS, "other"), "wall_area": system == WALLS}
            for name, asked in needed.items():
                where = f"{name}_{direction}"
                if asked and getattr(self, where) is None:
                    raise ModelError(where, "missing", f'must be given with system_{direction} "{system}"')

    def _factor(self, direction: str) -> float:
        """(Z/2)(I/R)."""
        return ZONE[self.zone] / 2.0 * self.importance_value / (self.r_x if direction == "x" else self.r_y)

    def curve(self, period: Array, method: str) -> Array:
        """S_a/g, (m,), for 5 % damping.

        Parameters
        ----------
        period : (m,) array
            Periods [s].
        method : {"static", "spectrum"}
            The static curve starts with its plateau; that of the response spectrum method rises to it, 1 + 15 T to 0.10 s.

        Notes
        -----
        6.4.2(a) and (b).
        """
        t = np.asarray(period, dtype=float)
        end, top, far = SOIL[self.soil]
        falling = np.where(t <= 4.0, top / np.maximum(t, end), far)
        found = np.where(t <= end, 2.5, falling)
        return found if method == "static" else np.where(t < 0.1, 1.0 + 15.0 * t, found)

    def permitted(self, facts: Facts) -> Answer:
        low = self.zone == "II" and facts.top < 15.0
        alone = "may" if low else "may not"
        return Answer(
            "Dynamic analysis by the response spectrum method applies to every building; the static method alone "
            f"{alone} do, at {facts.top:.1f} m in zone {self.zone}, for a regular building.",
            "7.7.1",
        )

    def importance(self) -> Factor:
        return Factor("I", self.importance_value, "Table 8")

    def ordinates(self, direction: str, period: Array) -> Array:
        return self.curve(period, "spectrum") * self._factor(direction) * GRAVITY

    def ordinate_relation(self, direction: str, period: float) -> tuple[Relation, ...]:
        branch = self._branch(period, "spectrum")
        r = self.r_x if direction == "x" else self.r_y
        values = (
            Value(ZONE[self.zone], "ratio"), Value(self.importance_value, "ratio"), Value(r, "ratio"), branch.result,
            Value(GRAVITY, "acceleration"),
        )  # fmt: skip
        ordinate = Value(float(self.ordinates(direction, np.array([period]))[0]), "acceleration")
        how, clause = "{0} / 2 × {1} / {2} × {3} × {4}", "6.4.2, 7.7.5.4"
        return branch, Relation("Design ordinate at T₁", "(Z/2)(I/R)(S_a/g) g", how, values, ordinate, clause)

    def _branch(self, period: float, method: str) -> Relation:
        """S_a/g at a period [s] on the curve of a method, by the branch that holds."""
        end, top, far = SOIL[self.soil]
        t = Value(period, "period")
        if method == "spectrum" and period < 0.1:
            relation, how = "S_a/g = 1 + 15 T, for T < 0.10 s", "1 + 15 × {0}, for {0} < 0.10 s"
        elif period <= end:
            relation, how = "S_a/g = 2.5, for T ≤ T_p", f"2.5, for {{0}} ≤ {end:.2f} s"
        elif period <= 4.0:
            relation, how = "S_a/g = c/T, for T_p < T ≤ 4 s", f"{top:.2f} / {{0}}, for {end:.2f} s < {{0}} ≤ 4 s"
        else:
            relation, how = "S_a/g beyond 4 s", f"{far:.2f}, for {{0}} > 4 s"
        where = "T₁" if method == "spectrum" else "T_a"
        result = Value(float(self.curve(np.array([period]), method)[0]), "ratio")
        clause = f"6.4.2({'b' if method == 'spectrum' else 'a'}), {self.soil} soil"
        return Relation(f"Spectral ordinate at {where}", relation, how, (t,), result, clause)

    def elastic_ordinates(self, direction: str, period: Array) -> Array | None:
        return None

    def damping(self) -> Factor:
        return Factor("ξ", 0.05, "7.2.4: 5 % for all buildings")

    def static(self, facts: Facts) -> Static:
        system = self.system_x if facts.direction == "x" else self.system_y
        period, relation = self._period(facts, system)
        branch = self._branch(period, "static")
        factor = self._factor(facts.direction)
        by_period, least = factor * branch.result.value, LEAST[self.zone]
        coefficient = max(by_period, least)
        shear = coefficient * facts.total
        z, i = Value(ZONE[self.zone], "ratio"), Value(self.importance_value, "ratio")
        r = Value(self.r_x if facts.direction == "x" else self.r_y, "ratio")
        governing = "(Z/2)(S_a/g)/(R/I)" if by_period >= least else "least base shear of Table 7"
        compared = [
            Relation(
                "Seismic coefficient", "A_h = (Z/2)(S_a/g)/(R/I)", "({0} / 2) × {1} / ({2} / {3})",
                (z, branch.result, r, i), Value(by_period, "coefficient"), "6.4.2",
            ),
            Relation(
                "Lower bound of A_h, base shear over weight", f"zone {self.zone}", f"{least:g}", (),
                Value(least, "coefficient"), "7.2.2, Table 7",
            ),
        ]  # fmt: skip
        result = Value(coefficient, "coefficient")
        relations = (
            relation,
            branch,
            *(compared[::-1] if by_period >= least else compared),
            Relation(
                "Static base shear", "V̄_B = A_h W", "{0} × {1}", (result, Value(facts.total, "force")),
                Value(shear, "force"), "7.6.1",
            ),
        )  # fmt: skip
        return Static(period, None, period, coefficient, shear, governing, relations, "7.6.1, 7.2.2")

    def _period(self, facts: Facts, system: str) -> tuple[float, Relation]:
        """T_a [s], and how it comes about (7.6.2)."""
        height = Value(facts.top, "metres")

        def found(period: float, relation: str, how: str, clause: str, *more: Value) -> tuple[float, Relation]:
            result = Value(period, "period")
            return period, Relation("Approximate period", relation, how, (height, *more), result, clause)

        if system in PERIOD:
            c = PERIOD[system]
            return found(c * facts.top**0.75, "T_a = C h^0.75", f"{c:g} × ({{0}})^0.75", "7.6.2(a)")
        along_x = facts.direction == "x"
        base, area = (self.base_x, self.wall_area_x) if along_x else (self.base_y, self.wall_area_y)
        assert base is not None  # __post_init__ asks for it
        by_base = 0.09 * facts.top / base**0.5
        if system == WALLS:
            assert area is not None
            by_area = 0.075 * facts.top**0.75 / area**0.5
            if by_area >= by_base:
                how = "0.075 × ({0})^0.75 / √({1})"
                return found(by_area, "T_a = 0.075 h^0.75/√A_w", how, "7.6.2(b)", Value(area, "square metres"))
        clause = "7.6.2(b)" if system == WALLS else "7.6.2(c)"
        return found(by_base, "T_a = 0.09 h/√d", "0.09 × {0} / √{1}", clause, Value(base, "metres"))

    def distribution(self, facts: Facts, static: Static) -> tuple[Array, str]:
        return by_height(facts, static.shear, 2.0), "7.6.3(a)"

    def distribution_relation(self, facts: Facts, static: Static) -> tuple[Relation, ...]:
        return (at_top(facts, static.shear, 2.0, "²", "7.6.3(a)"),)

    def modes(self) -> Answer:
        return Answer(
            "Modal masses of the modes used add up to at least 90 % of the seismic mass; modes above 33 Hz enter as a residual.",
            "7.7.5.2",
        )

    def combination(self) -> tuple[tuple[Rule, ...], str]:
        return ("CQC", "grouped", "SRSS"), "7.7.5.3"

    def independent(self, period: Array) -> Answer:
        apart = 1.0 / closest(period) - 1.0 if period.size > 1 else np.inf
        text = f"neighbouring frequencies apart by {apart:.1%} of the lower at least, against 10 %"
        if period.size == 1:
            text = "one mode"
        return Answer(text, "7.7.5.3", "passes" if apart > GROUPED else "exceeds")

    def scaling(self, facts: Facts, modal: float, static: Static | None) -> Scaling:
        assert static is not None
        forces = up_to_static(static.shear, modal)
        text = (
            f"Force quantities are multiplied by V̄_B/V_B = {forces:.3f}; displacements are not"
            if forces > 1.0
            else "The modal base shear is at or above the static one: nothing is scaled"
        )
        return Scaling(forces, 1.0, f"{text}.", "7.2.2, 7.7.3, 7.11.1.2")

    def torsion(self, direction: str) -> tuple[float | None, Answer]:
        return None, Answer(
            "Design eccentricities need a model with rotation; a planar one cannot show them.", "7.8.2", "not assessed"
        )

    def drift(self, direction: str) -> Factor:
        return Factor("1", 1.0, "7.11.1: drift under the design force, not multiplied by R")

    def drift_limit(self, facts: Facts) -> tuple[Array, Relation]:
        limit = 0.004 * facts.storey_height
        relation = Relation(
            "Drift limit, lowest storey", "0.004 h", "0.004 × {0}",
            (Value(float(facts.storey_height[0]), "length"),), Value(float(limit[0]), "displacement"), "7.11.1.1",
        )  # fmt: skip
        return limit, relation

    def second_order(
        self, facts: Facts, gravity: Array, shear: Array, drift: Array, in_stiffness: bool = False
    ) -> SecondOrder | None:
        return None

    def irregularities(self, facts: Facts, stiffness: Array, drift: Array) -> tuple[Screen, ...]:
        soft, heavy = softer(stiffness, 1.0), heavier(facts.weight, 1.5)
        screens = [
            Screen(
                "soft storey", "exceeds" if soft else "passes", f"softer than the storey above: {listed(soft, 'storey')}",
                "dynamic analysis; measures of 7.10 for open storeys" if soft else "", "7.1, Table 6(i)",
            ),
            Screen(
                "mass", "exceeds" if heavy else "passes", f"heavier than 1.5 times a neighbour: {listed(heavy, 'level')}",
                "dynamic analysis in zones III to V" if heavy else "", "7.1, Table 6(ii)",
            ),
            self._first_three(facts),
            self._apart(facts),
        ]  # fmt: skip
        missing = (
            ("vertical geometry", "plan dimensions of the lateral system at each level"),
            ("strength (weak storey)", "storey strengths"),
            ("torsion and plan irregularities", "a model with rotation and the plan")
            if facts.plan is None
            else (
                "plan irregularities beside torsion",
                "the layout of floors and lines; torsion stands with the edges",
            ),
        )
        return (
            *screens,
            *(Screen(n, "not assessed", f"missing: {what}", "", "7.1, Tables 5, 6") for n, what in missing),
        )

    def _first_three(self, facts: Facts) -> Screen:
        """First three modes of a direction move 65 % of the mass or more."""
        name, clause = "mass in the first three modes", "7.1, Table 6(vii)"
        if facts.share_of_three is None:
            return Screen(name, "not assessed", "missing: effective masses", "", clause)
        low = facts.share_of_three < 0.65
        consequence = "to be reconfigured: every zone asks for 65 %" if low else ""
        text = f"{facts.share_of_three:.1%} of the mass, against 65 %"
        return Screen(name, "exceeds" if low else "passes", text, consequence, clause)

    def _apart(self, facts: Facts) -> Screen:
        """First periods of both directions lie apart by 10 % of the larger or more, in zones IV and V."""
        name, clause = "first periods of both directions", "7.1, Table 6(vii)"
        if facts.other_period is None:
            return Screen(name, "not assessed", "missing: the other direction", "", clause)
        shorter, longer = sorted((facts.period, facts.other_period))
        close = shorter > 0.9 * longer
        text = f"{shorter:.3g} s and {longer:.3g} s, apart by {1.0 - shorter / longer:.1%} of the larger, against 10 %"
        if self.zone in ("II", "III"):
            return Screen(name, "passes", f"{text}; asked for in zones IV and V alone", "", clause)
        consequence = "to be reconfigured: zones IV and V ask for 10 %" if close else ""
        return Screen(name, "exceeds" if close else "passes", text, consequence, clause)

    def separation(self, displacement: float) -> tuple[float | None, str]:
        larger = max(self.r_x, self.r_y)
        return (
            larger * displacement,
            f"7.11.3.1: R times the displacement, with R = {larger:g}, the larger of both directions",
        )
