"""View of the drift check: table, plot against the limit, second order, irregularities, separation."""

from __future__ import annotations

from collections.abc import Mapping
from html import escape
from typing import Any

import numpy as np

from calcsheet.render.figure import RUST, Drawing, blank, quiet, styled, svg
from calcsheet.render.numbers import number
from calcsheet.render.steps_plot import stepped
from calcsheet.render.symbols import symbols
from calcsheet.render.table import Column, facts, table, values, words
from calcsheet.render.view import Rendered, View, system_of
from calcsheet.render.words import outcome
from calcsheet.steps.step import Payload
from calcsheet.units import display


def render(payloads: Mapping[str, Payload], key: str, options: Mapping[str, Any]) -> Rendered:
    system, payload = system_of(payloads), payloads[key]
    storeys = payloads["storeys"]["inputs"]
    directions = payload["result"]["directions"]
    html = [f"<p>Stiffness set: {escape(payload['result']['stiffness'])}.</p>"]
    peaks = payload["needs"]["peaks"]
    for i, item in enumerate(directions):
        at = f"/{key}/result/directions/{i}"
        of, cap = f"/{peaks}/result/directions/{i}", payloads[peaks]["result"]["directions"][i]["cap"]
        html.append(_table(item, cap, storeys["level"], system, at, of))
        html += [_words(item, storeys["level"], system, at), _screens(item)]
    return Rendered("".join(html), lambda: (_drawn(directions, storeys, system),))


def _table(
    item: Mapping[str, Any], cap: Mapping[str, Any] | None, levels: list[str], system: str, at: str, of: str
) -> str:
    order = list(range(len(levels)))[::-1]
    columns = [
        words("storey below level", [levels[i] for i in order]),
        values("elastic drift", item["elastic"], "displacement", system, f"{at}/elastic", order=order),
        *_capped(cap, system, of, order),
        values("design drift", item["design"], "displacement", system, f"{at}/design", order=order),
        values("limit", item["limit"], "displacement", system, f"{at}/limit", order=order),
        values("share of limit", item["share"], "share", system, f"{at}/share", order=order),
        values("design displacement", item["displacement"], "displacement", system, f"{at}/displacement", order=order),
    ]
    second = item["second_order"]
    if second is not None:
        columns.append(values("θ", second["theta"], "ratio", system, f"{at}/second_order/theta", order=order))
    marked = [order.index(item["worst"])]
    return table(columns, kind="values", caption=f"Drifts in {item['direction']}", marked=marked)


def _capped(cap: Mapping[str, Any] | None, system: str, of: str, order: list[int]) -> list[Column]:
    """The drift of the elastic spectrum, which the design drift need not exceed; only where the edition has it."""
    if cap is None:
        return []
    return [values("by elastic spectrum", cap["drift"], "displacement", system, f"{of}/cap/drift", order=order)]


def _words(item: Mapping[str, Any], levels: list[str], system: str, at: str) -> str:
    worst, factor, second = item["worst"], item["factor"], item["second_order"]
    share = number(item["share"][worst], "share", system, f"{at}/share/{worst}")
    verdict = "passes" if item["share"][worst] <= 1.0 else "exceeds"
    rows = [
        (
            "governing storey",
            f"below level {escape(levels[worst])}: {share} of its limit, {outcome(verdict)}",
        ),
        (
            "design drift over elastic",
            f"{symbols(factor['symbol'])} = {number(factor['value'], 'ratio', system, f'{at}/factor/value')} "
            f"({symbols(factor['clause'])})" + ("; the elastic spectrum's drift governs" if item["capped"] else ""),
        ),
    ]
    if second is None:
        rows.append(
            ("second order", f'<span class="not-assessed">not assessed</span>: {escape(item["second_order_note"])}')
        )
    else:
        largest = int(np.argmax(second["theta"]))
        theta = number(second["theta"][largest], "ratio", system, f"{at}/second_order/theta/{largest}")
        limit = number(second["limit"], "ratio", system, f"{at}/second_order/limit")
        rows.append(
            (
                "second order",
                f"θ up to {theta}, limit {limit}: {outcome(second['verdict'])}, "
                f"{symbols(second['text'])} ({symbols(second['clause'])})",
            )
        )
    if item["separation"] is not None:
        clear = number(item["separation"], "displacement", system, f"{at}/separation")
        rows.append(
            ("to keep clear of a neighbour that does not move", f"{clear} ({symbols(item['separation_clause'])})")
        )
    else:
        rows.append(
            ("separation", f'<span class="not-assessed">not assessed</span>: {symbols(item["separation_clause"])}')
        )
    return facts(rows)


def _screens(item: Mapping[str, Any]) -> str:
    screens = item["screens"]
    verdicts = tuple(outcome(s["verdict"]) for s in screens)
    return table(
        (
            words("irregularity", [s["name"] for s in screens]),
            Column("outcome", verdicts, numeric=False),
            Column("what was found, or is missing", tuple(symbols(s["text"]) for s in screens), numeric=False),
            words("consequence where it exceeds", [s["consequence"] or "\u2013" for s in screens]),
            Column("clause", tuple(symbols(s["clause"]) for s in screens), numeric=False),
        ),
        kind="words",
        caption=f"Irregularities in {item['direction']}",
    )


def _drawn(directions: list[dict[str, Any]], storeys: Mapping[str, Any], system: str) -> Drawing:
    length, drift = display("elevation", system), display("displacement", system)
    elevation = np.array([storeys["base_elevation"], *storeys["elevation"]]) / length.factor
    with styled():
        figure = blank(3.0)
        axes = figure.subplots(1, len(directions), sharey=True, squeeze=False)[0]
        figure.subplots_adjust(left=0.09, right=0.985, bottom=0.16, top=0.9, wspace=0.1)
        for ax, item in zip(axes, directions, strict=True):
            stepped(ax, elevation, np.array(item["limit"]) / drift.factor, "limit", 1)
            stepped(ax, elevation, np.array(item["design"]) / drift.factor, "design drift", 0)
            worst = item["worst"]
            middle = 0.5 * (elevation[worst] + elevation[worst + 1])
            ax.plot(
                item["design"][worst] / drift.factor, middle, marker="D", markersize=4.5, color=RUST, linestyle="none"
            )
            ax.set_xlim(0.0, None)
            ax.set_ylim(elevation[0], elevation[-1])
            ax.set_xlabel(f"storey drift in {item['direction']} [{drift.symbol}]")
            quiet(ax)
        axes[0].set_ylabel(f"elevation [{length.symbol}]")
    caption = "Design drifts over elevation against their limits; the governing storey is marked."
    return Drawing("drifts", caption, caption, svg(figure, caption))


DRIFT = View("drift", "Drift, second order, irregularities", "drift", render)
