"""The plan of rigid floors: centres of stiffness, eccentricities, torsional radii, periods without coupling, shares."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from calcsheet.core.arrays import Array, Frozen, agrees
from calcsheet.core.errors import ModelError
from calcsheet.core.model import models_of
from calcsheet.core.plan import Centres, Uncoupled, centres, direction_shares, uncoupled
from calcsheet.core.rigidfloors import Floors
from calcsheet.steps.step import Caution, Done, Line, Number, Outcome, Step, plain

COUPLED = 0.1
"""Share of a mode's energy in a second movement from which it is named as coupled."""
SOURCE = "statics"


@dataclass(frozen=True)
class PlanOptions:
    """Nothing is asked of this step: the plan says it all."""


@dataclass(frozen=True, eq=False)
class PlanResult(Frozen):
    """The plan and what it makes of the modes.

    Parameters
    ----------
    centres : Centres or None
        Centres of stiffness; None where a line bends as a whole.
    uncoupled : Uncoupled
        First periods of each movement alone.
    omega, period : (m,) array
        Circular frequency [rad/s] and period [s] of each mode.
    shares : (3, m) array
        Share of each mode's kinetic energy in x, in y, in rotation.
    """

    centres: Centres | None
    uncoupled: Uncoupled
    omega: Array = field(metadata=agrees(rtol=1e-9))
    period: Array = field(metadata=agrees(rtol=1e-9))
    shares: Array = field(metadata=agrees(group="omega", atol=1e-8))


def floors_of_model(lateral: object) -> Floors:
    """The rigid floors of a model; a planar one has none, and is refused (ModelError)."""
    if not isinstance(lateral, Floors):
        raise ModelError("model", "planar in each direction", 'must be of model.kind "rigid floors" in job.toml')
    return lateral


def run(options: PlanOptions, storeys: Done, modes: Done) -> Outcome:
    building, (model, *_) = storeys.inputs, models_of(storeys.inputs, modes.result.stiffness)
    floors = floors_of_model(model.lateral)
    found, solved = centres(floors), modes.result.models[0].modes
    shares = direction_shares(model, solved)
    result = PlanResult(found, uncoupled(floors, building.mass), solved.omega, solved.period, shares)
    lines = [] if found is None else _lines(found, building.level[0])
    return Outcome(result, tuple(lines), tuple(_cautions(result, solved.repeated, building.level)))


def _lines(found: Centres, level: str) -> list[Line]:
    at, storey = "result/centres", f'storey below level "{plain(level)}"'
    torsion = Number(float(found.torsion[0]), "rotational stiffness", f"{at}/torsion/0")
    lines = []
    for i, (direction, across) in enumerate((("x", "y"), ("y", "x"))):
        other = 1 - i
        stiffness = Number(float(found.stiffness[0, other]), "stiffness", f"{at}/stiffness/0/{other}")
        radius = Number(float(found.radius[0, i]), "length", f"{at}/radius/0/{i}")
        lines.append(
            Line(
                f"Torsional radius along {direction}, {storey}",
                f"r_{direction} = √(k_θ / k_{across})",
                "√({0} / {1})",
                (torsion, stiffness),
                radius,
                "EN 1998-1:2004, 4.2.3.2(6) (from memory)",
            )
        )
    return lines


def _cautions(result: PlanResult, repeated: tuple[tuple[int, ...], ...], levels: tuple[str, ...]) -> list[Caution]:
    cautions = []
    if result.centres is None:
        text = "Lines that bend as a whole have no storey stiffness: centres of stiffness and torsional radii are not given."
        cautions.append(Caution("no-centres-of-stiffness", text))
    alone = {mode for group in repeated for mode in group}
    first = [i for i in range(min(3, result.period.size)) if i + 1 not in alone]
    coupled = [i for i in first if np.sort(result.shares[:, i])[-2] > COUPLED]
    if coupled:
        named = ", ".join(str(i + 1) for i in coupled)
        numbers = tuple(Number(float(result.shares[2, i]), "share", f"result/shares/2/{i}") for i in coupled)
        shares = ", ".join(f"{{{n}}}" for n in range(len(coupled)))
        text = f"Of the first three modes, {named} move in more than one way at once; rotation holds {shares} of their energy."
        cautions.append(Caution("coupled-modes", text, numbers))
    return cautions


METHOD = r"""
Floors are rigid in their plane and move by $x$, $y$ and a rotation $\theta$; lines of resistance take their part by the
displacement along themselves. In a storey of lines that have a storey stiffness, a force through the centre of stiffness
causes no rotation; the eccentricity is the way from there to the centre of mass, and

$$r_x = \sqrt{k_\theta / k_y} , \qquad r_y = \sqrt{k_\theta / k_x}$$

are the torsional radii, $k_\theta$ about the centre of stiffness (EN 1998-1:2004, 4.2.3.2(6), from memory). Periods without
coupling are those of each movement with the others held, about the centres of mass. A mode's share in a movement is that
of its kinetic energy.
"""

PLAN = Step("plan", 1, "Plan of the floors", PlanOptions, PlanResult, ("storeys", "modes"), run, METHOD)
