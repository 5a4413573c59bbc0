"""View of the storey table."""

from __future__ import annotations

from collections.abc import Mapping
from html import escape
from typing import Any

from calcsheet.core.lateral import KINDS
from calcsheet.render.numbers import number
from calcsheet.render.table import Column, facts, table, values, words
from calcsheet.render.view import Rendered, View, system_of
from calcsheet.steps.step import Payload


def render(payloads: Mapping[str, Payload], key: str, options: Mapping[str, Any]) -> Rendered:
    system, payload = system_of(payloads), payloads[key]
    given, sums = payload["inputs"], payload["result"]
    roof_first = list(range(len(given["level"])))[::-1]
    columns = [
        words("level", [given["level"][i] for i in roof_first]),
        values(
            "elevation",
            given["elevation"],
            "elevation",
            system,
            f"/{key}/inputs/elevation",
            order=roof_first,
            as_given=True,
        ),
        values(
            "storey height",
            given["storey_height"],
            "length",
            system,
            f"/{key}/inputs/storey_height",
            order=roof_first,
            as_given=True,
        ),
        *_masses(given, sums, system, key, roof_first),
        values(
            "mass at and above",
            sums["mass_above"],
            "mass",
            system,
            f"/{key}/result/mass_above",
            order=roof_first,
            digits=5,
        ),
    ]
    for name, field, quantity in (("gravity load", "gravity", "force"), ("floor area", "area", "area")):
        if given[field] is not None:
            at = f"/{key}/inputs/{field}"
            columns.append(values(name, given[field], quantity, system, at, order=roof_first, as_given=True))
    if sums["weight_per_area"] is not None:
        at = f"/{key}/result/weight_per_area"
        columns.append(values("weight per area", sums["weight_per_area"], "pressure", system, at, order=roof_first))
    matrices = []
    members = payloads["card"]["inputs"]["model"].get("members")
    for i, named in enumerate(given["stiffness"]):
        for direction, lateral in named["lateral"].items():
            at, title = f"/{key}/inputs/stiffness/{i}/lateral/{direction}", direction
            if len(given["stiffness"]) > 1:
                title += f", {named['name']}"
            kind = KINDS[lateral["kind"]]
            for c in kind.columns:
                numbers, name = lateral[c.field], f"{c.heading} {title}"
                if numbers is not None:
                    numbers, at_storey = _filled(numbers, given["level"]), f"{at}/{c.field}"
                    columns.append(
                        values(name, numbers, c.heading, system, at_storey, order=roof_first, as_given=not members)
                    )
            if kind.table:
                caption = f"{lateral['kind']} {direction}, {named['name']}"
                matrices.append(_matrix(caption, kind.table, given["level"], lateral, system, at))
    rows = [
        ("total mass above the base", number(sums["mass"], "mass", system, f"/{key}/result/mass")),
        ("total weight above the base", number(sums["weight"], "weight", system, f"/{key}/result/weight")),
        ("height above the base", number(sums["height"], "length", system, f"/{key}/result/height")),
        (
            f"effective base: {given['base'] or 'foot of the lowest storey'}",
            "elevation " + number(given["base_elevation"], "elevation", system, f"/{key}/inputs/base_elevation"),
        ),
    ]
    if members is not None:
        rows.append(
            ("storey stiffnesses", f"taken off from {escape(members)}, before the factors of the stiffness sets")
        )
    rows += [
        (
            f'stiffness set "{named["name"]}"',
            escape(_serves(named["name"], given) + (named["ground"] or "no ground given")),
        )
        for named in given["stiffness"]
    ]
    rows += [
        _springs(d, springs, system, f"/{key}/inputs/springs/{d}") for d, springs in given.get("springs", {}).items()
    ]
    if given.get("second_order"):
        rows.append(("second-order effects", "in the stiffness, by the gravity loads"))
    below = _below(given, system, key) if given["below"] else ""
    if given.get("plan") is not None:
        matrices = [*_plan(given["plan"], given["level"], system, f"/{key}/inputs/plan"), *matrices]
    return Rendered(table(columns, kind="values") + below + "".join(matrices) + facts(rows))


