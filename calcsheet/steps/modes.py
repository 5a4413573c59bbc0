"""Natural modes of every model of the building, with evidence."""

from __future__ import annotations

from dataclasses import dataclass

from calcsheet.core.bounds import Bounds, bounds
from calcsheet.core.evidence import Evidence, evidence_of_modes
from calcsheet.core.model import Model, models_of
from calcsheet.core.modes import CLOSE, Modes, modes_of
from calcsheet.core.storeys import Storeys
from calcsheet.steps.step import Caution, Done, Line, Number, Outcome, Step, plain

RULE_OF_THUMB = 0.1
"""Period per storey of a frame building [s] (common practice)."""
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
    """

    name: str
    size: int
    modes: Modes
    bounds: Bounds


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
    for i, model in enumerate(models_of(building, stiffness)):
        name = " and ".join(model.direction)
        modes, bound = modes_of(model, None if options.keep is None else min(options.keep, model.size)), bounds(model)
        found = evidence_of_modes(model, modes, bound)
        results.append(ModelModes(name, model.size, modes, bound))
        lines += _lines(modes, bound, name, f"result/models/{i}")
        cautions += _cautions(model, modes, name, f"result/models/{i}/modes")
        evidence += [_named(e, name) for e in found]
    return Outcome(ModesResult(stiffness, tuple(results)), tuple(lines), tuple(cautions), tuple(evidence))


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
                subject=f"{name}-{group[0]}",
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
                    subject=f"{name}-{group[0]}",
                )
            )
    for i, local in enumerate(modes.local):
        cautions.append(
            Caution(
                "local-mode",
                f'Mode {local.mode} in {name} is local: {{0}} of its kinetic energy is in level "{plain(local.level)}", a light '
                "one. Base shear says little of what that level itself meets.",
                (Number(local.energy, "share", f"{at}/local/{i}/energy"),),
                subject=f"{name}-{local.mode}",
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
                subject=name,
            )
        )
    return cautions


def _listed(group: tuple[int, ...]) -> str:
    return f"{group[0]} and {group[1]}" if len(group) == 2 else f"{group[0]} to {group[-1]}"


def _named(evidence: Evidence, name: str) -> Evidence:
    return Evidence(
        f"{evidence.key}-{name}",
        f"{evidence.what}, {name}",
        evidence.relation,
        evidence.value,
        evidence.limit,
        evidence.within,
    )


METHOD = r"""
The building is reduced to one translation a level, the masses lumped at the levels. Modes are the solutions of

$$K\varphi = \omega^2 M\varphi , \qquad T = \frac{2\pi}{\omega} , \qquad f = \frac{\omega}{2\pi}$$

with the lateral stiffness $K$ and the diagonal mass matrix $M$. In a storey chain $K = B^{T} k B$, where $B$ takes
displacements to storey drifts and $k$ holds the storey stiffnesses; the frequencies are the singular values of
$\sqrt{k} B M^{-1/2}$, each found to full relative accuracy (Demmel and Kahan, 1990, from memory). A given matrix is
solved as a dense symmetric problem (Parlett, The Symmetric Eigenvalue Problem, from memory).

Shapes are mass-normalised and orthogonal through both matrices,

$$\psi^{T} M \psi = I , \qquad \psi^{T} K \psi = \Omega^2 ,$$

so that a mode holds the strain energy $\frac{1}{2}\omega^2$ at unit modal displacement. Signs make the largest
translation positive. Modes are close where $T_j > 0.9\, T_i$ (EN 1998-1:2004, 4.3.3.3.2). The first frequency lies
between Dunkerley's bound and the Rayleigh quotient of the displacements under the weights applied sideways (Clough and
Penzien, Dynamics of Structures; Blevins, Formulas for Natural Frequency and Mode Shape; from memory).
"""

MODES = Step("modes", 1, "Natural modes", ModesOptions, ModesResult, ("storeys",), run, METHOD)
