"""View of the edges of rigid floors: displacements and drifts there, accidental torsion, static ratios."""

from __future__ import annotations

from collections.abc import Mapping
from html import escape
from typing import Any

from calcsheet.render.table import Column, table, values, words
from calcsheet.render.view import Rendered, View, system_of
from calcsheet.steps.step import Payload

EXCITED = {"x": "x", "y": "y", "both": "both directions"}
"""Shears of the lines, by what excites them."""


def render(payloads: Mapping[str, Payload], key: str, options: Mapping[str, Any]) -> Rendered:
    system, payload = system_of(payloads), payloads[key]
    levels = payloads[payload["needs"]["storeys"]]["inputs"]["level"]
    share = payload["inputs"]["accidental"]
    parts = [
        f"<p>Stiffness set: {escape(payload['result']['stiffness'])}. Accidental eccentricity: "
        f'<data value="/{key}/inputs/accidental">{share:g}</data> of the side, either way.</p>'
    ]
    for i, item in enumerate(payload["result"]["directions"]):
        at = f"/{key}/result/directions/{i}"
        parts.append(_edges(item, levels, system, at))
        if item["static"] is not None:
            parts.append(_static(item, levels, system, f"{at}/static"))
    result, at = payload["result"], f"/{key}/result/lines"
    parts += [_lines(result, field, said, levels, system, at) for field, said in EXCITED.items()]
    return Rendered("".join(parts))


def _lines(result: Mapping[str, Any], field: str, said: str, levels: list[str], system: str, at: str) -> str:
    order = list(range(len(levels)))[::-1]
    columns = [words("storey below level", [levels[i] for i in order])]
    for i, line in enumerate(result["lines"]):
        shears = [*line[field], *[None] * (len(levels) - len(line[field]))]  # a line may end below the top
        columns.append(values(f"line {line['name']}", shears, "force", system, f"{at}/{i}/{field}", order=order))
    caption = (
        f"Design storey shears of the lines under excitation in {said}, stiffness set {result['stiffness_forces']}"
    )
    return table(columns, kind="values", caption=caption)


def _sides(direction: str) -> tuple[str, str]:
    across = "y" if direction == "x" else "x"
    return f"at lower {across}", f"at higher {across}"


def _edges(item: Mapping[str, Any], levels: list[str], system: str, at: str) -> str:
    order = list(range(len(levels)))[::-1]
    columns = [words("storey below level", [levels[i] for i in order])]

    def pair(name: str, rows: list[list[float]], quantity: str, place: str) -> list[Column]:
        return [
            values(f"{name} {side}", [row[j] for row in rows], quantity, system, f"{at}/{place}/{{}}/{j}", order=order)
            for j, side in enumerate(_sides(item["direction"]))
        ]

    columns += pair("elastic drift", item["nominal"]["drift"], "displacement", "nominal/drift")
    columns += pair("masses shifted", item["accidental"]["drift"], "displacement", "accidental/drift")
    columns += pair("both directions", item["both"]["drift"], "displacement", "both/drift")
    columns += pair("design drift", item["design"], "displacement", "design")
    columns.append(values("limit", item["limit"], "displacement", system, f"{at}/limit", order=order))
    columns += pair("share of limit", item["share"], "share", "share")
    marked = [order.index(item["worst"][0])]
    return table(columns, kind="values", caption=f"Drifts in {item['direction']} at the edges", marked=marked)


def _static(item: Mapping[str, Any], levels: list[str], system: str, at: str) -> str:
    order, found = list(range(len(levels)))[::-1], item["static"]
    columns = [
        words("level", [levels[i] for i in order]),
        values("static force", found["force"], "force", system, f"{at}/force", order=order),
        values("accidental eccentricity", found["eccentricity"], "length", system, f"{at}/eccentricity", order=order),
        values("accidental torque of the storey", found["torque"], "moment", system, f"{at}/torque", order=order),
        values("larger edge drift over mean", found["ratio"], "ratio", system, f"{at}/ratio", order=order),
        values("Aₓ", found["amplification"], "ratio", system, f"{at}/amplification", order=order),
    ]
    caption = f"Static forces in {item['direction']} beside the centres of mass, Aₓ = 1 in them"
    return table(columns, kind="values", caption=caption)


TORSION = View("torsion", "Edges and accidental torsion", "torsion", render)
