"""View of the modal peaks: what is combined, so that a combined base shear can be checked by hand."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from calcsheet.render.symbols import symbols
from calcsheet.render.table import Column, table, values, words
from calcsheet.render.view import Rendered, View, system_of
from calcsheet.steps.step import Payload

SHOWN = 10
"""Modes in the tables of storey shears and correlation, at most."""


def render(payloads: Mapping[str, Payload], key: str, options: Mapping[str, Any]) -> Rendered:
    system, payload = system_of(payloads), payloads[key]
    parts = payloads[payload["needs"]["participation"]]["result"]["directions"]
    levels = payloads[payload["needs"]["storeys"]]["inputs"]["level"]
    level = payloads[payload["needs"]["basis"]]["result"]["level"]
    html = [f"<p>Force level: {symbols(level)}; neither scaled nor amplified for second order.</p>"]
    for i, (item, part) in enumerate(zip(payload["result"]["directions"], parts, strict=True)):
        at, of = f"/{key}/result/directions/{i}", f"/{payload['needs']['participation']}/result/directions/{i}"
        html += [_modes(item, part, system, at, of), _shears(item, levels, system, at), _correlation(item, at)]
        columns = len(item["ordinate"])
        if columns > SHOWN:
            html.append(
                f"<p>Storey shears and correlation list the first {SHOWN} of {columns}; combined values hold all.</p>"
            )
    return Rendered("".join(html))


def _modes(item: Mapping[str, Any], part: Mapping[str, Any], system: str, at: str, of: str) -> str:
    count = len(part["period"])
    names = [str(n + 1) for n in range(count)] + ["residual"] * item["residual"]
    blank = [None] * item["residual"]
    columns = (
        Column("mode", tuple(names)),
        values("period T", part["period"] + blank, "period", system, f"{of}/period"),
        values("ordinate", item["ordinate"], "acceleration", system, f"{at}/ordinate"),
        values("Γ, top = 1", part["gamma_roof"] + blank, "ratio", system, f"{of}/gamma_roof"),
        values("effective mass", part["effective_mass"] + blank, "mass", system, f"{of}/effective_mass"),
        values("base shear", item["shear"][0], "force", system, f"{at}/shear/0"),
        values("base moment", item["moment"][0], "moment", system, f"{at}/moment/0"),
    )
    return table(columns, kind="values", caption=f"Modal values in {item['direction']}, unscaled")


def _shears(item: Mapping[str, Any], levels: list[str], system: str, at: str) -> str:
    order = list(range(len(levels)))[::-1]
    columns = [words("storey below level", [levels[i] for i in order])]
    for mode in range(min(len(item["shear"][0]), SHOWN)):
        column = [row[mode] for row in item["shear"]]
        name = f"mode {mode + 1}" if not (item["residual"] and mode == len(item["shear"][0]) - 1) else "residual"
        columns.append(values(name, column, "force", system, f"{at}/shear/{{}}/{mode}", order=order))
    combined = item["forces"]["shear"]
    columns.append(values(f"by {item['rule']}", combined, "force", system, f"{at}/forces/shear", order=order))
    return table(columns, kind="values", caption=f"Modal storey shears in {item['direction']}, signed, unscaled")


def _correlation(item: Mapping[str, Any], at: str) -> str:
    shown = min(len(item["related"]), SHOWN)
    columns = [Column("mode", tuple(str(n + 1) for n in range(shown)))]
    for j in range(shown):
        column = [item["related"][i][j] for i in range(shown)]
        columns.append(values(str(j + 1), column, "correlation", "SI", f"{at}/related/{{}}/{j}"))
    return table(columns, kind="values", caption=f"Correlation of the modes in {item['direction']}, {item['rule']}")


PEAKS = View("peaks", "Modal peaks", "peaks", render)
