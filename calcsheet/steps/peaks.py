"""Modal peaks under the design demand, combined; for the stiffness sets that serve forces and drifts."""

from __future__ import annotations

from dataclasses import dataclass, field

from calcsheet.core.arrays import Array, Frozen, agrees
from calcsheet.core.basis import Basis
from calcsheet.core.codes.edition import Edition, Facts, Scaling
from calcsheet.core.model import Model, models_of
from calcsheet.core.modes import Modes, modes_of
from calcsheet.core.participation import Participation, participation
from calcsheet.core.peaks import Peaks, peaks
from calcsheet.core.response import Combined, combine, left_over, related
from calcsheet.steps.demand import Demand
from calcsheet.steps.step import Caution, Done, Line, Number, Outcome, Step

PEAK = agrees(rtol=1e-6, atol=1e-6)


@dataclass(frozen=True)
class PeaksOptions:
    """Nothing is asked of this step: basis and job card say it all."""


@dataclass(frozen=True, eq=False)
class DirectionPeaks(Frozen):
    """Peaks in one direction, unscaled.

    Parameters
    ----------
    direction : str
        "x" or "y".
    rule : str
        Rule of combination.
    ordinate : (m,) array
        Ordinate of each column [m/s²].
    residual : bool
        Whether a last column holds what the modes kept leave out.
    shear, moment : (n, m) array
        Signed modal storey shears [kN] and overturning moments at the storeys' feet [kN·m], lowest first.
    related : (m, m) array
        Correlation of the columns.
    forces : Combined
        Combined peaks with the stiffness set that serves forces.
    drifts : Combined
        Combined peaks with the set that serves drifts.
    cap : Combined or None
        Combined peaks of the elastic spectrum with that set, which displacements need not exceed.
    scaling : Scaling
        What the edition multiplies modal results by.
    drift_period : float
        First period with the set that serves drifts [s].
    """

    direction: str
    rule: str
    ordinate: Array = field(metadata=agrees(rtol=1e-7))
    residual: bool
    shear: Array = field(metadata=PEAK)
    moment: Array = field(metadata=PEAK)
    related: Array = field(metadata=agrees(rtol=1e-6, atol=1e-8))
    forces: Combined
    drifts: Combined
    cap: Combined | None
    scaling: Scaling
    drift_period: float = field(metadata=agrees(rtol=1e-8))


@dataclass(frozen=True, eq=False)
class PeaksResult:
    """Peaks in each direction.

    Parameters
    ----------
    stiffness_forces, stiffness_drifts : str
        Names of the stiffness sets.
    directions : tuple of DirectionPeaks
        x before y.
    """

    stiffness_forces: str
    stiffness_drifts: str
    directions: tuple[DirectionPeaks, ...]


def run(options: PeaksOptions, storeys: Done, modes: Done, parts: Done, basis: Done, demand: Done) -> Outcome:
    given: Basis = basis.inputs
    served, drifting = modes.result.stiffness, storeys.inputs.drifts
    participations = {p.direction: p for p in parts.result.directions}
    demands: dict[str, Demand] = {d.direction: d for d in demand.result.directions}
    softer = {m.direction: m for m in models_of(storeys.inputs, drifting)}
    found: list[DirectionPeaks] = []
    lines: list[Line] = []
    cautions: list[Caution] = []
    for model, solved in zip(models_of(storeys.inputs, served), modes.result.models, strict=True):
        for direction in model.direction:
            forces = _Column(model, solved.modes, participations[direction])
            drifts = forces
            if drifting != served:
                drifts = _Column.solved(softer[model.direction], direction, forces.modes.omega.size)
            item = _peaks(given, demands[direction], forces, drifts)
            at = f"result/directions/{len(found)}"
            found.append(item)
            lines += _lines(item, at)
            cautions += _cautions(given, forces, direction)
    return Outcome(PeaksResult(served, drifting, tuple(found)), tuple(lines), tuple(cautions))


@dataclass(frozen=True, eq=False)
class _Column:
    """A model with its modes and their participation in one direction."""

    model: Model
    modes: Modes
    part: Participation

    @classmethod
    def solved(cls, model: Model, direction: str, keep: int) -> _Column:
        modes = modes_of(model, keep)
        return cls(model, modes, participation(model, modes, direction))

    def peaks(self, edition: Edition, ordinate: Array, choice: str) -> Peaks:
        direction, kept = self.part.direction, self.modes.omega.size
        rest = left_over(edition, direction, choice, float(self.modes.period[-1]), kept, self.model.size)
        return peaks(self.model, self.modes, self.part, ordinate, rest)


