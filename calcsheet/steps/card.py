"""The job card: who, what, on which basis, and the cautions that always hold."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass

from calcsheet.job.basis import spectrum_files
from calcsheet.job.card import Card
from calcsheet.job.cardtables import SetBasis
from calcsheet.job.floorfile import LOADS
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

UNCRACKED = re.compile(r"\b(gross|(un|non-?|not )cracked)\b", re.IGNORECASE)
CRACKED = re.compile(r"(?<!not )(?<!non-)\bcrack(ed|ing|s)?\b", re.IGNORECASE)
"""Words that say whether sections are taken as cracked."""
CRACKS = re.compile(r"\b(concrete|masonry|brick)", re.IGNORECASE)
NEVER_CRACKS = re.compile(r"\b(steel|timber|wood|aluminium)\b", re.IGNORECASE)
"""Materials by which a ground says whether cracking is a question."""


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
    taken_off = () if card.masses is None else (card.masses.source, LOADS)
    plan = (LINES, PLAN) if card.model.lateral is None else ()
    return ("storeys.csv", *taken_off, *plan, *card.model.files.values(), *spectrum_files(card).values())


def run(card: Card) -> Outcome:
    waiting = tuple(i for i, a in enumerate(card.assumptions, 1) if a.confirm_by.strip())
    cautions = _general(card)
    if card.basis is None:
        cautions.append(Caution("no-demand", "Design demand, drift and second-order effects are not in this record."))
    for i in waiting:
        assumption = card.assumptions[i - 1]
        cautions.append(
            Caution("to-confirm", f"Assumption {i} is to be confirmed: {plain(assumption.confirm_by)}.", subject=str(i))
        )
    for name in _tables(card):
        if not (name in card.origins and card.origins[name].source.strip()):
            cautions.append(
                Caution(
                    "no-origin", f"{plain(name)}: the origin of its values is not stated.", answer=True, subject=name
                )
            )
    for name, basis in card.stiffness.items():
        if not basis.ground.strip():
            cautions.append(
                Caution(
                    "no-ground",
                    f'Stiffness set "{plain(name)}": the ground of its values is not stated.',
                    answer=True,
                    subject=name,
                )
            )
    cautions += _cracking(card)
    return Outcome(CardResult(waiting), cautions=tuple(cautions))


def _cracking(card: Card) -> Iterator[Caution]:
    """Sets in use that are uncracked by their own words, or that leave it open."""
    for name in dict.fromkeys((card.serves.forces, card.serves.drifts)):
        basis = card.stiffness[name]
        said, reduced = f"{name} {basis.ground}", _reduced(basis, card.directions.analysed)
        if reduced or CRACKED.search(said) or (NEVER_CRACKS.search(said) and not CRACKS.search(said)):
            continue
        purposes = " and ".join(p for p in ("forces", "drifts") if getattr(card.serves, p) == name)
        if UNCRACKED.search(said):
            text = f'Stiffness set "{plain(name)}" serves {purposes} and is uncracked by its own words; check that this is meant.'
            yield Caution("uncracked", text, answer=True, subject=name)
        elif not basis.own and basis.ground.strip():
            text = f'Stiffness set "{plain(name)}" serves {purposes} unreduced, and its ground does not speak of cracking; check.'
            yield Caution("cracking-unstated", text, subject=name)


def _reduced(basis: SetBasis, directions: tuple[str, ...]) -> bool:
    """Whether a set takes less than the stiffnesses given, in every direction."""
    factors = [basis.factor_of(d) for d in directions]
    return all(factor is not None and factor < 1.0 for factor in factors)


CARD = Step("card", 1, "Job card", Card, CardResult, (), run)
