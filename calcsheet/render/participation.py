"""View of participation: a table and the running share of the mass, the mode that reaches the target marked."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np

from calcsheet.render.figure import GREY, INK, RUST, Drawing, blank, quiet, styled, svg
from calcsheet.render.numbers import number
from calcsheet.render.table import Column, table, values
from calcsheet.render.view import Rendered, View, system_of
from calcsheet.steps.step import Payload

NUMBERED = 20
"""Modes up to which each is numbered along the axis."""


def render(payloads: Mapping[str, Payload], key: str, options: Mapping[str, Any]) -> Rendered:
    system, directions = system_of(payloads), payloads[key]["result"]["directions"]
    parts = [_summary(d, system, f"/{key}/result/directions/{i}") for i, d in enumerate(directions)]
    return Rendered("".join(parts), lambda: (_drawn(directions),))


def _summary(part: Mapping[str, Any], system: str, at: str) -> str:
    name, needed = part["direction"], part["needed"]
    columns = [
        Column("mode", tuple(str(i + 1) for i in range(len(part["period"])))),
        values("period T", part["period"], "period", system, f"{at}/period"),
        values("Γ, top = 1", part["gamma_roof"], "ratio", system, f"{at}/gamma_roof", digits=4),
        values("effective mass", part["effective_mass"], "mass", system, f"{at}/effective_mass"),
        values(f"effective mass {name}", part["share"], "share", system, f"{at}/share"),
        values("cumulative", part["cumulative"], "share", system, f"{at}/cumulative"),
        values("effective height", part["effective_height"], "length", system, f"{at}/effective_height"),
    ]
    target = number(part["target"], "share", system, f"{at}/target")
    if needed is None:
        said = f'<p><span class="exceeds">The modes kept do not reach {target} of the mass in {name}.</span></p>'
    else:
        reached = number(part["cumulative"][needed - 1], "share", system, f"{at}/cumulative/{needed - 1}")
        count = "Mode 1 alone reaches" if needed == 1 else f"Modes 1 to {needed} reach"
        said = f"<p>{count} the target of {target} of the mass in {name}: {reached} (row of mode {needed}, marked).</p>"
    marked = [] if needed is None else [needed - 1]
    return table(columns, kind="values", caption=f"Participation in {name}", marked=marked) + said


def _drawn(directions: list[dict[str, Any]]) -> Drawing:
    with styled():
        figure = blank(2.5)
        axes = figure.subplots(1, len(directions), sharey=True, squeeze=False)[0]
        figure.subplots_adjust(left=0.09, right=0.985, bottom=0.2, top=0.89, wspace=0.08)
        for ax, part in zip(axes, directions, strict=True):
            _running_share(ax, part)
        axes[0].set_ylabel("share of the mass [%]")
    words = "; ".join(
        f"in {d['direction']} " + (f"{d['needed']} modes reach it" if d["needed"] else "the modes kept do not reach it")
        for d in directions
    )
    caption = "Effective mass by mode (bars) and its running sum (steps), with the target."
    return Drawing(
        "running-share",
        caption,
        f"{caption} Target {directions[0]['target'] * 100:g} %: {words}.",
        svg(figure, caption),
    )


def _running_share(ax: Any, part: Mapping[str, Any]) -> None:
    modes = np.arange(1, len(part["share"]) + 1)
    cumulative, target, needed = 100.0 * np.array(part["cumulative"]), 100.0 * part["target"], part["needed"]
    ax.bar(modes, 100.0 * np.array(part["share"]), width=0.6, color="#c9d3df", edgecolor=INK, linewidth=0.6)
    ax.step(modes, cumulative, where="mid", color=INK, linewidth=1.4)
    ax.axhline(target, color=GREY, linewidth=0.8, linestyle=(0, (4, 2)))
    ax.text(modes[-1] + 0.5, target - 1.5, f"target {target:g} %", ha="right", va="top", fontsize=8, color="black")
    if needed is not None:
        ax.plot(needed, cumulative[needed - 1], marker="D", markersize=5, color=RUST, linestyle="none")
        ax.annotate(
            f"mode {needed}: {cumulative[needed - 1]:.1f} %",
            (needed, cumulative[needed - 1]),
            xytext=(8, -24),
            textcoords="offset points",
            ha="left" if needed < 0.7 * len(modes) else "right",
            fontsize=8,
            arrowprops={"arrowstyle": "-", "color": RUST, "linewidth": 0.6, "shrinkB": 3},
        )
    if len(modes) <= NUMBERED:
        ax.set_xticks(modes)
    ax.set_xlim(0.4, len(modes) + 0.6)
    ax.set_ylim(0.0, 104.0)
    ax.set_xlabel("mode")
    ax.set_title(f"direction {part['direction']}")
    quiet(ax)


PARTICIPATION = View("participation", "Participating mass", "participation", render)
