"""Storey actions: the combined modal values scaled by the edition, beside the static forces."""

from __future__ import annotations

from dataclasses import dataclass

from calcsheet.core.design import Actions, actions
from calcsheet.steps.demand import Demand
from calcsheet.steps.secondmodel import apart
from calcsheet.steps.step import Caution, Done, Line, Number, Outcome, Step


@dataclass(frozen=True)
class ActionsOptions:
    """Nothing is asked of this step: the basis says it all."""


@dataclass(frozen=True, eq=False)
class ActionsResult:
    """Storey actions in each direction.

    Parameters
    ----------
    directions : tuple of Actions
        x before y.
    """

    directions: tuple[Actions, ...]


def run(options: ActionsOptions, basis: Done, demand: Done, peaks: Done, drift: Done) -> Outcome:
    demands: dict[str, Demand] = {d.direction: d for d in demand.result.directions}
    seconds = {d.direction: d.second_order for d in drift.result.directions}
    found: list[Actions] = []
    lines: list[Line] = []
    cautions: list[Caution] = []
    for item in peaks.result.directions:
        of = demands[item.direction]
        result = actions(basis.inputs.edition, of.facts, item.forces, item.scaling, of.static, seconds[item.direction])
        at = f"result/directions/{len(found)}"
        found.append(result)
        lines += _lines(result, at)
        cautions += _cautions(result, at)
    cautions += apart(basis.inputs, "weight", {"": Number(found[0].weight, "weight", "result/directions/0/weight")})
    shears = {
        item.direction: Number(item.design_base_shear, "force", f"result/directions/{i}/design_base_shear")
        for i, item in enumerate(found)
    }
    cautions += apart(basis.inputs, "base shear", shears)
    return Outcome(ActionsResult(tuple(found)), tuple(lines), tuple(cautions))


def _lines(item: Actions, at: str) -> list[Line]:
    d = item.direction
    design = Number(item.design_base_shear, "force", f"{at}/design_base_shear")
    weight = Number(item.weight, "force", f"{at}/weight")
    lines = []
    if item.scaling.forces > 1.0 and item.static is not None:
        static = Number(item.static.shear, "force", f"{at}/static/shear")
        modal = Number(item.modal_base_shear, "force", f"{at}/modal_base_shear")
        factor = Number(item.scaling.forces, "ratio", f"{at}/scaling/forces")
        lines.append(
            Line(f"Scale of forces, {d}", "static / modal", "{0} / {1}", (static, modal), factor, item.scaling.clause)
        )
    modal = Number(item.modal_base_shear, "force", f"{at}/modal_base_shear")
    factor = Number(item.scaling.forces, "ratio", f"{at}/scaling/forces")
    second = Number(float(item.amplified[0]), "ratio", f"{at}/amplified/0")
    lines.append(
        Line(
            f"Design base shear, {d}", "modal × scale × second order", "{0} × {1} × {2}", (modal, factor, second), design,
            item.scaling.clause,
        )
    )  # fmt: skip
    top = item.shear.size - 1
    lines.append(
        Line(
            f"Equivalent lateral force at the top, {d}", "shear of the top storey", "{0}",
            (Number(float(item.shear[top]), "force", f"{at}/shear/{top}"),),
            Number(float(item.equivalent[top]), "force", f"{at}/equivalent/{top}"), "statics",
        )
    )  # fmt: skip
    moment = Number(float(item.moment[0]), "moment", f"{at}/moment/0")
    arm = Number(item.overturning, "length", f"{at}/overturning")
    lines.append(Line(f"Overturning over weight, {d}", "M / W", "{0} / {1}", (moment, weight), arm, "statics"))
    return lines


def _cautions(item: Actions, at: str) -> list[Caution]:
    static, scaling = item.static, item.scaling
    if static is None or scaling.forces > 1.0 or item.modal_base_shear >= static.shear:
        return []
    numbers = (
        Number(item.modal_base_shear, "force", f"{at}/modal_base_shear"),
        Number(static.shear, "force", f"{at}/static/shear"),
    )
    text = (
        f"In {item.direction} the modal base shear of {{0}} is below the static one of {{1}} and is not scaled up to it "
        f"({scaling.clause})."
    )
    return [Caution("unscaled-base-shear", text, numbers, subject=item.direction)]


METHOD = r"""
Design shears and overturning moments are the combined modal ones times the edition's scale and, where it applies, the
second-order factor. Equivalent lateral forces are differences of design shears: they give these shears back, and are
no combined storey forces, whose sum would exceed the shear.
"""

ACTIONS = Step(
    "actions", 1, "Storey actions", ActionsOptions, ActionsResult, ("basis", "demand", "peaks", "drift"), run, METHOD
)
