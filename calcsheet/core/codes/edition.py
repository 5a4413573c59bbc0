"""The checklist that every code edition answers, and the words it answers in."""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass, field
from math import inf
from typing import Any, ClassVar, Literal

from calcsheet.core.arrays import Array, Frozen, agrees
from calcsheet.core.combine import Rule

Verdict = Literal["passes", "exceeds", "judgement", "not assessed"]
NOT_HERE = "not in this edition"

CHECKLIST = (
    "permitted",
    "importance",
    "ordinates",
    "ordinate_relation",
    "elastic_ordinates",
    "damping",
    "static",
    "distribution",
    "distribution_relation",
    "modes",
    "combination",
    "independent",
    "scaling",
    "torsion",
    "drift",
    "drift_limit",
    "second_order",
    "irregularities",
    "separation",
)
"""Names of the methods of `Edition`: what a seismic calculation asks of a code."""


def key(**rule: Any) -> dict[str, dict[str, Any]]:
    """Metadata of a parameter of an edition.

    Parameters
    ----------
    **rule
        ``choices``; bounds ``above``, ``least``, ``below``, ``up_to``; ``length`` of a list; ``file`` for a table beside the
        job card; ``quantity`` in the unit table; ``help`` in words.
    """
    return {"key": rule}


@dataclass(frozen=True)
class Value:
    """A number with its quantity in the unit table.

    Parameters
    ----------
    value : float
        The number, in core units.
    quantity : str
        Its quantity.
    """

    value: float = field(metadata=agrees(rtol=1e-7, atol=1e-12))
    quantity: str


@dataclass(frozen=True)
class Relation:
    """A relation with the values used, such as a worked line needs.

    Parameters
    ----------
    quantity : str
        What it gives.
    relation : str
        The relation in symbols.
    substitution : str
        The same with places ``{0}``, ``{1}`` … for `values`.
    values : tuple of Value
        The values used.
    result : Value
        What they give.
    clause : str
        Its source.
    """

    quantity: str
    relation: str
    substitution: str
    values: tuple[Value, ...]
    result: Value
    clause: str


@dataclass(frozen=True)
class Answer:
    """An answer in words.

    Parameters
    ----------
    text : str
        What the edition says here.
    clause : str
        Where it says so.
    verdict : {"passes", "exceeds", "judgement", "not assessed"}
        The answer in one of four words.
    """

    text: str
    clause: str
    verdict: Verdict = "passes"


@dataclass(frozen=True)
class Factor:
    """A factor with its clause.

    Parameters
    ----------
    symbol : str
        Its symbol.
    value : float
        The factor.
    clause : str
        Its source, or `NOT_HERE`.
    """

    symbol: str
    value: float = field(metadata=agrees(rtol=1e-9))
    clause: str


@dataclass(frozen=True, eq=False)
class PlanFacts(Frozen):
    """The plan of rigid floors as it matters to one direction.

    Parameters
    ----------
    eccentricity : (n,) array or None
        Centre of mass beside the centre of stiffness, square to the direction [m]; None where storeys have no centres.
    radius : (n,) array or None
        Torsional radius: √(torsional stiffness over stiffness in the direction) [m].
    gyration : (n,) array
        Radius of gyration of each level's mass [m].
    """

    eccentricity: Array | None = field(metadata=agrees(rtol=1e-8, atol=1e-8))
    radius: Array | None = field(metadata=agrees(rtol=1e-8))
    gyration: Array = field(metadata=agrees(rtol=1e-12))


