"""Views of the stiffness take-off: storeys with shares by kind and by row, bars, and the members it is made from."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from calcsheet.render.figure import INK, Drawing, blank, quiet, styled, svg
from calcsheet.render.numbers import heading, number
from calcsheet.render.plot import LABELLED
from calcsheet.render.table import Column, table, values, words
from calcsheet.render.view import Choice, Rendered, View, system_of
from calcsheet.steps.step import Payload
from calcsheet.steps.stiffnesslines import along_words
from calcsheet.units import display

FILLS: Mapping[str, tuple[str, str]] = {
    "column": ("#c9d3df", ""),
    "wall": ("#1f3a5f", ""),
    "brace": ("#ffffff", "////"),
    "infill strut": ("#e6dcc3", "...."),
}
"""Colour and hatch of each kind of member: told apart by either alone."""
LEAST = 0.09
"""Share below which a bar is too short for its name."""


def render(payloads: Mapping[str, Payload], key: str, options: Mapping[str, Any]) -> Rendered:
    system, payload = system_of(payloads), payloads[key]
    given, found = payload["inputs"], payload["result"]
    html = []
    for d, item in enumerate(found["directions"]):
        html.append(_storeys(item, given["level"], system, f"/{key}/result/directions/{d}"))
        if options["rows"] == "shown":
            html.append(_rows(given, found, d, system, key))
    return Rendered("".join(html), lambda: (_drawn(found["directions"], given, system),))


def _storeys(item: Mapping[str, Any], levels: Sequence[str], system: str, at: str) -> str:
    order = list(range(len(levels)))[::-1]
    columns = [
        words("storey below level", [levels[i] for i in order]),
        values("stiffness", item["storey"], "stiffness", system, f"{at}/storey", order=order),
    ]
    for j, kind in enumerate(item["kind"]):
        columns.append(values(f"{kind}s", item["share"][j], "share", system, f"{at}/share/{j}", order=order))
    index = [value or None for value in item["joint_rotation"]]
    if any(index):
        columns.append(values("joint rotation index ρ", index, "ratio", system, f"{at}/joint_rotation", order=order))
    return table(columns, kind="values", caption=f"Storey stiffness in {item['direction']} with shares of its members")


def _rows(given: Mapping[str, Any], found: Mapping[str, Any], d: int, system: str, key: str) -> str:
    """Each row of members that acts in a direction, at the lowest storey that it serves."""
    acting = [(i, m["first"]) for i, m in enumerate(given["members"]) if any(found["members"][i]["lateral"][d])]

    def column(name: str, quantity: str, field: str) -> Column:
        of = [found["members"][i][field] for i, _ in acting]
        many = field != "alone"  # by direction too
        numbers = [(row[d] if many else row)[storey] for row, (_, storey) in zip(of, acting, strict=True)]
        place = f"{field}/{d}" if many else field
        at = [f"/{key}/result/members/{i}/{place}/{storey}" for i, storey in acting]
        return values(name, numbers, quantity, system, at)

    columns = [
        words("member", [given["members"][i]["name"] for i, _ in acting]),
        words("storey below level", [given["level"][storey] for _, storey in acting]),
        column("stiffness of one", "stiffness", "alone"),
        column("of all", "stiffness", "lateral"),
        column("share of the storey", "share", "share"),
    ]
    direction = found["directions"][d]["direction"]
    return table(columns, kind="values", caption=f"Members in {direction}, each at the lowest storey that it serves")


def _drawn(directions: Sequence[Mapping[str, Any]], given: Mapping[str, Any], system: str) -> Drawing:
    how, levels = display("stiffness", system), given["level"]
    named = len(levels) <= LABELLED
    with styled():
        figure = blank(max(2.2, min(5.0, 1.3 + 0.24 * len(levels))))
        axes = figure.subplots(1, len(directions), sharey=True, squeeze=False)[0]
        figure.subplots_adjust(left=0.12, right=0.985, bottom=0.62 / figure.get_figheight(), top=0.985, wspace=0.1)
        for ax, item in zip(axes, directions, strict=True):
            _bars(ax, item, how.factor)
            ax.set_xlabel(f"storey stiffness {item['direction']} [{how.symbol}]")
            ax.locator_params(axis="x", nbins=4)
            ax.xaxis.set_major_formatter(_tick)
            quiet(ax)
        axes[0].set_ylabel("storey below level")
        if named:
            axes[0].set_yticks(range(len(levels)), [_short(level) for level in levels])
    caption = "Storey stiffnesses by kind of member; each kind is named where it first has room."
    said = "; ".join(f"in {d['direction']} {_said(d)}" for d in directions)
    return Drawing("stiffness-by-kind", caption, f"{caption} Lowest storey: {said}.", svg(figure, caption))


def _bars(ax: Any, item: Mapping[str, Any], unit: float) -> None:
    storey, share = np.array(item["storey"]) / unit, np.array(item["share"])
    places, widest = np.arange(storey.size), float(storey.max())
    foot = np.zeros(storey.size)
    for j, kind in enumerate(item["kind"]):
        fill, hatch = FILLS[kind]
        length = share[j] * storey
        ax.barh(places, length, left=foot, height=0.72, color=fill, hatch=hatch, edgecolor=INK, linewidth=0.6)
        roomy = np.flatnonzero(length > LEAST * len(kind) / 5.0 * widest)
        if roomy.size:
            i = roomy[0]
            ax.text(
                foot[i] + 0.5 * length[i],
                i,
                kind,
                ha="center",
                va="center",
                fontsize=7.5,
                color="white" if kind == "wall" else "black",
                bbox=None if not hatch else {"facecolor": "white", "edgecolor": "none", "pad": 1.0},
            )
        foot = foot + length
    ax.set_xlim(0.0, 1.04 * widest)
    ax.set_ylim(-0.6, storey.size - 0.4)


def _tick(value: float, _: object) -> str:
    """Label of a tick, whole, thousands apart as in the tables."""
    return f"{value:,.10g}".replace(",", "\u202f")


def _said(item: Mapping[str, Any]) -> str:
    shares = (f"{kind}s {100.0 * share[0]:.0f} %" for kind, share in zip(item["kind"], item["share"], strict=True))
    return ", ".join(shares)


def _short(level: str) -> str:
    return level if len(level) <= 10 else level[:9] + "\u2026"


# ---- what it is made from --------------------------------------------------------------------------------------------


def render_members(payloads: Mapping[str, Payload], key: str, options: Mapping[str, Any]) -> Rendered:
    system, payload = system_of(payloads), payloads[key]
    given, found = payload["inputs"], payload["result"]
    parts = (_members(given, system, key), _sections(given, found, system, key), _materials(given, system, key))
    return Rendered("".join(parts))


def _members(given: Mapping[str, Any], system: str, key: str) -> str:
    rows, level = given["members"], given["level"]

    def column(name: str, quantity: str, field: str) -> Column:
        at = f"/{key}/inputs/members/{{}}/{field}"
        return values(name, [row[field] for row in rows], quantity, system, at, as_given=True)

    columns = [
        words("member", [row["name"] for row in rows]),
        words("storeys below levels", [_run(row, level) for row in rows]),
        words("kind", [row["kind"] for row in rows]),
        words("section", [row["section"] + " (minor axis)" * (row["axis"] == "minor") for row in rows]),
        words("acts along", [along_words(row["along"]) for row in rows]),
        Column(
            "count",
            tuple(f'<data value="/{key}/inputs/members/{i}/count">{row["count"]}</data>' for i, row in enumerate(rows)),
        ),
        words("acts as", [row["acts_as"] + " with shear" * row["shear"] for row in rows]),
        column("stiffness factor", "ratio", "factor"),
    ]
    if any(row["shear"] for row in rows):
        shear = [row["shear_factor"] if row["shear"] else None for row in rows]
        at = f"/{key}/inputs/members/{{}}/shear_factor"
        columns.append(values("shear factor", shear, "ratio", system, at, as_given=True))
    if any(row["height"] is not None for row in rows):
        columns.append(column("own height", "length", "height"))
    if any(row["run"] is not None for row in rows):
        columns.append(column("run", "length", "run"))
    columns.append(words("ground", [row["ground"] or "\u2013" for row in rows]))
    return table(columns, kind="values", caption="Members") + _beams(given, system, key)


def _beams(given: Mapping[str, Any], system: str, key: str) -> str:
    rows = [(i, row) for i, row in enumerate(given["members"]) if row["beam"]]
    if not rows:
        return ""
    spans = [[row["spans"][j] if j < len(row["spans"]) else None for _, row in rows] for j in range(2)]
    columns = [
        words("column", [row["name"] for _, row in rows]),
        words("beam above", [row["beam"] for _, row in rows]),
        words("beam below", [row["beam_below"] for _, row in rows]),
        *(
            values(
                name, column, "length", system, [f"/{key}/inputs/members/{i}/spans/{j}" for i, _ in rows], as_given=True
            )
            for j, (name, column) in enumerate(zip(("span", "other span"), spans, strict=True))
            if any(column)
        ),
        values(
            "beam factor",
            [row["beam_factor"] for _, row in rows],
            "ratio",
            system,
            [f"/{key}/inputs/members/{i}/beam_factor" for i, _ in rows],
            as_given=True,
        ),
    ]
    return table(columns, kind="values", caption="Beams that hold columns")


def _sections(given: Mapping[str, Any], found: Mapping[str, Any], system: str, key: str) -> str:
    rows = given["sections"]
    columns = [
        words("section", [row["name"] for row in rows]),
        words("material", [row["material"] for row in rows]),
        words("shape", [row["shape"] for row in rows]),
    ]
    for field in ("depth", "width", "thickness"):
        sizes = [row[field] for row in rows]
        if any(sizes):
            at = f"/{key}/inputs/sections/{{}}/{field}"
            columns.append(values(field, sizes, "section size", system, at, as_given=True))
    for name, field, quantity in (
        ("A", "area", "section area"),
        ("I major", "major", "second moment"),
        ("I minor", "minor", "second moment"),
        ("A_s major", "shear_major", "section area"),
        ("A_s minor", "shear_minor", "section area"),
    ):
        numbers = [properties[field] for properties in found["sections"]]
        if any(numbers):  # sections differ by orders of size: each number has its own digits
            at = f"/{key}/result/sections/{{}}/{field}"
            cells = (number(v, quantity, system, at.format(i), unit=False) if v else "" for i, v in enumerate(numbers))
            columns.append(Column(heading(name, quantity, system), tuple(cells)))
    return table(columns, kind="values", caption="Sections and their properties")


def _materials(given: Mapping[str, Any], system: str, key: str) -> str:
    rows, at = given["materials"], f"/{key}/inputs/materials/{{}}"
    columns = [
        words("material", [row["name"] for row in rows]),
        words("kind", [row["kind"] for row in rows]),
        values("modulus E", [row["modulus"] for row in rows], "modulus", system, f"{at}/modulus", as_given=True),
    ]
    shear = [row["shear_modulus"] or None for row in rows]
    if any(shear):
        columns.append(values("shear modulus G", shear, "modulus", system, f"{at}/shear_modulus"))
    return table(columns, kind="values", caption="Materials")


def _run(row: Mapping[str, Any], level: Sequence[str]) -> str:
    first, last = level[row["first"]], level[row["last"]]
    return first if row["first"] == row["last"] else f"{first} to {last}"


ROWS = {"shown": "shown", "hidden": "hidden"}
STIFFNESSES = View(
    "stiffness take-off", "Stiffness take-off", "stiffness take-off", render, (Choice("rows", "members", ROWS),)
)
MEMBERS = View("members", "Members, sections and materials", "stiffness take-off", render_members)
