"""Views of the storey actions and of the comparison of modal, static and design base shear."""

from __future__ import annotations

from collections.abc import Mapping
from html import escape
from typing import Any

import numpy as np

from calcsheet.render.figure import Drawing, blank, quiet, styled, svg
from calcsheet.render.numbers import number, text
from calcsheet.render.steps_plot import stepped, straight
from calcsheet.render.symbols import symbols
from calcsheet.render.table import Column, facts, table, values, words
from calcsheet.render.view import Rendered, View, system_of
from calcsheet.steps.step import Payload
from calcsheet.units import display

EQUIVALENT = (
    "Equivalent lateral forces are differences of the design shears, for use where forces are asked for; combined modal "
    "forces, added up, would give more than the shear."
)


def render(payloads: Mapping[str, Payload], key: str, options: Mapping[str, Any]) -> Rendered:
    system, payload = system_of(payloads), payloads[key]
    storeys = payloads["storeys"]["inputs"]
    basis = payloads[payload["needs"]["basis"]]["result"]
    directions = payload["result"]["directions"]
    more = "the edition's scale is in, and second-order amplification where θ asks for it"
    html = [f"<p>Force level: {symbols(basis['level'])}; {more}.</p>"]
    for i, item in enumerate(directions):
        html.append(_table(item, storeys["level"], system, f"/{key}/result/directions/{i}"))
    html.append(f"<p>{escape(EQUIVALENT)}</p>")
    return Rendered("".join(html), lambda: tuple(_drawn(item, storeys, system) for item in directions))


def _table(item: Mapping[str, Any], levels: list[str], system: str, at: str) -> str:
    order = list(range(len(levels)))[::-1]
    columns = [
        words("level, storey below", [levels[i] for i in order]),
        values("design shear", item["shear"], "force", system, f"{at}/shear", order=order),
        values("design moment at foot", item["moment"], "moment", system, f"{at}/moment", order=order),
        values("second-order factor", item["amplified"], "ratio", system, f"{at}/amplified", order=order),
        values("equivalent lateral force", item["equivalent"], "force", system, f"{at}/equivalent", order=order),
        values("static force", item["static_force"], "force", system, f"{at}/static_force", order=order),
    ]
    if item["static"] is None:
        del columns[-1]
    return table(columns, kind="values", caption=f"Storey actions in {item['direction']}")


def _drawn(item: Mapping[str, Any], storeys: Mapping[str, Any], system: str) -> Drawing:
    length, force, moment = (display(q, system) for q in ("elevation", "force", "moment"))
    elevation = np.array([storeys["base_elevation"], *storeys["elevation"]]) / length.factor
    shear = np.array(item["shear"]) / force.factor
    static = np.cumsum(np.array(item["static_force"])[::-1])[::-1] / force.factor
    with styled():
        figure = blank(3.0)
        left, right = figure.subplots(1, 2, sharey=True)
        figure.subplots_adjust(left=0.09, right=0.985, bottom=0.16, top=0.9, wspace=0.1)
        stepped(left, elevation, shear, "design", 0)
        if item["static"] is not None:
            stepped(left, elevation, static, "static", 1)
        left.set_xlabel(f"storey shear in {item['direction']} [{force.symbol}]")
        left.set_ylabel(f"elevation [{length.symbol}]")
        straight(right, elevation, [*(np.array(item["moment"]) / moment.factor), 0.0], "design", 0)
        right.set_xlabel(f"overturning moment in {item['direction']} [{moment.symbol}]")
        for ax in (left, right):
            ax.set_xlim(0.0, None)
            ax.set_ylim(elevation[0], elevation[-1])
            ax.locator_params(axis="x", nbins=6)
            quiet(ax)
    caption = f"Storey shears and overturning moments in {item['direction']} over elevation."
    return Drawing(f"actions-{item['direction']}", caption, caption, svg(figure, caption))


