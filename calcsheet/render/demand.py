"""View of the design demand: the spectrum with the modes' periods on it, and what the edition says."""

from __future__ import annotations

import dataclasses
from collections.abc import Mapping
from html import escape
from typing import Any

import numpy as np

from calcsheet.core.codes.registry import EDITIONS
from calcsheet.render.figure import GREY, LINES, Drawing, blank, quiet, styled, svg
from calcsheet.render.numbers import number
from calcsheet.render.symbols import symbols
from calcsheet.render.table import Column, facts, table, values, words
from calcsheet.render.view import Rendered, View, system_of
from calcsheet.render.words import outcome
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
    said, given = basis["result"], basis["inputs"]
    factor = said["importance"]
    damping = said["damping"]
    ratio = number(damping["value"], "share", "SI", f"/{key}/result/damping/value")
    importance = number(factor["value"], "ratio", "SI", f"/{key}/result/importance/value")
    rows = [
        ("edition", escape(said["edition"])),
        ("force level", symbols(said["level"])),
        ("importance factor", f"{symbols(factor['symbol'])} = {importance} ({symbols(factor['clause'])})"),
        ("combination", f"{escape(given['combination'])} ({symbols(said['combination_clause'])})"),
        ("damping of the correlation", f"{symbols(damping['symbol'])} = {ratio} ({symbols(damping['clause'])})"),
        ("modes asked for", answered(said["modes"])),
    ]
    rows += [(f"is this analysis permitted? {d['direction']}", answered(d["permitted"])) for d in directions]
    rows += [(f"accidental torsion, {d['direction']}", answered(d["torsion"])) for d in directions]
    rows += [
        (f"mass basis: {m['load']}", f"{100 * m['share']:g} % ({escape(m['clause'] or 'no clause given')})")
        for m in given["mass_basis"]
    ]
    return facts(rows) + _parameters(given["edition"])


def answered(answer: Mapping[str, Any]) -> str:
    """HTML of an answer of the checklist, with its outcome where that is not plainly positive."""
    word = "" if answer["verdict"] == "passes" else f"{outcome(answer['verdict'])}: "
    return f"{word}{symbols(answer['text'])} ({symbols(answer['clause'])})"


def _parameters(given: Mapping[str, Any]) -> str:
    """The edition's parameters as given in the job, under the words that the edition has for them."""
    edition = EDITIONS[given["kind"]]
    named = {f.name: f.metadata["key"]["help"] for f in dataclasses.fields(edition) if "key" in f.metadata}  # type: ignore[arg-type]
    rows = [(name, value) for name, value in given.items() if name in named and value not in (None, [], "")]
    return table(
        (
            Column("parameter", tuple(symbols(named[name]) for name, _ in rows), numeric=False),
            words("key in the job card", [f"basis.{name}" for name, _ in rows]),
            words("value", [_plain(value) for _, value in rows]),
        ),
        kind="words",
        caption=f"Parameters of {edition.name}",
    )


def _plain(value: Any) -> str:
    if isinstance(value, list):
        return "; ".join(", ".join(map(_plain, v)) if isinstance(v, list) else _plain(v) for v in value)
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
