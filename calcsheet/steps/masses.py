"""The mass take-off: what each level weighs, where its mass lies, and what in it wants a second look."""

from __future__ import annotations

import numpy as np

from calcsheet.core.floors import PLACES, VARIABLE, Floors
from calcsheet.core.masstakeoff import LevelMasses, evidence_of_take_off, take_off
from calcsheet.steps.step import Caution, Line, Number, Outcome, Step, plain
from calcsheet.steps.storeys import unusual_weights

DIFFERS = 0.01
"""Share of its mass by which a level of the storey table may differ from the take-off before it is named."""
AXES = "parallel axis theorem"


def run(floors: Floors) -> Outcome:
    found = take_off(floors)
    lines = [*_loads(floors, found), *(_level(floors, found, i) for i in range(len(floors.level))[::-1])]
    lines += _turning(floors, found)
    return Outcome(found, tuple(lines), tuple(_cautions(floors, found)), evidence_of_take_off(floors, found))


# ---- worked lines ----------------------------------------------------------------------------------------------------


def _loads(floors: Floors, found: LevelMasses) -> list[Line]:
    """What the masses hold of each load that isn't held whole."""
    lines = []
    for i, load in enumerate(floors.load):
        if load.share is not None and load.kind == VARIABLE:
            quantity = PLACES[load.place].value
            share = Number(load.share, "share", f"inputs/load/{i}/share")
            value = Number(load.value, quantity, f"inputs/load/{i}/value")
            counted = Number(float(found.counted[i]), quantity, f"result/counted/{i}")
            what, source = f"{load.name}: share held by the masses", load.clause or "mass basis of the job"
            lines.append(Line(what, "share × q", "{0} × {1}", (share, value), counted, source))
    return lines


class _Numbers(list[Number]):
    """Numbers of a line, each with its place in the words."""

    def put(self, value: float, quantity: str, at: str) -> str:
        self.append(Number(float(value), quantity, at))
        return f"{{{len(self) - 1}}}"


def _level(floors: Floors, found: LevelMasses, i: int) -> Line:
    """The whole sum of a level: every amount, height and load that it is made of."""
    numbers, terms = _Numbers(), []
    for j, load in enumerate(floors.load):
        if found.by_load[i, j] == 0.0:
            continue
        rows = (i, i + 1) if PLACES[load.place].storey else (i,)
        held = [row for row in rows if row < len(floors.level) and floors.amount[row, j] > 0.0]
        amounts = []
        for row in held:
            amount = numbers.put(floors.amount[row, j], PLACES[load.place].amount, f"inputs/amount/{row}/{j}")
            if PLACES[load.place].storey:
                amount = f"{numbers.put(floors.storey_height[row], 'length', f'inputs/storey_height/{row}')} × {amount}"
            amounts.append(amount)
        total = " + ".join(amounts)
        if PLACES[load.place].storey:
            total = f"½ ({total})" if len(amounts) > 1 else f"½ × {total}"
        value = numbers.put(found.counted[j], PLACES[load.place].value, f"result/counted/{j}")
        terms.append(f"{total} × {value} {plain(load.name)}")
    for k, other in enumerate(floors.other):
        if other.level == floors.level[i]:
            terms.append(f"{numbers.put(other.weight, 'weight', f'inputs/other/{k}/weight')} {plain(other.name)}")
    return Line(
        f'Mass, level "{floors.level[i]}"',
        "m = W/g, W = Σ A q + ½ Σ h L q",
        f"({' + '.join(terms) or '0'}) / g",
        tuple(numbers),
        Number(float(found.mass[i]), "mass", f"result/mass/{i}"),
        "common practice; g = 9.80665 m/s² = 32.174 ft/s²",
    )


def _turning(floors: Floors, found: LevelMasses) -> list[Line]:
    """Radius of gyration of each level, from the top."""
    lines = []
    for i in range(len(floors.level))[::-1]:
        if found.mass[i] > 0.0:
            inertia = Number(float(found.inertia[i]), "mass times length squared", f"result/inertia/{i}")
            mass = Number(float(found.mass[i]), "mass", f"result/mass/{i}")
            radius = Number(float(found.radius[i]), "length", f"result/radius/{i}")
            what = f'Radius of gyration, level "{floors.level[i]}"'
            lines.append(Line(what, "r = √(I/m)", "√({0} / {1})", (inertia, mass), radius, AXES))
    return lines


# ---- cautions --------------------------------------------------------------------------------------------------------


def _cautions(floors: Floors, found: LevelMasses) -> list[Caution]:
    return [
        *_unused(floors),
        *_shares(floors),
        *unusual_weights(found.weight_per_area.tolist(), floors.level, floors.below, "take-off"),
        *_centres(floors, found),
        *_covered(floors),
        *_stated(floors, found),
    ]


