"""The storey table: what is given, its sums, and what in it wants a second look."""

from __future__ import annotations

from calcsheet.core.chain import Chain
from calcsheet.core.storeys import StiffnessSet, Storeys
from calcsheet.core.totals import Totals, totals
from calcsheet.steps.step import Caution, Number, Outcome, Step, plain

JUMP = 20.0
"""Ratio of neighbouring storeys' stiffnesses or levels' masses from which a slip of unit is suspected."""


def run(storeys: Storeys) -> Outcome:
    cautions = [*_jumps("mass", storeys.mass.tolist(), storeys.level, "inputs/mass", "mass")]
    for i, given in enumerate(storeys.stiffness):
        cautions += _of_set(given, storeys.level, f"inputs/stiffness/{i}")
    return Outcome(totals(storeys), cautions=tuple(cautions))


def _of_set(given: StiffnessSet, levels: tuple[str, ...], at: str) -> list[Caution]:
    cautions: list[Caution] = []
    for direction, lateral in given.lateral.items():
        if isinstance(lateral, Chain):
            what = f"stiffness {direction} ({given.name})"
            cautions += _jumps(what, lateral.storey.tolist(), levels, f"{at}/lateral/{direction}/storey", "stiffness")
        elif lateral.asymmetry > 0.0:
            cautions.append(
                Caution(
                    f"unsymmetric-{given.name}-{direction}",
                    f"The {lateral.kind} in {direction} ({plain(given.name)}) is unsymmetric by {lateral.asymmetry:.1e} of its "
                    "largest entry; its symmetric part is used.",
                )
            )
    return cautions


def _jumps(what: str, values: list[float], levels: tuple[str, ...], at: str, quantity: str) -> list[Caution]:
    cautions = []
    for i in range(1, len(values)):
        ratio = values[i] / values[i - 1]
        if max(ratio, 1.0 / ratio) >= JUMP:
            here, there = plain(levels[i]), plain(levels[i - 1])
            cautions.append(
                Caution(
                    f"jump-{what.replace(' ', '-')}-{levels[i]}",
                    f'{plain(what[0].upper() + what[1:])}: {{0}} at level "{here}" beside {{1}} at level "{there}"; '
                    "check value and unit.",
                    (Number(values[i], quantity, f"{at}/{i}"), Number(values[i - 1], quantity, f"{at}/{i - 1}")),
                )
            )
    return cautions


STOREYS = Step("storeys", 1, "Storeys", Storeys, Totals, (), run)
