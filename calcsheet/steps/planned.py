"""What in a plan of rigid floors wants a second look."""

from __future__ import annotations

import math

from calcsheet.core.storeys import Plan, PlanLine, Storeys
from calcsheet.steps.step import Caution, Number, plain

SLENDER = 4.0
"""Ratio of a floor's sides beyond which it is doubtful that it is rigid (EN 1998-1:2004, 4.2.3.2(5), from memory)."""
SAME = 1e-6
"""Distance [m], and sine of the angle, below which two lines are one."""


def cautions_of_plan(storeys: Storeys) -> list[Caution]:
    """Cautions of a building's plan, none where it has none.

    Parameters
    ----------
    storeys : Storeys
        The building.
    """
    if storeys.plan is None:
        return []
    return [*_twice(storeys.plan), *_outside(storeys.plan, storeys.level), *_slender(storeys.plan, storeys.level)]


def _twice(plan: Plan) -> list[Caution]:
    found = []
    for i, line in enumerate(plan.lines):
        for other in plan.lines[:i]:
            if _one(line, other):
                text = f'Lines "{plain(other.name)}" and "{plain(line.name)}" run along one another: is one of them given twice?'
                found.append(Caution("lines-along-one-another", text, answer=True, subject=f"{other.name}-{line.name}"))
    return found


def _one(a: PlanLine, b: PlanLine) -> bool:
    if abs(math.sin(a.angle - b.angle)) > SAME:
        return False
    return abs(math.sin(a.angle) * (b.x - a.x) - math.cos(a.angle) * (b.y - a.y)) < SAME


def _outside(plan: Plan, levels: tuple[str, ...]) -> list[Caution]:
    if plan.extent is None:
        return []
    found = []
    for i, ((x, y), (x_from, x_to, y_from, y_to)) in enumerate(zip(plan.centre, plan.extent, strict=True)):
        if not (x_from <= x <= x_to and y_from <= y <= y_to):
            numbers = tuple(Number(float(v), "length", f"inputs/plan/centre/{i}/{j}") for j, v in enumerate((x, y)))
            text = f'The centre of mass of level "{plain(levels[i])}", x = {{0}}, y = {{1}}, lies outside its floor.'
            found.append(Caution("centre-of-mass-outside", text, numbers, answer=True, subject=levels[i]))
    return found


def _slender(plan: Plan, levels: tuple[str, ...]) -> list[Caution]:
    if plan.extent is None:
        return []
    found = []
    for level, (x_from, x_to, y_from, y_to) in zip(levels, plan.extent.tolist(), strict=True):
        short, long = sorted((x_to - x_from, y_to - y_from))
        if long > SLENDER * short:
            text = (
                f'The floor of level "{plain(level)}" is {long / short:.1f} times as long as wide, beyond {SLENDER:g}: whether '
                "it is rigid in its plane wants a reason (EN 1998-1:2004, 4.2.3.2(5), from memory)."
            )
            found.append(Caution("slender-floor", text, answer=True, subject=level))
    return found
