"""The basis of the demand: code edition with its parameters, combination, mass basis, second model."""

from __future__ import annotations

from dataclasses import dataclass

from calcsheet.core.basis import Basis
from calcsheet.core.codes.edition import Answer, Factor
from calcsheet.core.codes.en1998_2004 import EN1998
from calcsheet.steps.step import Caution, Number, Outcome, Step, plain

STRONG = 0.6
"""Ground acceleration over g beyond which another unit may have been meant (common practice)."""


@dataclass(frozen=True)
class BasisResult:
    """What the edition says before it sees the building.

    Parameters
    ----------
    edition : str
        Publication and year.
    level : str
        What its ordinates include.
    importance, damping : Factor
        Importance factor; damping ratio for the correlation of modes.
    modes : Answer
        How many modes are asked for.
    combination_clause : str
        Clause of the rules of combination.
    """

    edition: str
    level: str
    importance: Factor
    damping: Factor
    modes: Answer
    combination_clause: str


def run(basis: Basis) -> Outcome:
    edition = basis.edition
    cautions = [
        Caution(
            "local-adoption",
            f"{edition.name}: whether and with which national choices it holds at the site is for the engineer to confirm.",
        ),
        Caution(
            "force-level",
            f"Actions stand at the {edition.level}.",
        ),
    ]
    if isinstance(edition, EN1998) and edition.ground_acceleration > STRONG:
        number = Number(edition.ground_acceleration, "ratio", "inputs/edition/ground_acceleration")
        text = f"A ground acceleration of {{0}} times g is above {STRONG:g} g: was m/s² typed where a part of g is asked for?"
        cautions.append(Caution("ground-acceleration", text, (number,), answer=True))
    if not basis.mass_basis:
        cautions.append(
            Caution("no-mass-basis", "Which share of each variable load the masses hold is not stated.", answer=True)
        )
    for i, share in enumerate(basis.mass_basis, 1):
        if not share.clause.strip():
            cautions.append(
                Caution("mass-basis", f"Mass basis, {plain(share.load)}: stated without its clause.", subject=str(i))
            )
    result = BasisResult(
        edition.name,
        edition.level,
        edition.importance(),
        edition.damping(),
        edition.modes(),
        edition.combination()[1],
    )
    return Outcome(result, cautions=tuple(cautions))


BASIS = Step("basis", 1, "Basis of the demand", Basis, BasisResult, (), run)