def _unused(floors: Floors) -> list[Caution]:
    text = f"Tables of the mass take-off: {plain('; '.join(floors.unused))}."
    return [Caution("unused-columns", text)] if floors.unused else []


def _shares(floors: Floors) -> list[Caution]:
    return [
        Caution(
            "no-mass-share",
            f"{plain(load.name)}: [[mass_basis]] of the job states no share of this variable load, and the masses hold "
            "none of it.",
            answer=True,
            subject=load.name,
        )
        for load in floors.load
        if load.share is None
    ]


def _centres(floors: Floors, found: LevelMasses) -> list[Caution]:
    cautions = []
    for i, level in enumerate(floors.level):
        off_x = abs(found.centre_x[i] - floors.centre_x[i]) > 0.5 * floors.plan_x[i]
        off_y = abs(found.centre_y[i] - floors.centre_y[i]) > 0.5 * floors.plan_y[i]
        if off_x or off_y:
            text = f'Level "{plain(level)}": its centre of mass, x {{0}} and y {{1}}, lies outside its plan; check positions.'
            numbers = tuple(
                Number(float(getattr(found, f"centre_{d}")[i]), "length", f"result/centre_{d}/{i}") for d in "xy"
            )
            cautions.append(Caution("centre-outside-plan", text, numbers, answer=True, subject=level))
    return cautions


def _covered(floors: Floors) -> list[Caution]:
    """Loads that cover more than the floor: an area in the wrong column, or a plan not drawn up to date."""
    cautions = []
    for j, load in enumerate(floors.load):
        if load.place != "floor":
            continue
        over = np.flatnonzero(floors.amount[:, j] > floors.area * (1.0 + 1e-9)).tolist()
        if over:
            named = ", ".join(
                f'{{{2 * n}}} of {{{2 * n + 1}}} at level "{plain(floors.level[i])}"' for n, i in enumerate(over)
            )
            numbers = tuple(
                number
                for i in over
                for number in (
                    Number(float(floors.amount[i, j]), "area", f"inputs/amount/{i}/{j}"),
                    Number(float(floors.area[i]), "area", f"inputs/area/{i}"),
                )
            )
            text = f"{plain(load.name)} covers more than the floor: {named}; check the areas."
            cautions.append(Caution("covers-more", text, numbers, subject=load.name))
    return cautions


def _stated(floors: Floors, found: LevelMasses) -> list[Caution]:
    """The storey table's own masses, where they differ from the take-off."""
    if floors.stated is None:
        return []
    far = np.abs(floors.stated - found.mass) > DIFFERS * np.maximum(found.mass, floors.stated)
    if not far.any():
        return []
    gap = np.where(far, np.abs(floors.stated - found.mass), 0.0)
    i = int(np.argmax(gap))
    others = int(far.sum()) - 1
    more = f", and {others} more level{'' if others == 1 else 's'} by more than {DIFFERS * 100:g} %" if others else ""
    where = f'at level "{plain(floors.level[i])}"{more}'
    text = f"The masses of storeys.csv are not those of the take-off: {{0}} against {{1}} {where}."
    numbers = (
        Number(float(floors.stated[i]), "mass", f"inputs/stated/{i}"),
        Number(float(found.mass[i]), "mass", f"result/mass/{i}"),
    )
    return [Caution("masses-differ", text, numbers, answer=True)]


METHOD = r"""
Each load counts with the share of it that the masses hold: permanent loads whole, variable loads by the job's mass basis.
What lies on a floor goes to its level; what stands in a storey goes half to the level above and half to the level below
(common practice), the lower half of the lowest storey to its foot, outside the levels:

$$W_i = \sum A\, q + \frac{1}{2}\sum \left( h_i L_i + h_{i+1} L_{i+1} \right) q + \sum W_{other} , \qquad m_i = \frac{W_i}{g}$$

with areas $A$, storey heights $h$, lengths of façade and walls $L$ (of columns: their section, with their unit weight)
and counted loads $q$. Positions are in the plan's x and y; floors without a centre of their own are centred at 0, 0.
The centre of mass and the polar moment of inertia about it follow from the parts $k$ of a level by parallel axes,

$$x = \frac{\sum m_k x_k}{\sum m_k} , \qquad I = \sum m_k \left( r_k^2 + (x_k - x)^2 + (y_k - y)^2 \right) , \qquad
r = \sqrt{\frac{I}{m}}$$

each part with its own radius of gyration: spread over a rectangle $a \times b$, as floor loads, walls and columns are
taken, $r_k^2 = (a^2 + b^2)/12$ unless one is given; along its edge, as façade and parapet run, $r_k^2 = (a + b)^2/12$;
0 for a point (handbook formulas, from memory). Half storeys turn about the centre of the floor on top of them.
"""

MASSES = Step("masses", 1, "Mass take-off", Floors, LevelMasses, (), run, METHOD)
