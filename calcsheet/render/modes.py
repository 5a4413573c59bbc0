"""View of the natural modes: periods, flags, energy shares, evidence in short."""

from __future__ import annotations

from collections.abc import Mapping
from html import escape
from typing import Any

from calcsheet.render.numbers import number
from calcsheet.render.table import Column, table, values, words
from calcsheet.render.view import Choice, Rendered, View, system_of
from calcsheet.render.words import outcome
from calcsheet.steps.step import Payload

SHOWN = 12
"""Modes listed in the tables of shares, at most."""


def render(payloads: Mapping[str, Payload], key: str, options: Mapping[str, Any]) -> Rendered:
    system, payload = system_of(payloads), payloads[key]
    levels = payloads[payload["needs"]["storeys"]]["inputs"]["level"]
    parts = []
    for i, model in enumerate(payload["result"]["models"]):
        at = f"/{key}/result/models/{i}/modes"
        parts.append(_periods(model, system, at))
        parts.append(_beside(model, levels, system, f"/{key}/result/models/{i}"))
        if options["energy"] == "shown":
            title = f"of each mode in {model['name']}"
            parts.append(_shares(f"Kinetic energy {title}, share by level", model, "kinetic", levels, system, at))
            parts.append(_shares(f"Strain energy {title}, share by storey", model, "strain", levels, system, at))
            if len(model["modes"]["omega"]) > SHOWN:
                parts.append(f"<p>The first {SHOWN} of {len(model['modes']['omega'])} modes are listed.</p>")
    kept = all(e["within"] for e in payload["evidence"])
    verdict = "passes" if kept else "exceeds"
    stands = f"{len(payload['evidence'])} figures of evidence: {outcome(verdict)}."
    return Rendered(f"<p>Stiffness set: {escape(payload['result']['stiffness'])}. {stands}</p>" + "".join(parts))


def _periods(model: Mapping[str, Any], system: str, at: str) -> str:
    modes = model["modes"]
    order = range(len(modes["omega"]))
    columns = [
        Column("mode", tuple(str(i + 1) for i in order)),
        values("period T", modes["period"], "period", system, f"{at}/period"),
        values("frequency f", modes["frequency"], "frequency", system, f"{at}/frequency"),
        values("ω", modes["omega"], "circular frequency", system, f"{at}/omega"),
        values("½ψᵀKψ = ½ω²", modes["strain_energy"], "modal energy", system, f"{at}/strain_energy"),
        words("note", [_note(i + 1, modes) for i in order]),
    ]
    return table(columns, kind="values", caption=f"Modes in {model['name']}")


def _beside(model: Mapping[str, Any], levels: list[str], system: str, at: str) -> str:
    """What springs at the base and gravity loads mean for the model, where it has any."""
    said = []
    if model.get("fixed") is not None:
        ratio = number(model["fixed"]["lengthening"], "ratio", system, f"{at}/fixed/lengthening")
        period = number(model["fixed"]["period"], "period", system, f"{at}/fixed/period")
        said.append(f"The springs at the base make the first period {ratio} times that on a fixed base, {period}.")
    if model.get("critical") is not None:
        factor = number(model["critical"]["factor"], "ratio", system, f"{at}/critical/factor")
        level = escape(levels[model["critical"]["storey"]])
        said.append(f"Elastic critical load factor of the gravity loads: {factor}, storey below level {level}.")
    return f"<p>{' '.join(said)}</p>" if said else ""


def _note(mode: int, modes: Mapping[str, Any]) -> str:
    notes = [f"local: {m['level']}" for m in modes["local"] if m["mode"] == mode]
    for word in ("repeated", "close"):
        if any(mode in group for group in modes[word]):
            notes.append(word)
            break
    return ", ".join(notes)


def _shares(title: str, model: Mapping[str, Any], field: str, levels: list[str], system: str, at: str) -> str:
    shares = model["modes"][field]
    order = list(range(len(levels)))[::-1]
    columns = [words("level" if field == "kinetic" else "storey below level", [levels[i] for i in order])]
    for mode in range(min(len(shares[0]), SHOWN)):
        column = [row[mode] for row in shares]
        columns.append(values(f"mode {mode + 1}", column, "share", system, f"{at}/{field}/{{}}/{mode}", order=order))
    return table(columns, kind="values", caption=title)


MODES = View(
    "modes", "Periods", "modes", render, (Choice("energy", "energy shares", {"hidden": "hidden", "shown": "shown"}),)
)
