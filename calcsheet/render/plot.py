"""View of the mode shapes over elevation."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np

from calcsheet.core.modes import scaled
from calcsheet.render.figure import GREY, LINES, Drawing, blank, quiet, styled, svg
from calcsheet.render.numbers import decimals_for, text
from calcsheet.render.table import table, values, words
from calcsheet.render.view import Choice, Rendered, View, system_of
from calcsheet.steps.step import Payload
from calcsheet.units import display

FEW = 3
MANY = 6
"""Modes drawn: those that the target share needs, but no fewer and no more than these."""
LABELLED = 25
"""Levels up to which each is named beside the drawing."""
SCALES = {"largest": "largest = 1", "roof": "top level = 1", "mass": "ψᵀMψ = 1"}


def render(payloads: Mapping[str, Payload], key: str, options: Mapping[str, Any]) -> Rendered:
    storeys = payloads[payloads[key]["needs"]["storeys"]]["inputs"]
    system, models = system_of(payloads), payloads[key]["result"]["models"]
    sides = [(i, model, name, rows) for i, model in enumerate(models) for name, rows in _sides(model)]
    parts = []
    if options["values"] != "hidden":
        parts = [
            _ordinates(model, name, rows, storeys, system, f"/{key}/result/models/{i}")
            for i, model, name, rows in sides
        ]
    return Rendered(
        "".join(parts),
        lambda: tuple(_drawn(m, name, rows, storeys, system, options["normalise"]) for _, m, name, rows in sides),
    )


def _sides(model: Mapping[str, Any]) -> list[tuple[str, list[int]]]:
    """Each direction that a model moves in, with the rows of its shapes that are translations in it, lowest first."""
    return list((model.get("rows") or {model["name"]: list(range(len(model["modes"]["psi"])))}).items())


def _ordinates(
    model: Mapping[str, Any], name: str, rows: list[int], storeys: Mapping[str, Any], system: str, at: str
) -> str:
    order = list(range(len(storeys["level"])))[::-1]
    shapes = np.array(model["modes"]["psi"])
    columns = [words("level", [storeys["level"][j] for j in order])]
    at = f"{at}/modes/psi/{{}}"
    for mode in range(_drawn_count(model)):
        column = shapes[:, mode].tolist()
        shown = [rows[j] for j in order]
        columns.append(values(f"ψ{mode + 1}", column, "normalised shape", system, f"{at}/{mode}", order=shown))
    return table(columns, kind="values", caption=f"Mass-normalised shapes in {name}, ψᵀMψ = 1")


def _drawn_count(model: Mapping[str, Any]) -> int:
    return min(len(model["modes"]["omega"]), MANY if len(model["modes"]["omega"]) <= MANY else MANY - 1)


def _at_scale(model: Mapping[str, Any], rows: list[int], normalise: str, drawn: int) -> tuple[np.ndarray, np.ndarray]:
    """Shapes drawn, and whether the top level stands still in each, so that it can't scale them.

    Where a model moves in several directions, their shares of a mode are to be seen: the largest of all is 1.
    """
    psi = np.array(model["modes"]["psi"])
    if model.get("rows") and normalise != "mass":
        moving = sorted(row for every in model["rows"].values() for row in every)
        at_scale = psi[rows, :drawn] / np.abs(psi[moving, :drawn]).max(axis=0)
        return at_scale, np.full(drawn, normalise == "roof")
    at_scale = scaled(psi[rows], normalise)[:, :drawn]  # type: ignore[arg-type]
    still = np.asarray(np.isnan(at_scale).any(axis=0))
    return np.where(still, scaled(psi[rows], "largest")[:, :drawn], at_scale), still


def _drawn(
    model: Mapping[str, Any], name: str, rows: list[int], storeys: Mapping[str, Any], system: str, normalise: str
) -> Drawing:
    how = display("elevation", system)
    elevation = np.array([storeys["base_elevation"], *storeys["elevation"]]) / how.factor
    drawn = _drawn_count(model)
    at_scale, still = _at_scale(model, rows, normalise, drawn)
    periods = [text(t, decimals_for([t], 3)) for t in model["modes"]["period"][:drawn]]
    named = len(storeys["level"]) <= LABELLED
    labels = text_heights(elevation, storeys, how.digits) if named else ["0000"]
    left = 0.05 + 0.0105 * max(map(len, labels))  # room for the labels and the axis's title, without a layout pass
    with styled():
        figure = blank(3.5)
        axes = figure.subplots(1, drawn, sharey=True, squeeze=False)[0]
        figure.subplots_adjust(left=left, right=0.985, bottom=0.12, top=0.86, wspace=0.12)
        for n, ax in enumerate(axes):
            colour, dash = LINES[n % len(LINES)]
            shape = np.concatenate([[0.0], at_scale[:, n]])
            ax.axvline(0.0, color=GREY, linewidth=0.6, linestyle=(0, (1, 2)))
            ax.plot(shape, elevation, color=colour, linestyle=dash, linewidth=1.4)
            ax.plot(shape[1:], elevation[1:], color=colour, linestyle="none", marker="o", markersize=2.6)
            reach = 1.12 * (1.0 if model.get("rows") and normalise != "mass" else np.abs(shape).max() or 1.0)
            ax.set_xlim(-reach, reach)
            ax.set_title(f"mode {n + 1}{' (largest = 1)' if still[n] else ''}\nT = {periods[n]} s")
            ax.set_ylim(elevation[0], elevation[-1] + 0.03 * (elevation[-1] - elevation[0]))
            ax.locator_params(axis="x", nbins=3)
            quiet(ax)
        if named:
            axes[0].set_yticks(elevation, labels)
        axis = f"level, elevation [{how.symbol}]" if named else f"elevation [{how.symbol}]"
        figure.text(0.012, 0.49, axis, va="center", rotation="vertical", fontsize=8.5)
        figure.text(0.56, 0.02, f"displacement in {name}, {SCALES[normalise]}", ha="center", fontsize=8.5)
        caption = f"Mode shapes in {name} over elevation, {SCALES[normalise]}."
        listed = "; ".join(f"mode {n + 1}, {t} s" for n, t in enumerate(periods))
        return Drawing(f"shapes-{name}", caption, f"{caption} {listed}.", svg(figure, caption))


def text_heights(elevation: np.ndarray, storeys: Mapping[str, Any], digits: int) -> list[str]:
    """Labels of the levels, "name, elevation", the base first."""
    places = max(2, decimals_for([float(np.abs(elevation).max())], digits))
    names = [storeys["base"] or "base", *storeys["level"]]
    return [
        f"{name if len(name) <= 14 else name[:13] + chr(8230)}\u2002\u2002{text(float(e), places)}"
        for name, e in zip(names, elevation, strict=True)
    ]


PLOT = View(
    "mode plot",
    "Mode shapes",
    "modes",
    render,
    (Choice("normalise", "scale", SCALES), Choice("values", "ordinates", {"shown": "shown", "hidden": "hidden"})),
)
