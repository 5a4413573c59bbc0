"""Natural modes of every model of the building, with evidence."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field, replace

import numpy as np

from calcsheet.core.arrays import agrees
from calcsheet.core.bounds import Bounds, bounds
from calcsheet.core.evidence import Evidence, evidence_of_modes
from calcsheet.core.model import Model, critical_of, models_of
from calcsheet.core.modes import CLOSE, Modes, modes_of
from calcsheet.core.second_order import Critical
from calcsheet.core.storeys import Storeys
from calcsheet.steps.step import Caution, Done, Line, Number, Outcome, Step, plain

RULE_OF_THUMB = 0.1
"""Period per storey of a frame building [s] (common practice)."""
NEAR_BUCKLING = 10.0
"""Elastic critical load factor from which second-order effects may be left out (EN 1993-1-1:2005, 5.2.1(3), from memory)."""
FAR = 4.0
"""Factor off the rule of thumb, either way, from which masses, stiffnesses and their units want a second look."""


@dataclass(frozen=True)
class ModesOptions:
    """What is asked of the solver.

    Parameters
    ----------
    keep : int or None
        Number of modes in each direction; None for all.
    share : float
        Share of the mass that the modes used should reach.
    stiffness : str or None
        Stiffness set; None for the one that serves forces.
    """

    keep: int | None = None
    share: float = 0.9
    stiffness: str | None = None


@dataclass(frozen=True, eq=False)
class ModelModes:
    """Modes of one model.

    Parameters
    ----------
    name : str
        The model's directions, such as "x".
    size : int
        Number of its degrees of freedom.
    modes : Modes
        Its modes.
    bounds : Bounds
        Bounds of its first frequency.
    critical : Critical or None
        Elastic critical load factor of the gravity loads; None where none are given.
    fixed : FixedBase or None
        The same model on a fixed base; None where it stands on one.
    rows : mapping of str to tuple of int
        By direction, the rows of the shapes that are the levels' translations, lowest first, where one model moves in
        several; empty for a planar model, whose rows are the levels.
    """

    name: str
    size: int
    modes: Modes
    bounds: Bounds
    critical: Critical | None = None
    fixed: FixedBase | None = None
    rows: Mapping[str, tuple[int, ...]] = field(default_factory=dict)


@dataclass(frozen=True)
class FixedBase:
    """What springs at the base change.

    Parameters
    ----------
    period : float
        First period on a fixed base [s].
    lengthening : float
        First period on the springs over that.
    """

    period: float = field(metadata=agrees(rtol=1e-9))
    lengthening: float = field(metadata=agrees(rtol=1e-9))


@dataclass(frozen=True, eq=False)
class ModesResult:
    """Modes of the building.

    Parameters
    ----------
    stiffness : str
        The stiffness set used.
    models : tuple of ModelModes
        One for each model.
    """

    stiffness: str
    models: tuple[ModelModes, ...]


def run(options: ModesOptions, storeys: Done) -> Outcome:
    building: Storeys = storeys.inputs
    stiffness = building.forces if options.stiffness is None else options.stiffness
    results, lines, cautions, evidence = [], [], [], []
    models = models_of(building, stiffness)
    fixed = models_of(replace(building, springs={}), stiffness) if building.springs else models
    for i, model in enumerate(models):
        name = " and ".join(model.direction)
        modes, bound = modes_of(model, None if options.keep is None else min(options.keep, model.size)), bounds(model)
        found = evidence_of_modes(model, modes, bound)
        on_rock = _fixed(fixed[i], modes) if model.direction[0] in building.springs else None
        load = critical_of(building, stiffness, model)
        results.append(ModelModes(name, model.size, modes, bound, load, on_rock, _rows(model)))
        lines += _lines(modes, bound, name, f"result/models/{i}")
        if on_rock is not None:
            lines.append(_lengthened(modes, on_rock, name, f"result/models/{i}"))
        cautions += _cautions(model, modes, name, f"result/models/{i}/modes")
        if load is not None and not building.second_order:
            cautions += _near_buckling(load, building.level, name, f"result/models/{i}/critical")
        evidence += [_named(e, name) for e in found]
    return Outcome(ModesResult(stiffness, tuple(results)), tuple(lines), tuple(cautions), tuple(evidence))


def _rows(model: Model) -> dict[str, tuple[int, ...]]:
    if len(model.direction) == 1:
        return {}
    found = zip(model.direction, model.influence, strict=True)
    return {direction: tuple(np.flatnonzero(iota).tolist()) for direction, iota in found}


def _fixed(model: Model, modes: Modes) -> FixedBase:
    period = float(modes_of(model, 1).period[0])
    return FixedBase(period, float(modes.period[0]) / period)


def _lengthened(modes: Modes, fixed: FixedBase, name: str, at: str) -> Line:
    period = Number(float(modes.period[0]), "period", f"{at}/modes/period/0")
    on_rock = Number(fixed.period, "period", f"{at}/fixed/period")
    return Line(
        f"Period on base springs over that on a fixed base, {name}",
        "T₁ / T_fixed",
        "{0} / {1}",
        (period, on_rock),
        Number(fixed.lengthening, "ratio", f"{at}/fixed/lengthening"),
        "ratio",
    )


def _near_buckling(load: Critical, levels: tuple[str, ...], name: str, at: str) -> list[Caution]:
    if load.factor >= NEAR_BUCKLING:
        return []
    return [
        Caution(
            "critical-load",
            f"In {name} the gravity loads times {{0}} buckle the model elastically, most in the storey below level "
            f'"{plain(levels[load.storey])}", while second-order effects are not in the stiffness; from {NEAR_BUCKLING:g} on '
            "they may be left out (EN 1993-1-1:2005, 5.2.1(3), from memory).",
            (Number(load.factor, "ratio", f"{at}/factor"),),
            answer=load.factor <= 1.0,
            subject=_key(name),
        )
    ]


def _lines(modes: Modes, bound: Bounds, name: str, at: str) -> list[Line]:
    omega = Number(float(modes.omega[0]), "circular frequency", f"{at}/modes/omega/0")
    work = Number(bound.work, "energy", f"{at}/bounds/work")
    inertia = Number(bound.inertia, "mass times length squared", f"{at}/bounds/inertia")
    rayleigh = Number(bound.rayleigh, "circular frequency", f"{at}/bounds/rayleigh")
    period = Number(float(modes.period[0]), "period", f"{at}/modes/period/0")
    return [
        Line(f"First period, {name}", "T₁ = 2π/ω₁", "2π / {0}", (omega,), period, "definition"),
        Line(
            f"Upper bound of ω₁, {name}: Rayleigh quotient of the displacements u under the weights f applied sideways",
            "ω_R = √(Σ f u / Σ m u²)",
            "√({0} / {1})",
            (work, inertia),
            rayleigh,
            "Clough and Penzien, Dynamics of Structures, Rayleigh's method (from memory)",
        ),
    ]


def _cautions(model: Model, modes: Modes, name: str, at: str) -> list[Caution]:
    cautions = []
    for group in modes.repeated:
        cautions.append(
            Caution(
                "repeated-modes",
                f"Modes {_listed(group)} in {name} share one frequency: their shapes are one choice of many, and only "
                "their sum has a meaning.",
                subject=f"{_key(name)}-{group[0]}",
            )
        )
    for group in modes.close:
        if group not in modes.repeated:
            ends = (group[0], group[-1])
            numbers = tuple(Number(float(modes.period[g - 1]), "period", f"{at}/period/{g - 1}") for g in ends)
            cautions.append(
                Caution(
                    "close-modes",
                    f"Modes {_listed(group)} in {name} are close (T from {{0}} to {{1}}, each above {CLOSE:g} of the one "
                    "before): peak values are to be combined with their correlation, not by the root of the sum of squares.",
                    numbers,
                    subject=f"{_key(name)}-{group[0]}",
                )
            )
    for i, local in enumerate(modes.local):
        cautions.append(
            Caution(
                "local-mode",
                f'Mode {local.mode} in {name} is local: {{0}} of its kinetic energy is in level "{plain(local.level)}", a light '
                "one. Base shear says little of what that level itself meets.",
                (Number(local.energy, "share", f"{at}/local/{i}/energy"),),
                subject=f"{_key(name)}-{local.mode}",
            )
        )
    usual, first = RULE_OF_THUMB * model.levels, float(modes.period[0])
    if not usual / FAR <= first <= usual * FAR:
        cautions.append(
            Caution(
                "unusual-period",
                f"The first period in {name}, {{0}}, is far from {RULE_OF_THUMB:g} s a storey (common practice for frames): "
                "check masses, stiffnesses and their units.",
                (Number(first, "period", f"{at}/period/0"),),
                answer=True,
                subject=_key(name),
            )
        )
    return cautions


def _listed(group: tuple[int, ...]) -> str:
    return f"{group[0]} and {group[1]}" if len(group) == 2 else f"{group[0]} to {group[-1]}"


def _key(name: str) -> str:
    """A model's name in keys: "x and y" as "x-y"."""
    return name.replace(" and ", "-")


