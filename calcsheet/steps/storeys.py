"""The storey table: what is given, its sums, and what in it wants a second look."""

from __future__ import annotations

import itertools
import re

from calcsheet.core.storeys import StiffnessSet, Storeys
from calcsheet.core.totals import Totals, totals
from calcsheet.steps.planned import cautions_of_plan
from calcsheet.steps.step import Caution, Number, Outcome, Step, plain

JUMP = 20.0
"""Ratio of neighbouring storeys' stiffnesses or levels' masses from which a slip of unit is suspected."""
HEIGHTS = (2.0, 12.0)
"""Storey heights [m] outside of which a slip is suspected."""
WEIGHTS = (3.0, 15.0)
"""Usual weight of a level over its floor area [kN/m²], from steel and timber with light decks up (common practice)."""
FAR = 2.0
"""Factor beyond these from which a slip of unit is suspected."""
NAMED = 4
"""Levels that a caution names before it counts the rest."""
NUMBERED = re.compile(r"(?:.*\D)?(\d+)\s*")
"""Name of a level that ends in a number."""
BELOW_GROUND = re.compile(r"\s*(b|cellar|lower|p|-|\u2212)", re.IGNORECASE)
"""Names such as "B2", "P1" or "-2": their numbers may run down into the ground."""
ROOF = re.compile(r"\s*(roof|top)( level| floor| slab)?\s*", re.IGNORECASE)


def run(storeys: Storeys) -> Outcome:
    cautions = [*_jumps("mass", storeys.mass.tolist(), storeys.level, "inputs/mass", "mass")]
    sums = totals(storeys)
    cautions = [*_order(storeys.level), *_heights(storeys), *_weights(sums, storeys), *cautions]
    for i, given in enumerate(storeys.stiffness):
        cautions += _of_set(given, storeys.level, f"inputs/stiffness/{i}")
    cautions += [*_left_out(storeys), *_springs(storeys), *cautions_of_plan(storeys)]
    return Outcome(sums, cautions=tuple(cautions))


def _order(levels: tuple[str, ...]) -> list[Caution]:
    """A table that seems to be upside down: its numbers fall upwards, or numbered levels stand above its roof.

    A plant level above the roof is usual; a roof at the foot of the table, or under a numbered level, is not.
    """
    numbers = [
        (i, int(found[1]))
        for i, level in enumerate(levels)
        if not BELOW_GROUND.match(level) and (found := NUMBERED.fullmatch(level))
    ]
    falls = len(numbers) > 1 and all(b < a for (_, a), (_, b) in itertools.pairwise(numbers))
    roof = next((i for i, level in enumerate(levels) if ROOF.fullmatch(level)), None)
    if falls:
        top, foot = plain(levels[numbers[-1][0]]), plain(levels[numbers[0][0]])
        why = f'level "{top}" stands above level "{foot}" and the numbers between them fall upwards'
    elif roof is not None and len(levels) > 1 and (roof == 0 or any(i > roof for i, _ in numbers)):
        why = f'level "{plain(levels[roof])}" stands below level "{plain(levels[-1])}"'
    else:
        return []
    text = f"Order of the levels: {why}; check that the table's first row is the top level."
    return [Caution("order-of-levels", text, answer=True)]


def _heights(storeys: Storeys) -> list[Caution]:
    low, high = HEIGHTS
    strange = [i for i, height in enumerate(storeys.storey_height.tolist()) if not low <= height <= high]
    if not strange:
        return []
    named = ", ".join(f'{{{n}}} below level "{plain(storeys.level[i])}"' for n, i in enumerate(strange))
    numbers = tuple(Number(float(storeys.storey_height[i]), "length", f"inputs/storey_height/{i}") for i in strange)
    text = f"Storey height outside {low:g} to {high:g} m: {named}; check value and unit."
    return [Caution("storey-heights", text, numbers, answer=True)]


def _weights(sums: Totals, storeys: Storeys) -> list[Caution]:
    """Levels of unusual weight; the take-off names them itself where the masses come from it."""
    if sums.weight_per_area is None or storeys.given == "take-off":
        return []
    return unusual_weights(sums.weight_per_area.tolist(), storeys.level)


