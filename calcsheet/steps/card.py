"""The job card: who, what, on which basis, and the cautions that always hold."""

from __future__ import annotations

from dataclasses import dataclass

from calcsheet.job.basis import spectrum_files
from calcsheet.job.card import Card
from calcsheet.steps.step import Caution, Outcome, Step, plain

GENERAL = (
    Caution(
        "qualified-engineer",
        "This record supports, and does not replace, the judgement of a qualified engineer. Whoever signs it answers for "
        "masses, stiffnesses, assumptions and conclusions.",
    ),
    Caution(
        "local-code",
        "Local codes, their national choices and the authority having jurisdiction decide; this record confirms no "
        "compliance by itself.",
    ),
    Caution(
        "linear-elastic",
        "The model is linear elastic and undamped: stiffnesses do not change with displacement, cracking or yielding beyond "
        "what the stiffness set states.",
    ),
    Caution(
        "rigid-floors",
        "Each level moves as one: floors are taken as rigid in their plane, masses as lumped at the levels, and x and y are "
        "analysed apart, without torsion.",
    ),
    Caution(
        "fixed-base",
        "The effective base is taken as fixed: movement of the ground and the foundations under load is left out.",
    ),
    Caution(
        "left-out",
        "Left out: load combinations, combination of directions, torsion of the plan, vertical motion, parts and "
        "components, design of diaphragms, foundation uplift, wind.",
    ),
)


@dataclass(frozen=True)
class CardResult:
    """What follows from the card alone.

    Parameters
    ----------
    to_confirm : tuple of int
        Assumptions, from 1, that wait for confirmation.
    """

    to_confirm: tuple[int, ...]


def run(card: Card) -> Outcome:
    waiting = tuple(i for i, a in enumerate(card.assumptions, 1) if a.confirm_by.strip())
    cautions = list(GENERAL)
    if card.basis is None:
        cautions.append(Caution("no-demand", "Design demand, drift and second-order effects are not in this record."))
    for i in waiting:
        assumption = card.assumptions[i - 1]
        cautions.append(
            Caution(f"to-confirm-{i}", f"Assumption {i} is to be confirmed: {plain(assumption.confirm_by)}.")
        )
    taken_off = () if card.masses is None else (card.masses.source, "loads.csv")
    for name in ("storeys.csv", *taken_off, *card.model.files.values(), *spectrum_files(card).values()):
        if not (name in card.origins and card.origins[name].source.strip()):
            cautions.append(
                Caution(f"no-origin-{name}", f"{plain(name)}: the origin of its values is not stated.", answer=True)
            )
    for name, basis in card.stiffness.items():
        if not basis.ground.strip():
            cautions.append(
                Caution(
                    f"no-ground-{name}",
                    f'Stiffness set "{plain(name)}": the ground of its values is not stated.',
                    answer=True,
                )
            )
    return Outcome(CardResult(waiting), cautions=tuple(cautions))


CARD = Step("card", 1, "Job card", Card, CardResult, (), run)