def _peaks(basis: Basis, demand: Demand, forces: _Column, drifts: _Column) -> DirectionPeaks:
    edition, direction, facts = basis.edition, demand.direction, demand.facts
    damping = edition.damping().value
    modal = forces.peaks(edition, demand.ordinate, basis.residual)
    correlated = related(forces.modes, basis.combination, damping, modal.residual)
    combined = combine(modal, correlated, basis.combination)
    other, other_related = combined, correlated
    if drifts is not forces:
        soft = drifts.peaks(edition, edition.ordinates(direction, drifts.modes.period), basis.residual)
        other_related = related(drifts.modes, basis.combination, damping, soft.residual)
        other = combine(soft, other_related, basis.combination)
    elastic = edition.elastic_ordinates(direction, drifts.modes.period)
    cap = None
    if elastic is not None:
        bound = peaks(drifts.model, drifts.modes, drifts.part, elastic)
        cap = combine(bound, related(drifts.modes, basis.combination, damping, False), basis.combination)
    return DirectionPeaks(
        direction=direction,
        rule=basis.combination,
        ordinate=modal.ordinate,
        residual=modal.residual,
        shear=modal.shear,
        moment=modal.moment,
        related=correlated,
        forces=combined,
        drifts=other,
        cap=cap,
        scaling=_scaling(edition, facts, float(combined.shear[0]), demand),
        drift_period=float(drifts.modes.period[0]),
    )


def _scaling(edition: Edition, facts: Facts, modal: float, demand: Demand) -> Scaling:
    return edition.scaling(facts, modal, demand.static)


def _lines(item: DirectionPeaks, at: str) -> list[Line]:
    """The combined base shear, from the modes that make most of it."""
    squares = item.shear[0] ** 2
    if item.rule != "SRSS" or item.shear.shape[1] > 4:
        return []
    numbers = tuple(Number(float(v), "force", f"{at}/shear/0/{i}") for i, v in enumerate(item.shear[0]))
    terms = " + ".join(f"{{{i}}}²" for i in range(squares.size))
    result = Number(float(item.forces.shear[0]), "force", f"{at}/forces/shear/0")
    return [Line(f"Modal base shear, {item.direction}", "V = √(Σ V_n²)", f"√({terms})", numbers, result, "SRSS")]


def _cautions(basis: Basis, column: _Column, direction: str) -> list[Caution]:
    cautions = []
    independent = basis.edition.independent(column.modes.period)
    if basis.combination == "SRSS" and independent.verdict != "passes":
        cautions.append(
            Caution(
                f"srss-with-close-modes-{direction}",
                f"In {direction} SRSS takes the modes as unrelated: {independent.text} ({independent.clause}).",
                answer=True,
            )
        )
    if column.modes.omega.size < column.model.size and basis.residual == "none":
        cautions.append(
            Caution(f"no-residual-{direction}", f"In {direction} modes are left out and no residual stands for them.")
        )
    if column.modes.omega.size < column.model.size and basis.residual == "zero period":
        cautions.append(
            Caution(
                f"residual-reduced-{direction}",
                f"In {direction} the residual takes the design ordinate at period 0, which is reduced already.",
            )
        )
    return cautions


METHOD = r"""
Modal values come first, and each quantity is combined from its own. A mode's forces and displacements are

$$f_n = \Gamma_n M \psi_n S_{a,n} , \qquad u_n = \Gamma_n \psi_n \frac{S_{a,n}}{\omega_n^{2}} ,$$

its storey shears and overturning moments follow by statics, its drifts as differences of its displacements (Chopra,
Dynamics of Structures, sections 13.2 and 13.7, from memory). The peak of a quantity $r$ is

$$r = \sqrt{\sum_i \sum_j \rho_{ij}\, r_i\, r_j}$$

with the signs of the modal values kept; $\rho_{ij} = \delta_{ij}$ for SRSS, and for CQC as Der Kiureghian (1981) and
Wilson, Der Kiureghian and Bayo (1981) give it (from memory). Combined storey forces do not add up to the combined
shear, so none is ever summed.
"""

PEAKS = Step(
    "peaks",
    1,
    "Modal peaks",
    PeaksOptions,
    PeaksResult,
    ("storeys", "modes", "participation", "basis", "demand"),
    run,
    METHOD,
)