def _named(evidence: Evidence, name: str) -> Evidence:
    return Evidence(
        f"{evidence.key}-{_key(name)}",
        f"{evidence.what}, {name}",
        evidence.relation,
        evidence.value,
        evidence.limit,
        evidence.within,
    )


METHOD = r"""
The building is reduced to one translation a level, or with floors rigid in their plane to two and a rotation, the
masses lumped at the levels. Modes are the solutions of

$$K\varphi = \omega^2 M\varphi , \qquad T = \frac{2\pi}{\omega} , \qquad f = \frac{\omega}{2\pi}$$

with the lateral stiffness $K$ and the diagonal mass matrix $M$. In a storey chain $K = B^{T} k B$, where $B$ takes
displacements to storey drifts and $k$ holds the storey stiffnesses; the frequencies are the singular values of
$\sqrt{k} B M^{-1/2}$, each found to full relative accuracy (Demmel and Kahan, 1990, from memory). A given matrix is
solved as a dense symmetric problem (Parlett, The Symmetric Eigenvalue Problem, from memory). In a cantilever stick a
storey is an element that bends and shears, and the rotations of the levels, which carry no mass, are condensed out;
through a square root $C$ of the stiffness, $K = C^{T} C$, the frequencies are the singular values of $C M^{-1/2}$
(Golub and Van Loan, Matrix Computations, from memory).

Springs at the base let the whole building move and turn without mass of the base itself. Gravity loads that are in the
stiffness take $B^{T} (P/h) B$ from it, $P$ the load at and above a storey of height $h$: they act on storey drifts, a
wall counting as straight between its levels; those of rigid floors turn with the floor, spread as its mass is. The
elastic critical load factor is the smallest $\lambda$ with $K - \lambda B^{T} (P/h) B$ singular (Timoshenko and Gere,
Theory of Elastic Stability, from memory).

Shapes are mass-normalised and orthogonal through both matrices,

$$\psi^{T} M \psi = I , \qquad \psi^{T} K \psi = \Omega^2 ,$$

so that a mode holds the strain energy $\frac{1}{2}\omega^2$ at unit modal displacement. Signs make the largest
translation positive. Modes are close where $T_j > 0.9\, T_i$ (EN 1998-1:2004, 4.3.3.3.2). The first frequency lies
between Dunkerley's bound and the Rayleigh quotient of the displacements under the weights applied sideways (Clough and
Penzien, Dynamics of Structures; Blevins, Formulas for Natural Frequency and Mode Shape; from memory).
"""

MODES = Step("modes", 1, "Natural modes", ModesOptions, ModesResult, ("storeys",), run, METHOD)
