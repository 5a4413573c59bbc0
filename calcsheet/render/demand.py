"""View of the design demand: the spectrum with the modes' periods on it, and what the edition says."""

from __future__ import annotations

from collections.abc import Mapping
from html import escape
from typing import Any

import numpy as np

from calcsheet.render.figure import GREY, LINES, Drawing, blank, quiet, styled, svg
from calcsheet.render.numbers import number
from calcsheet.render.table import Column, facts, table, values
from calcsheet.render.view import Rendered, View, system_of
from calcsheet.steps.step import Payload
from calcsheet.units import display

MARKED = 6
"""Modes whose periods are marked on the spectrum."""


def render(payloads: Mapping[str, Payload], key: str, options: Mapping[str, Any]) -> Rendered:
    system, payload = system_of(payloads), payloads[key]
    basis = payloads[payload["needs"]["basis"]]
    directions = payload["result"]["directions"]
    parts = [_edition(basis, directions, payload["needs"]["basis"])]
    for i, item in enumerate(directions):
        order = range(len(item["ordinate"]))
        periods = payloads[payload["needs"]["participation"]]["result"]["directions"][i]["period"]
        at = f"/{payload['needs']['participation']}/result/directions/{i}/period"
        columns = (
            Column("mode", tuple(str(n + 1) for n in order)),
            values("period T", periods, "period", system, at),
            values(
                "design ordinate", item["ordinate"], "acceleration", system, f"/{key}/result/directions/{i}/ordinate"
            ),
        )
        parts.append(table(columns, kind="values", caption=f"Design ordinates in {item['direction']}"))
    return Rendered("".join(parts), lambda: (_drawn(directions, basis, payloads, payload, system),))


def _edition(basis: Mapping[str, Any], directions: list[dict[str, Any]], key: str) -> str:
    said = basis["result"]
    factor = said["importance"]
    rows = [
        ("edition", escape(said["edition"])),
        ("force level", escape(said["level"])),
        (
            f"importance, {factor['symbol']}",
            f"{number(factor['value'], 'ratio', 'SI', f'/{key}/result/importance/value')} ({escape(factor['clause'])})",
        ),
        ("combination", f"{escape(basis['inputs']['combination'])} ({escape(said['combination_clause'])})"),
        ("modes asked for", f"{escape(said['modes']['text'])} ({escape(said['modes']['clause'])})"),
    ]
    for item in directions:
        answer = item["permitted"]
        rows.append(
            (
                f"is this analysis permitted? {item['direction']}",
                f"{escape(answer['text'])} ({escape(answer['clause'])})",
            )
        )
    parameters = basis["inputs"]["edition"]
    rows += [
        (name.replace("_", " "), escape(_plain(value)))
        for name, value in parameters.items()
        if name not in ("kind", "points") and value not in (None, [], "")
    ]
    for share in basis["inputs"]["mass_basis"]:
        rows.append(
            (
                "mass basis",
                f"{escape(share['load'])}: {100 * share['share']:g} % ({escape(share['clause'] or 'no clause given')})",
            )
        )
    return facts(rows)


def _plain(value: Any) -> str:
    if isinstance(value, list):
        return ", ".join(_plain(v) for v in value)
    return f"{value:g}" if isinstance(value, int | float) and not isinstance(value, bool) else str(value)


def _drawn(
    directions: list[dict[str, Any]],
    basis: Mapping[str, Any],
    payloads: Mapping[str, Payload],
    payload: Payload,
    system: str,
) -> Drawing:
    how = display("acceleration", system)
    parts = payloads[payload["needs"]["participation"]]["result"]["directions"]
    with styled():
        figure = blank(2.9)
        axes = figure.subplots(1, len(directions), sharey=True, squeeze=False)[0]
        figure.subplots_adjust(left=0.09, right=0.985, bottom=0.17, top=0.9, wspace=0.08)
        for ax, item, part in zip(axes, directions, parts, strict=True):
            ax.plot(item["curve_period"], np.array(item["curve"]) / how.factor, color="black", linewidth=1.2)
            top = max(item["curve"]) / how.factor
            for n, (t, a) in enumerate(zip(part["period"][:MARKED], item["ordinate"][:MARKED], strict=False)):
                colour, dash = LINES[n % len(LINES)]
                ax.plot([t, t], [0.0, a / how.factor], color=colour, linestyle=dash, linewidth=1.0)
                ax.plot(t, a / how.factor, marker="o", markersize=3.5, color=colour)
                if n < 3:
                    ax.annotate(
                        f"T{n + 1}",
                        (t, a / how.factor),
                        xytext=(3, 4),
                        textcoords="offset points",
                        fontsize=8,
                        color=colour,
                    )
            ax.set_ylim(0.0, 1.15 * top)
            ax.set_xlim(0.0, None)
            ax.set_xlabel("period [s]")
            ax.set_title(f"direction {item['direction']}")
            ax.axhline(0.0, color=GREY, linewidth=0.6)
            quiet(ax)
        axes[0].set_ylabel(f"design ordinate [{how.symbol}]")
    caption = f"Design spectrum, {basis['result']['edition']}, with the periods of the first modes."
    return Drawing("design-spectrum", caption, caption, svg(figure, caption))


DEMAND = View("demand", "Design demand", "demand", render)
