"""Participation of the modes in each direction, and which of them matter."""

from __future__ import annotations

from dataclasses import dataclass

from calcsheet.core.evidence import Evidence, evidence_of_participation
from calcsheet.core.model import models_of
from calcsheet.core.participation import SINGLE, Participation, participation
from calcsheet.steps.relations import numbered
from calcsheet.steps.step import Caution, Done, Line, Number, Outcome, Step

SOURCE = "Chopra, Dynamics of Structures, section 13.2 (from memory)"


@dataclass(frozen=True)
class ParticipationOptions:
    """What is asked of the summary.

    Parameters
    ----------
    share : float or None
        Share of the mass to be reached; None for the solver's.
    """

    share: float | None = None


@dataclass(frozen=True, eq=False)
class ParticipationResult:
    """Participation in each direction.

    Parameters
    ----------
    directions : tuple of Participation
        One for each direction, x before y.
    """

    directions: tuple[Participation, ...]


def run(options: ParticipationOptions, storeys: Done, modes: Done) -> Outcome:
    target = modes.inputs.share if options.share is None else options.share
    parts: list[Participation] = []
    lines: list[Line] = []
    cautions: list[Caution] = []
    evidence: list[Evidence] = []
    for model, found in zip(models_of(storeys.inputs, modes.result.stiffness), modes.result.models, strict=True):
        for direction in model.direction:
            part = participation(model, found.modes, direction, target)
            at = f"result/directions/{len(parts)}"
            parts.append(part)
            lines += _lines(part, at)
            cautions += _cautions(part, found.size, at)
            evidence += evidence_of_participation(part, part.omega.size, found.size)
    return Outcome(ParticipationResult(tuple(parts)), tuple(lines), tuple(cautions), tuple(evidence))


def _lines(part: Participation, at: str) -> list[Line]:
    if part.first_mass == 0.0:
        return []
    excitation = Number(part.first_excitation, "mass", f"{at}/first_excitation")
    mass = Number(part.first_mass, "mass", f"{at}/first_mass")
    n = part.main
    gamma = Number(float(part.gamma_roof[n]), "ratio", f"{at}/gamma_roof/{n}")
    effective = Number(float(part.effective_mass[n]), "mass", f"{at}/effective_mass/{n}")
    total = Number(part.total_mass, "mass", f"{at}/total_mass")
    share = Number(float(part.share[n]), "share", f"{at}/share/{n}")
    of = f"mode {n + 1}, {part.direction}"
    return [
        Line(
            f"Participation factor, {of} ({numbered('φ₁', n)} = 1 at the top)",
            numbered("Γ₁ = Σ m φ₁ / Σ m φ₁²", n),
            "{0} / {1}",
            (excitation, mass),
            gamma,
            SOURCE,
        ),
        Line(
            f"Effective mass, {of}", numbered("M₁* = Γ₁ Σ m φ₁", n), "{0} × {1}", (gamma, excitation), effective, SOURCE
        ),
        Line(f"Share of the mass, {of}", numbered("M₁* / Σ m", n), "{0} / {1}", (effective, total), share, SOURCE),
    ]


def _cautions(part: Participation, size: int, at: str) -> list[Caution]:
    cautions, kept = [], part.omega.size
    if part.needed is None:
        reached = "one mode kept reaches" if kept == 1 else f"{kept} modes kept reach"
        cautions.append(
            Caution(
                "target-not-reached",
                f"In {part.direction} the {reached} {{0}} of the mass, short of the target of {{1}}: keep more modes.",
                (
                    Number(float(part.cumulative[-1]), "share", f"{at}/cumulative/{kept - 1}"),
                    Number(part.target, "share", f"{at}/target"),
                ),
                answer=True,
                subject=part.direction,
            )
        )
    later = [m for m in part.significant if part.needed is not None and m > part.needed]
    if later:
        cautions.append(
            Caution(
                "significant-beyond-target",
                f"In {part.direction} mode{'s' if len(later) > 1 else ''} {', '.join(map(str, later))} beyond the target "
                f"still move{'' if len(later) > 1 else 's'} more than {SINGLE * 100:g} % of the mass "
                "(EN 1998-1:2004, 4.3.3.3.1(3), asks for it).",
                subject=part.direction,
            )
        )
    if kept < size:
        cautions.append(
            Caution(
                "modes-left-out",
                f"In {part.direction} {kept} of {size} modes are kept; the shares and heights listed are theirs alone.",
                subject=part.direction,
            )
        )
    return cautions


METHOD = r"""
When the base moves by 1 in a direction, every translation in it moves by 1: the influence vector $\iota$. For each
mode, with $M_n = \varphi^{T} M \varphi$ and $L_n = \varphi^{T} M \iota$,

$$\Gamma_n = \frac{L_n}{M_n} , \qquad M_n^{*} = \frac{L_n^{2}}{M_n} , \qquad h_n^{*} = \frac{\sum h\, m\, \varphi}{L_n}$$

are the participation factor, the effective mass and the effective height (Chopra, Dynamics of Structures, section
13.2, from memory). The participation factor depends on the scale of the shape and is given for $\varphi = 1$ at the
top; effective mass and height do not. Effective masses of all modes add up to the mass above the effective base. Modes
count from the first until their effective masses reach the target share; single modes above 5 % are named
(EN 1998-1:2004, 4.3.3.3.1).
"""

PARTICIPATION = Step(
    "participation", 1, "Participation", ParticipationOptions, ParticipationResult, ("storeys", "modes"), run, METHOD
)
