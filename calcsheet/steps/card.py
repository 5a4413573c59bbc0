"""The job card: who, what, on which basis, and the cautions that always hold."""

from __future__ import annotations

from dataclasses import dataclass

from calcsheet.job.basis import spectrum_files
from calcsheet.job.card import Card
from calcsheet.job.planfile import LINES, PLAN
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


ROTATING = (
    Caution(
        "rigid-floors",
        "Each level moves as one: floors are taken as rigid in their plane, masses as lumped at the levels; x, y and the "
        "rotation are analysed together.",
    ),
    Caution(
        "left-out",
        "Left out: load combinations, combination of directions but at the edges of the floors, vertical motion, parts and "
        "components, design of diaphragms, foundation uplift, wind.",
    ),
)
"""What holds instead where floors move in both directions at once."""


def _general(card: Card) -> list[Caution]:
    """The cautions that always hold, in the words that fit the model."""
    instead = {c.key: c for c in ROTATING} if card.model.lateral is None else {}
    fixed = [d for d in card.directions.analysed if card.base.of(d)[:2] == (None, None)]
    if len(fixed) < len(card.directions.analysed):
        said = f"In {' and '.join(fixed)} the effective base is taken as fixed." if fixed else ""
        text = f"{said} Springs at the base are linear: uplift and yielding of the ground are left out.".strip()
        instead["fixed-base"] = Caution("fixed-base", text)
    return [instead.get(c.key, c) for c in GENERAL]


def _tables(card: Card) -> tuple[str, ...]:
    """The files whose origin is to be stated."""
    plan = (LINES, PLAN) if card.model.lateral is None else ()
    return ("storeys.csv", *plan, *card.model.files.values(), *spectrum_files(card).values())


def run(card: Card) -> Outcome:
    waiting = tuple(i for i, a in enumerate(card.assumptions, 1) if a.confirm_by.strip())
    cautions = _general(card)
    if card.basis is None:
        cautions.append(Caution("no-demand", "Design demand, drift and second-order effects are not in this record."))
    for i in waiting:
        assumption = card.assumptions[i - 1]
        cautions.append(
            Caution(f"to-confirm-{i}", f"Assumption {i} is to be confirmed: {plain(assumption.confirm_by)}.")
        )
    for name in _tables(card):
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