def compare(payloads: Mapping[str, Payload], key: str, options: Mapping[str, Any]) -> Rendered:
    system, html = system_of(payloads), []
    for i, item in enumerate(payloads[key]["result"]["directions"]):
        at, static = f"/{key}/result/directions/{i}", item["static"]
        rows = [("modal base shear", _shear(item["modal_base_shear"], item, system, f"{at}/modal_base_shear"))]
        if static is not None:
            rows += [
                ("static base shear", _shear(static["shear"], item, system, f"{at}/static/shear")),
                ("what governs it", f"{symbols(static['governing'])} ({symbols(static['clause'])})"),
                (
                    "approximate period",
                    number(static["approximate_period"], "period", system, f"{at}/static/approximate_period"),
                ),
                ("period used", number(static["period"], "period", system, f"{at}/static/period")),
                ("static forces over the height", symbols(item["static_clause"])),
            ]
        scaling = item["scaling"]
        rows += [
            ("design base shear", _shear(item["design_base_shear"], item, system, f"{at}/design_base_shear")),
            ("scale of forces", number(scaling["forces"], "ratio", system, f"{at}/scaling/forces")),
            ("scale of drifts", number(scaling["drifts"], "ratio", system, f"{at}/scaling/drifts")),
            ("why", f"{symbols(scaling['text'])} ({symbols(scaling['clause'])})"),
            ("overturning at the base over weight", number(item["overturning"], "length", system, f"{at}/overturning")),
        ]
        html.append(f"<h4>Direction {escape(item['direction'])}</h4>{facts(rows)}")
    html.append(_second_model(payloads, payloads[key], key, system))
    return Rendered("".join(html))


def _second_model(payloads: Mapping[str, Payload], payload: Payload, key: str, system: str) -> str:
    """Results of the engineer's second model beside these."""
    basis, demand = payload["needs"]["basis"], payload["needs"]["demand"]
    given = payloads[basis]["inputs"]["second_model"]
    if not given:
        return ""
    rows = []
    for i, other in enumerate(given):
        value, quantity, at = _here(other, payloads[demand], demand, payload, key, payloads["storeys"])
        difference = 100.0 * (other["value"] / value - 1.0)
        rows.append(
            (
                f"{other['quantity']} {other['direction']}".strip(),
                number(value, quantity, system, at),
                number(other["value"], quantity, system, f"/{basis}/inputs/second_model/{i}/value"),
                f"{text(difference, 1)} %",
                escape(other["origin"]),
            )
        )
    names, here, there, difference, origin = zip(*rows, strict=True)
    columns = (
        words("quantity", names),
        Column("here", here),
        Column("second model", there),
        Column("difference", difference),
        Column("origin", origin, numeric=False),
    )
    return table(columns, kind="values", caption="Second model")


def _here(
    other: Mapping[str, Any], demand: Payload, demand_key: str, actions: Payload, key: str, storeys: Payload
) -> tuple[float, str, str]:
    """This calculation's value of a quantity of the second model, its quantity in the unit table, its place."""
    if other["quantity"] == "weight":
        return storeys["result"]["weight"], "weight", "/storeys/result/weight"
    names = [d["direction"] for d in demand["result"]["directions"]]
    i = names.index(other["direction"])
    if other["quantity"] == "period":
        return (
            demand["result"]["directions"][i]["facts"]["period"],
            "period",
            f"/{demand_key}/result/directions/{i}/facts/period",
        )
    shear = actions["result"]["directions"][i]["design_base_shear"]
    return shear, "force", f"/{key}/result/directions/{i}/design_base_shear"


def _shear(value: float, item: Mapping[str, Any], system: str, at: str) -> str:
    """A base shear with its share of the weight."""
    return f"{number(value, 'force', system, at)}, {100 * value / item['weight']:.2f} % of the weight"


ACTIONS = View("actions", "Storey actions", "actions", render)
COMPARISON = View("comparison", "Modal, static and design base shear", "actions", compare)
