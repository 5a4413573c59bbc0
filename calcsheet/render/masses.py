"""View of the mass take-off: loads, what each level holds of them, and where its mass lies."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from calcsheet.core.floors import PLACES
from calcsheet.render.numbers import number
from calcsheet.render.table import Column, facts, table, values, words
from calcsheet.render.view import Rendered, View, system_of
from calcsheet.steps.step import Payload

WIDE = 8
"""Columns beside the level's that a table may have."""


def render(payloads: Mapping[str, Payload], key: str, options: Mapping[str, Any]) -> Rendered:
    system, payload = system_of(payloads), payloads[key]
    given, found = payload["inputs"], payload["result"]
    order = list(range(len(given["level"])))[::-1]
    level = words("level", [given["level"][i] for i in order])
    rows = [
        ("weight above the base", number(found["total"], "weight", system, f"/{key}/result/total")),
        (
            "lower half of the lowest storey, on no level",
            number(found["foot"], "weight", system, f"/{key}/result/foot"),
        ),
    ]
    return Rendered(
        _loads(given["load"], found["counted"], system, key)
        + _amounts(given, system, key, level, order)
        + (_others(given["other"], system, key) if given["other"] else "")
        + _weights(given, found, system, key, level, order)
        + _places(found, system, key, level, order)
        + facts(rows)
    )


def _loads(loads: Sequence[Mapping[str, Any]], counted: Sequence[float], system: str, key: str) -> str:
    """The loads; of columns the unit weight, so in a column of its own."""
    named = {"load": "name", "kind": "kind", "place": "place"}
    columns = [words(title, [load[field] for load in loads]) for title, field in named.items()]
    columns.append(
        values(
            "share in the masses", [load["share"] for load in loads], "share", system, f"/{key}/inputs/load/{{}}/share"
        )
    )
    columns.append(words("clause", [load["clause"] for load in loads]))
    for quantity, name in (("area load", "load per area"), ("unit weight", "unit weight")):
        held = [PLACES[load["place"]].value == quantity for load in loads]
        if any(held):
            at = f"/{key}/inputs/load/{{}}/value"
            shown = [load["value"] if h else None for load, h in zip(loads, held, strict=True)]
            columns.append(values(name, shown, quantity, system, at, as_given=True))
            shown = [value if h else None for value, h in zip(counted, held, strict=True)]
            columns.append(values(f"{name} counted", shown, quantity, system, f"/{key}/result/counted"))
    return table(columns, kind="values", caption="Loads, and what the masses hold of them")


def _amounts(given: Mapping[str, Any], system: str, key: str, level: Column, order: list[int]) -> str:
    def own(name: str, field: str, quantity: str) -> Column:
        at = f"/{key}/inputs/{field}"
        return values(name, given[field], quantity, system, at, order=order, as_given=True)

    columns = [level, own("storey height", "storey_height", "length"), own("floor area", "area", "area")]
    columns += [own(f"plan {d}", f"plan_{d}", "length") for d in "xy"]
    if any(given["centre_x"]) or any(given["centre_y"]):
        columns += [own(f"centre {d}", f"centre_{d}", "length") for d in "xy"]
    if any(r is not None for r in given["own_radius"]):
        columns.append(own("radius of gyration", "own_radius", "length"))
    amounts = []
    for j, load in enumerate(given["load"]):
        shown = [row[j] or None for row in given["amount"]]
        at = f"/{key}/inputs/amount/{{}}/{j}"
        quantity = PLACES[load["place"]].amount
        amounts.append(values(load["name"], shown, quantity, system, at, order=order, as_given=True))
    caption = "Loads on each floor; façade, walls and columns of the storey below it"
    return table(columns, kind="values", caption="Floors") + _in_tables(level, amounts, caption)


def _others(other: Sequence[Mapping[str, Any]], system: str, key: str) -> str:
    columns = [words("level", [o["level"] for o in other]), words("item", [o["name"] for o in other])]
    for name, field, quantity in (
        ("weight", "weight", "weight"),
        ("x", "x", "length"),
        ("y", "y", "length"),
        ("plan x", "plan_x", "length"),
        ("plan y", "plan_y", "length"),
    ):
        at = f"/{key}/inputs/other/{{}}/{field}"
        columns.append(values(name, [o[field] for o in other], quantity, system, at, as_given=field != "weight"))
    return table(columns, kind="values", caption="Other masses")


def _weights(
    given: Mapping[str, Any], found: Mapping[str, Any], system: str, key: str, level: Column, order: list[int]
) -> str:
    columns = []
    for j, load in enumerate(given["load"]):
        weights = [row[j] or None for row in found["by_load"]]
        at = f"/{key}/result/by_load/{{}}/{j}"
        columns.append(values(load["name"], weights, "weight", system, at, order=order))
    if given["other"]:
        weights = [w or None for w in found["other"]]
        columns.append(values("other masses", weights, "weight", system, f"/{key}/result/other", order=order))
    columns.append(values("weight", found["weight"], "weight", system, f"/{key}/result/weight", order=order))
    at = f"/{key}/result/weight_per_area"
    columns.append(values("weight per area", found["weight_per_area"], "pressure", system, at, order=order))
    return _in_tables(level, columns, "Weights by level and load")


def _in_tables(level: Column, columns: Sequence[Column], caption: str) -> str:
    """As many tables as the columns need on the width of a page."""
    parts = [columns[i : i + WIDE] for i in range(0, len(columns), WIDE)]
    titles = [caption, *[f"{caption}, continued"] * (len(parts) - 1)]
    return "".join(
        table([level, *part], kind="values", caption=title) for part, title in zip(parts, titles, strict=True)
    )


def _places(found: Mapping[str, Any], system: str, key: str, level: Column, order: list[int]) -> str:
    columns = [level]
    for name, field, quantity in (
        ("mass", "mass", "mass"),
        ("centre of mass x", "centre_x", "length"),
        ("centre of mass y", "centre_y", "length"),
        ("polar inertia", "inertia", "mass times length squared"),
        ("radius of gyration", "radius", "length"),
    ):
        digits = 3 if field.startswith("centre") else None
        at = f"/{key}/result/{field}"
        columns.append(values(name, found[field], quantity, system, at, order=order, digits=digits))
    return table(columns, kind="values", caption="Masses, their centres, and how they turn")


MASSES = View("mass take-off", "Mass take-off", "masses", render)
