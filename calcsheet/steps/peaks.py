"""Modal peaks under the design demand, combined; for the stiffness sets that serve forces and drifts."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from functools import partial
from typing import cast

from calcsheet.core.arrays import Array, Frozen, agrees
from calcsheet.core.basis import Basis
from calcsheet.core.codes.edition import Scaling
from calcsheet.core.model import Model, models_of
from calcsheet.core.modes import Modes, modes_of
from calcsheet.core.participation import Participation, participation
from calcsheet.core.peaks import Peaks, peaks
from calcsheet.core.response import Combined, combine, left_over, related
from calcsheet.steps.demand import Demand
from calcsheet.steps.step import Caution, Done, Line, Number, Outcome, Step

PEAK = agrees(rtol=1e-6, atol=1e-6)
TERMS = 6
"""Terms of a combination that go on one line."""


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
    softer = {} if drifting == served else {m.direction: m for m in models_of(storeys.inputs, drifting)}
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
            if drifts is not forces:
                cautions += _close(given, drifts.modes, direction, f"{direction}-drifts")
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

    def peaks(self, ordinates: Callable[[Array], Array], choice: str) -> Peaks:
        period = self.modes.period
        rest = left_over(ordinates, choice, float(period[-1]), period.size, self.model.size)
        return peaks(self.model, self.modes, self.part, ordinates(period), rest)


def _peaks(basis: Basis, demand: Demand, forces: _Column, drifts: _Column) -> DirectionPeaks:
    edition, direction, rule = basis.edition, demand.direction, basis.combination
    damping, spectrum = edition.damping().value, partial(edition.ordinates, direction)
    modal = forces.peaks(spectrum, basis.residual)
    correlated = other_related = related(forces.modes, rule, damping, modal.residual)
    combined = other = combine(modal, correlated, rule)
    if drifts is not forces:
        other_related = related(drifts.modes, rule, damping, modal.residual)
        other = combine(drifts.peaks(spectrum, basis.residual), other_related, rule)
    cap = None
    if edition.elastic_ordinates(direction, drifts.modes.period) is not None:
        elastic = cast(Callable[[Array], Array], partial(edition.elastic_ordinates, direction))
        cap = combine(drifts.peaks(elastic, basis.residual), other_related, rule)
    return DirectionPeaks(
        direction=direction,
        rule=rule,
        ordinate=modal.ordinate,
        residual=modal.residual,
        shear=modal.shear,
        moment=modal.moment,
        related=correlated,
        forces=combined,
        drifts=other,
        cap=cap,
        scaling=edition.scaling(demand.facts, float(combined.shear[0]), demand.static),
    )


def _lines(item: DirectionPeaks, at: str) -> list[Line]:
    """The combined base shear, where it goes on a line; else the tables of modal shears and of correlation show it."""
    count = item.shear.shape[1]
    if count > TERMS:
        return []
    pairs = [(i, j) for i in range(count) for j in range(i + 1, count) if item.related[i, j] != 0.0]
    if count + len(pairs) > TERMS:
        return []
    numbers = [Number(float(v), "force", f"{at}/shear/0/{i}") for i, v in enumerate(item.shear[0])]
    numbers += [Number(float(item.related[i, j]), "correlation", f"{at}/related/{i}/{j}") for i, j in pairs]
    terms = [f"({{{i}}})²" for i in range(count)]
    terms += [f"2 × {{{count + k}}} × {{{i}}} × {{{j}}}" for k, (i, j) in enumerate(pairs)]
    result = Number(float(item.forces.shear[0]), "force", f"{at}/forces/shear/0")
    relation = "V = √(Σ Σ ρ_ij V_i V_j)" if pairs else "V = √(Σ V_n²)"
    substitution = f"√({' + '.join(terms)})"
    return [Line(f"Modal base shear, {item.direction}", relation, substitution, tuple(numbers), result, item.rule)]


def _cautions(basis: Basis, column: _Column, direction: str) -> list[Caution]:
    cautions = _close(basis, column.modes, direction, direction)
    if column.modes.omega.size < column.model.size and basis.residual == "none":
        cautions.append(
            Caution(
                "no-residual",
                f"In {direction} modes are left out and no residual stands for them.",
                subject=direction,
            )
        )
    if column.modes.omega.size < column.model.size and basis.residual == "zero period":
        cautions.append(
            Caution(
                "residual-reduced",
                f"In {direction} the residual takes the design ordinate at period 0, which is reduced already.",
                subject=direction,
            )
        )
    return cautions


def _close(basis: Basis, modes: Modes, direction: str, subject: str) -> list[Caution]:
    """Modes that are not plainly apart, combined by a rule that takes them as unrelated."""
    independent = basis.edition.independent(modes.period)
    if basis.combination != "SRSS" or independent.verdict == "passes":
        return []
    of = "" if subject == direction else ", for drifts,"
    text = (
        f"In {direction}{of} modes are combined by {basis.combination}, which takes them as unrelated: {independent.text} "
        f"({independent.clause})."
    )
    return [Caution("srss-with-close-modes", text, answer=True, subject=subject)]


METHOD = r"""
Modal values come first, and each quantity is combined from its own. A mode's forces and displacements are

$$f_n = \Gamma_n M \psi_n S_{a,n} , \qquad u_n = \Gamma_n \psi_n \frac{S_{a,n}}{\omega_n^{2}} ,$$

its storey shears and overturning moments follow by statics, its drifts as differences of its displacements (Chopra,
Dynamics of Structures, sections 13.2 and 13.7, from memory). The peak of a quantity $r$ is

$$r = \sqrt{\sum_i \sum_j \rho_{ij}\, r_i\, r_j}$$

with the signs of the modal values kept; $\rho_{ij} = \delta_{ij}$ for SRSS, and for CQC with one damping ratio $\xi$
and $r = \omega_j/\omega_i$

$$\rho_{ij} = \frac{8 \xi^{2} (1 + r)\, r^{3/2}}{(1 - r^{2})^{2} + 4 \xi^{2} r (1 + r)^{2}}$$

(Der Kiureghian, 1981; Wilson, Der Kiureghian and Bayo, 1981; from memory). Combined storey forces do not add up to the combined
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