@dataclass(frozen=True, eq=False)
class Facts(Frozen):
    """What a checklist item may ask about a building in one direction.

    Parameters
    ----------
    direction : str
        "x" or "y".
    period : float
        First period of the model [s].
    height : (n,) array
        Height of each level above the effective base, lowest first [m].
    storey_height : (n,) array
        Height of the storey below each level [m].
    weight : (n,) array
        Seismic weight of each level [kN].
    share_of_three : float or None
        Share of the mass that the first three modes move in this direction; None where it is not known.
    other_period : float or None
        First period in the other direction [s]; None where it is not known.
    plan : PlanFacts or None
        What rigid floors say of their plan; None of a planar model.
    """

    direction: str
    period: float = field(metadata=agrees(rtol=1e-9))
    height: Array = field(metadata=agrees(rtol=1e-12))
    storey_height: Array = field(metadata=agrees(rtol=1e-12))
    weight: Array = field(metadata=agrees(rtol=1e-12))
    share_of_three: float | None = field(default=None, metadata=agrees(rtol=1e-8))
    other_period: float | None = field(default=None, metadata=agrees(rtol=1e-9))
    plan: PlanFacts | None = None

    @property
    def total(self) -> float:
        """Seismic weight [kN]."""
        return float(self.weight.sum())

    @property
    def top(self) -> float:
        """Height of the top level above the effective base [m]."""
        return float(self.height[-1])


@dataclass(frozen=True)
class Static:
    """The code's static base shear in one direction.

    Parameters
    ----------
    approximate_period : float
        Empirical period [s].
    period_limit : float or None
        Longest period that may be used [s].
    period : float
        Period used [s].
    coefficient : float
        Static base shear over seismic weight.
    shear : float
        Static base shear [kN].
    governing : str
        The expression that governs, in words.
    relations : tuple of Relation
        How it comes about: what was compared, then what governs, then the shear.
    clause : str
        Its source.
    """

    approximate_period: float = field(metadata=agrees(rtol=1e-9))
    period_limit: float | None = field(metadata=agrees(rtol=1e-9))
    period: float = field(metadata=agrees(rtol=1e-9))
    coefficient: float = field(metadata=agrees(rtol=1e-9))
    shear: float = field(metadata=agrees(rtol=1e-9))
    governing: str
    relations: tuple[Relation, ...]
    clause: str


@dataclass(frozen=True)
class Scaling:
    """What modal results are multiplied by.

    Parameters
    ----------
    forces, drifts : float
        Factors, at or above 1.
    text : str
        Why, in words.
    clause : str
        Its source.
    """

    forces: float = field(metadata=agrees(rtol=1e-8))
    drifts: float = field(metadata=agrees(rtol=1e-8))
    text: str
    clause: str


@dataclass(frozen=True, eq=False)
class SecondOrder(Frozen):
    """Second-order effects storey by storey.

    Parameters
    ----------
    theta : (n,) array
        Stability coefficient of each storey, lowest first.
    drift : (n,) array
        The drift that enters it [m].
    ignore_up_to, limit : float
        Value up to which the effect is ignored, and the largest allowed.
    factor : (n,) array
        What storey shears and drifts are multiplied by; 1 where ignored.
    verdict : {"passes", "exceeds", "judgement", "not assessed"}
        The outcome.
    text : str
        The outcome in words.
    clause : str
        Its source.
    """

    theta: Array = field(metadata=agrees(rtol=1e-6, atol=1e-10))
    drift: Array = field(metadata=agrees(rtol=1e-6, atol=1e-10))
    ignore_up_to: float = field(metadata=agrees(rtol=1e-12))
    limit: float = field(metadata=agrees(rtol=1e-9))
    factor: Array = field(metadata=agrees(rtol=1e-6))
    verdict: Verdict
    text: str
    clause: str


@dataclass(frozen=True)
class Screen:
    """One irregularity looked at.

    Parameters
    ----------
    name : str
        The irregularity.
    verdict : {"passes", "exceeds", "judgement", "not assessed"}
        The outcome.
    text : str
        The numbers, or what is missing.
    consequence : str
        What follows where it exceeds; empty where nothing does.
    clause : str
        Its source.
    """

    name: str
    verdict: Verdict
    text: str
    consequence: str
    clause: str


