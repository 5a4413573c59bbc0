"""View of the plan of rigid floors: centres of stiffness, eccentricities, radii, periods, shares of the modes."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from calcsheet.render.numbers import number
from calcsheet.render.table import Column, facts, table, values, words
from calcsheet.render.view import Rendered, View, system_of
from calcsheet.steps.step import Payload

SHOWN = 12
"""Modes listed, at most."""


def render(payloads: Mapping[str, Payload], key: str, options: Mapping[str, Any]) -> Rendered:
    system, payload = system_of(payloads), payloads[key]
    levels = payloads[payload["needs"]["storeys"]]["inputs"]["level"]
    result, at = payload["result"], f"/{key}/result"
    parts = [] if result["centres"] is None else [_centres(result["centres"], levels, system, f"{at}/centres")]
    parts.append(_shares(result, system, at))
    rows = [
        (
            f"first period of {name} alone",
            number(result["uncoupled"][field], "period", system, f"{at}/uncoupled/{field}"),
        )
        for name, field in (("x", "x"), ("y", "y"), ("rotation", "rotation"))
    ]
    return Rendered("".join(parts) + facts(rows))


def _centres(found: Mapping[str, Any], levels: list[str], system: str, at: str) -> str:
    order = list(range(len(levels)))[::-1]

    def pair(name: str, field: str, quantity: str) -> list[Column]:
        return [
            values(
                f"{name} {d}", [row[i] for row in found[field]], quantity, system, f"{at}/{field}/{{}}/{i}", order=order
            )
            for i, d in enumerate("xy")
        ]

    columns = [words("storey below level", [levels[i] for i in order])]
    columns += pair("centre of stiffness", "centre", "length")
    columns += pair("eccentricity", "eccentricity", "length")
    columns += pair("torsional radius", "radius", "length")
    columns += pair("storey stiffness", "stiffness", "stiffness")
    torsion = values(
        "torsional stiffness", found["torsion"], "rotational stiffness", system, f"{at}/torsion", order=order
    )
    return table([*columns, torsion], kind="values", caption="Centres of stiffness, torsional radii")


def _shares(result: Mapping[str, Any], system: str, at: str) -> str:
    shown = range(min(len(result["period"]), SHOWN))
    columns = [
        Column("mode", tuple(str(i + 1) for i in shown)),
        values("period T", result["period"], "period", system, f"{at}/period", order=shown),
    ]
    for i, name in enumerate(("in x", "in y", "rotation")):
        columns.append(values(name, result["shares"][i], "share", system, f"{at}/shares/{i}", order=shown))
    return table(columns, kind="values", caption="Share of each mode's kinetic energy in x, in y and in rotation")


PLAN = View("plan", "Plan of the floors", "plan", render)
