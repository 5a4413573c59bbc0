"""Views of the storey actions and of the comparison of modal, static and design base shear."""

from __future__ import annotations

from collections.abc import Mapping
from html import escape
from typing import Any

import numpy as np

from calcsheet.render.figure import Drawing, blank, quiet, styled, svg
from calcsheet.render.numbers import number
from calcsheet.render.steps_plot import stepped, straight
from calcsheet.render.table import facts, table, values, words
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
    html = [f"<p>Force level: {escape(basis['level'])}; second-order amplification is in where θ asks for it.</p>"]
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
                ("what governs it", f"{escape(static['governing'])} ({escape(static['clause'])})"),
                (
                    "approximate period",
                    number(static["approximate_period"], "period", system, f"{at}/static/approximate_period"),
                ),
                ("period used", number(static["period"], "period", system, f"{at}/static/period")),
                ("static forces over the height", escape(item["static_clause"])),
            ]
        scaling = item["scaling"]
        rows += [
            ("design base shear", _shear(item["design_base_shear"], item, system, f"{at}/design_base_shear")),
            ("scale of forces", number(scaling["forces"], "ratio", system, f"{at}/scaling/forces")),
            ("scale of drifts", number(scaling["drifts"], "ratio", system, f"{at}/scaling/drifts")),
            ("why", f"{escape(scaling['text'])} ({escape(scaling['clause'])})"),
            ("overturning at the base over weight", number(item["overturning"], "length", system, f"{at}/overturning")),
        ]
        html.append(f"<h4>Direction {escape(item['direction'])}</h4>{facts(rows)}")
    return Rendered("".join(html))


def _shear(value: float, item: Mapping[str, Any], system: str, at: str) -> str:
    """A base shear with its share of the weight."""
    return f"{number(value, 'force', system, at)}, {100 * value / item['weight']:.2f} % of the weight"


ACTIONS = View("actions", "Storey actions", "actions", render)
COMPARISON = View("comparison", "Modal, static and design base shear", "actions", compare)