def unusual_weights(found: list[float], levels: tuple[str, ...], below: int = 0, subject: str = "") -> list[Caution]:
    """Levels of unusual weight over floor area; an answer is asked for where most levels are far from the usual.

    Parameters
    ----------
    found : list of float
        Weight over floor area of each level, in `result/weight_per_area` [kN/m²].
    levels : tuple of str
        The levels.
    below : int
        How many of them, from the first, are left out.
    subject : str
        Subject of the caution.
    """
    low, high = WEIGHTS
    strange = [i for i, weight in enumerate(found) if i >= below and not low <= weight <= high]
    if not strange:
        return []
    named = ", ".join(f'{{{n}}} at level "{plain(levels[i])}"' for n, i in enumerate(strange[:NAMED]))
    more = f" and {len(strange) - NAMED} more" if len(strange) > NAMED else ""
    numbers = tuple(Number(found[i], "pressure", f"result/weight_per_area/{i}") for i in strange[:NAMED])
    text = (
        f"Weight over floor area outside {low:g} to {high:g} kN/m², about 60 to 300 psf (common practice): {named}{more}; "
        "check masses and areas."
    )
    far = sum(not low / FAR <= weight <= high * FAR for weight in found[below:])
    return [Caution("weight-per-area", text, numbers, answer=2 * far > len(found) - below, subject=subject)]


def _of_set(given: StiffnessSet, levels: tuple[str, ...], at: str) -> list[Caution]:
    cautions: list[Caution] = []
    for direction, lateral in given.lateral.items():
        for column in lateral.columns:
            values = getattr(lateral, column.field)
            if values is not None:
                what, place = f"{column.heading} {direction} ({given.name})", f"{at}/lateral/{direction}/{column.field}"
                cautions += _jumps(what, values.tolist(), levels, place, column.heading)
        if lateral.asymmetry > 0.0:
            cautions.append(
                Caution(
                    "unsymmetric",
                    f"The {lateral.kind} in {direction} ({plain(given.name)}) is unsymmetric by {lateral.asymmetry:.1e} of its "
                    "largest entry; its symmetric part is used.",
                    subject=f"{given.name}-{direction}",
                )
            )
    return cautions


def _left_out(storeys: Storeys) -> list[Caution]:
    """Columns that a model may do without, and does in some set."""
    missing = {
        (column.heading, direction)
        for given in storeys.stiffness
        for direction, lateral in given.lateral.items()
        for column in lateral.columns
        if getattr(lateral, column.field) is None
    }
    return [
        Caution(
            "deformation-neglected",
            f"No {heading} is given in {direction}: that deformation is neglected, and the model is stiffer than the building.",
            subject=f"{heading.replace(' ', '-')}-{direction}",
        )
        for heading, direction in sorted(missing)
    ]


def _springs(storeys: Storeys) -> list[Caution]:
    cautions = []
    for direction, springs in storeys.springs.items():
        at, numbers = f"inputs/springs/{direction}", []
        if springs.damping is not None:
            numbers.append(Number(springs.damping, "share", f"{at}/damping"))
        said = " Its damping, {0}, is used nowhere: ordinates keep the edition's." if numbers else ""
        text = f"The base in {direction} stands on springs, without mass of its own.{said}"
        cautions.append(Caution("base-springs", text, tuple(numbers), subject=direction))
    return cautions


def _jumps(what: str, values: list[float], levels: tuple[str, ...], at: str, quantity: str) -> list[Caution]:
    cautions = []
    for i in range(1, len(values)):
        ratio = values[i] / values[i - 1]
        if max(ratio, 1.0 / ratio) >= JUMP:
            here, there = plain(levels[i]), plain(levels[i - 1])
            cautions.append(
                Caution(
                    "jump",
                    f'{plain(what[0].upper() + what[1:])}: {{0}} at level "{here}" beside {{1}} at level "{there}"; '
                    "check value and unit.",
                    (Number(values[i], quantity, f"{at}/{i}"), Number(values[i - 1], quantity, f"{at}/{i - 1}")),
                    subject=f"{what.replace(' ', '-')}-{levels[i]}",
                )
            )
    return cautions


STOREYS = Step("storeys", 1, "Storeys", Storeys, Totals, (), run)