def _plan(plan: Mapping[str, Any], levels: list[str], system: str, at: str) -> list[str]:
    """The plan of rigid floors: its levels and its lines of resistance."""
    order = list(range(len(levels)))[::-1]

    def column(name: str, field: str, i: int) -> Column:
        numbers = [row[i] for row in plan[field]]
        return values(name, numbers, "length", system, f"{at}/{field}/{{}}/{i}", order=order, as_given=True)

    floors = [words("level", [levels[i] for i in order])]
    floors += [column(f"centre of mass {d}", "centre", i) for i, d in enumerate("xy")]
    at_level = f"{at}/gyration"
    floors.append(
        values("radius of gyration", plan["gyration"], "length", system, at_level, order=order, as_given=True)
    )
    if plan["extent"] is not None:
        sides = ("plan x from", "plan x to", "plan y from", "plan y to")
        floors += [column(name, "extent", i) for i, name in enumerate(sides)]
    lines = plan["lines"]
    resisting = [words("line", [line["name"] for line in lines])]
    for name, field, quantity in (("x", "x", "length"), ("y", "y", "length"), ("direction", "angle", "angle")):
        numbers = [line[field] for line in lines]
        given = quantity == "length"
        resisting.append(values(name, numbers, quantity, system, f"{at}/lines/{{}}/{field}", as_given=given))
    return [
        table(floors, kind="values", caption="Floors in plan"),
        table(resisting, kind="values", caption="Lines of resistance, directions from x towards y"),
    ]


def _masses(given: Mapping[str, Any], sums: Mapping[str, Any], system: str, key: str, order: list[int]) -> list[Column]:
    """Mass as given or taken off; or weight as given, with the mass that follows from it."""
    if given["given"] in ("mass", "take-off"):
        name, at, typed = "mass", f"/{key}/inputs/mass", given["given"] == "mass"
        name = name if typed else "mass by take-off"
        return [values(name, given["mass"], "mass", system, at, order=order, as_given=typed)]
    at = f"/{key}/result/weight_of_level"
    return [
        values("weight", sums["weight_of_level"], "weight", system, at, order=order, as_given=True),
        values("mass", given["mass"], "mass", system, f"/{key}/inputs/mass", order=order),
    ]


def _serves(name: str, given: Mapping[str, Any]) -> str:
    served = [purpose for purpose in ("forces", "drifts") if given[purpose] == name]
    return f"serves {' and '.join(served)}; " if served else ""


def _filled(numbers: list[float], levels: list[str]) -> list[float | None]:
    """A cell a level: a line of resistance may end below the top."""
    return [*numbers, *[None] * (len(levels) - len(numbers))]


def _springs(direction: str, springs: Mapping[str, Any], system: str, at: str) -> tuple[str, str]:
    """Springs at the base of one direction."""
    said = []
    for name, quantity in (("translation", "stiffness"), ("rocking", "rotational stiffness")):
        value = springs[name]
        said.append(f"{name} {'fixed' if value is None else number(value, quantity, system, f'{at}/{name}')}")
    if springs["damping"] is not None:
        said.append(f"damping {number(springs['damping'], 'share', system, f'{at}/damping')}, not used")
    return f"base springs {direction}", "; ".join(said)


def _below(given: Mapping[str, Any], system: str, key: str) -> str:
    below = given["below"]
    order, at = list(range(len(below)))[::-1], f"/{key}/inputs/below"
    columns = [words("level", [below[i]["level"] for i in order])]
    for name, field in (("elevation", "elevation"), ("mass", "mass")):
        typed = field == "elevation" or given["given"] != "take-off"
        columns.append(
            values(name, [b[field] for b in below], field, system, f"{at}/{{}}/{field}", order=order, as_given=typed)
        )
    return table(columns, kind="values", caption="Not in the model: at or below the effective base")


def _matrix(title: str, quantity: str, levels: list[str], lateral: Mapping[str, Any], system: str, at: str) -> str:
    order = list(range(len(lateral["matrix"])))[::-1]
    columns = [words("level", [levels[i] for i in order])]
    for j in order:
        entries = [row[j] for row in lateral["matrix"]]
        columns.append(
            values(levels[j], entries, quantity, system, f"{at}/matrix/{{}}/{j}", order=order, as_given=True)
        )
    return table(columns, kind="values", caption=title)


STOREYS = View("storeys", "Storey table", "storeys", render)