class Edition(ABC):
    """A code edition with the parameters of one job; each method answers one item of the checklist.

    Every ordinate and every force is at the edition's own force level, which `level` states.
    """

    name: ClassVar[str]
    """Publication and year, such as "EN 1998-1:2004"."""
    kind: ClassVar[str]
    """The same, by which a stored edition is told from the others."""
    level: ClassVar[str]
    """What its ordinates include and what they do not."""

    @property
    def reach(self) -> float:
        """Longest period that the ordinates are given for [s]; infinite unless they are points."""
        return inf

    @abstractmethod
    def permitted(self, facts: Facts) -> Answer:
        """Whether a modal response spectrum analysis is permitted for the building of `facts`."""

    @abstractmethod
    def importance(self) -> Factor:
        """Importance factor."""

    @abstractmethod
    def ordinates(self, direction: str, period: Array) -> Array:
        """Design ordinates in a direction, (m,), at each period, (m,) [m/s²]; at period 0 too."""

    @abstractmethod
    def ordinate_relation(self, direction: str, period: float) -> tuple[Relation, ...]:
        """How the design ordinate in a direction comes about at a period [s]: the branch that governs, the ordinate last."""

    @abstractmethod
    def elastic_ordinates(self, direction: str, period: Array) -> Array | None:
        """Elastic ordinates in a direction, (m,), at each period, (m,) [m/s²]: their displacements need not be exceeded.

        None where the edition has no such cap.
        """

    @abstractmethod
    def damping(self) -> Factor:
        """Damping ratio that the ordinates stand for, used for the correlation of modes."""

    @abstractmethod
    def static(self, facts: Facts) -> Static | None:
        """Static base shear for the building of `facts`; None where the edition has none."""

    @abstractmethod
    def distribution(self, facts: Facts, static: Static) -> tuple[Array, str]:
        """Force at each level of `facts` that the base shear of `static` makes, (n,) [kN], and its clause."""

    @abstractmethod
    def distribution_relation(self, facts: Facts, static: Static) -> tuple[Relation, ...]:
        """How the force at the top level of `facts` comes about, which the base shear of `static` makes."""

    @abstractmethod
    def modes(self) -> Answer:
        """How many modes are asked for."""

    @abstractmethod
    def combination(self) -> tuple[tuple[Rule, ...], str]:
        """Rules of combination allowed, the preferred one first, and their clause."""

    @abstractmethod
    def independent(self, period: Array) -> Answer:
        """Whether modes with each period, (m,) [s], longest first, may be taken as independent, as SRSS takes them."""

    @abstractmethod
    def scaling(self, facts: Facts, modal: float, static: Static | None) -> Scaling:
        """Factors on modal forces and drifts for the building of `facts`: from the `modal` base shear [kN] and the one of
        `static`."""

    @abstractmethod
    def torsion(self, direction: str) -> tuple[float | None, Answer]:
        """Multiplier of a planar model's actions in a direction for accidental torsion, None where there is none."""

    @abstractmethod
    def drift(self, direction: str) -> Factor:
        """What elastic drifts in a direction, at the force level, are multiplied by for design drifts."""

    @abstractmethod
    def drift_limit(self, facts: Facts) -> tuple[Array, Relation]:
        """Limit of the design drift of each storey of `facts`, (n,) [m], and how it comes about in the lowest."""

    @abstractmethod
    def second_order(
        self, facts: Facts, gravity: Array, shear: Array, drift: Array, in_stiffness: bool = False
    ) -> SecondOrder | None:
        """Stability of each storey of `facts`, None where the edition has no such check.

        From the gravity load at and above it [kN], its shear [kN] and its design drift [m], (n,) each, the last two of one
        unscaled set. With second-order effects `in_stiffness` the drift holds them, and no factor follows.
        """

    @abstractmethod
    def irregularities(self, facts: Facts, stiffness: Array, drift: Array) -> tuple[Screen, ...]:
        """Irregularities of the building of `facts`, from each storey's stiffness [kN/m] and design drift [m], (n,) each."""

    @abstractmethod
    def separation(self, displacement: float) -> tuple[float | None, str]:
        """Gap at the top to a neighbour that does not move [m], from the design displacement there [m]; and its clause."""
