"""What a calculation comes to, as plain data: headline numbers, and the words of its conclusions."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from calcsheet.steps.step import Payload

Payloads = Mapping[str, Payload]
Result = Mapping[str, Any]


@dataclass(frozen=True)
class Headline:
    """A headline number.

    Parameters
    ----------
    key : str
        Stable name, such as "modes/first period/x".
    label : str
        The same in words.
    quantity : str
        Quantity of the unit table.
    value : float
        The number, in core units.
    at : str
        JSON pointer of the number in the record's payloads.
    """

    key: str
    label: str
    quantity: str
    value: float
    at: str


@dataclass(frozen=True)
class Conclusion:
    """A conclusion in words.

    Parameters
    ----------
    key : str
        Stable name, such as "drift/limit/x".
    label : str
        What is concluded upon.
    word : str
        The conclusion, such as "passes".
    quoted : bool
        Whether the word is the engineer's own text.
    """

    key: str
    label: str
    word: str
    quoted: bool = False


def headlines_of(payloads: Payloads) -> tuple[Headline, ...]:
    """Headline numbers of all steps that are "ok", in their order."""
    return tuple(
        Headline(f"{key}/{h.key}", _named(h.label, key, payload), h.quantity, float(h.value), f"/{key}/result/{h.at}")
        for key, payload in payloads.items()
        if payload["state"] == "ok" and payload["kind"] in HEADLINES
        for h in HEADLINES[payload["kind"]](payload["result"])
    )


def conclusions_of(payloads: Payloads) -> tuple[Conclusion, ...]:
    """Conclusions of all steps that are "ok", in their order; that of a step's evidence last."""
    return tuple(
        replace(c, key=f"{key}/{c.key}", label=_named(c.label, key, payload), word=str(c.word))
        for key, payload in payloads.items()
        if payload["state"] == "ok"
        for c in (*CONCLUSIONS.get(payload["kind"], _nothing)(payload, payloads), *_evidence(payload))
    )


def _named(label: str, key: str, payload: Payload) -> str:
    """A label with the step's name where it is one of several of its kind."""
    return label if key == payload["kind"] else f"{label} ({key})"


def _each(result: Result) -> Iterator[tuple[str, Result, str]]:
    """Directions with their results and places."""
    for i, item in enumerate(result["directions"]):
        yield item["direction"], item, f"directions/{i}"


# ---- headlines -------------------------------------------------------------------------------------------------------


def _storeys(result: Result) -> Iterator[Headline]:
    yield Headline("weight", "Weight above the effective base", "weight", result["weight"], "weight")
    yield Headline("mass", "Mass above the effective base", "mass", result["mass"], "mass")
    yield Headline("height", "Height above the effective base", "length", result["height"], "height")


def _modes(result: Result) -> Iterator[Headline]:
    for i, model in enumerate(result["models"]):
        d, modes, at = model["name"], model["modes"], f"models/{i}/modes"
        period, frequency = modes["period"][0], modes["frequency"][0]
        yield Headline(f"first period/{d}", f"First period T₁ in {d}", "period", period, f"{at}/period/0")
        yield Headline(
            f"first frequency/{d}", f"First frequency f₁ in {d}", "frequency", frequency, f"{at}/frequency/0"
        )


def _participation(result: Result) -> Iterator[Headline]:
    for d, part, at in _each(result):
        needed = part["needed"]
        last = (needed or len(part["cumulative"])) - 1
        yield Headline(
            f"first share/{d}", f"Share of the mass in mode 1, {d}", "share", part["share"][0], f"{at}/share/0"
        )
        if needed is not None:
            yield Headline(f"modes needed/{d}", f"Modes for the target share in {d}", "count", needed, f"{at}/needed")
        label, reached = f"Share of the mass by the modes that reach the target in {d}", part["cumulative"][last]
        if needed is None:
            label = f"Share of the mass that all modes kept reach in {d}"
        yield Headline(f"share reached/{d}", label, "share", reached, f"{at}/cumulative/{last}")


def _demand(result: Result) -> Iterator[Headline]:
    for d, item, at in _each(result):
        ordinate, static = item["ordinate"][0], item["static"]
        yield Headline(f"ordinate/{d}", f"Design ordinate at T₁, {d}", "acceleration", ordinate, f"{at}/ordinate/0")
        if static is not None:
            place, label = f"{at}/static/approximate_period", f"Approximate period, {d}"
            yield Headline(f"approximate period/{d}", label, "period", static["approximate_period"], place)


def _drift(result: Result) -> Iterator[Headline]:
    for d, item, at in _each(result):
        widest, worst, top = int(np.argmax(item["design"])), item["worst"], len(item["displacement"]) - 1
        yield Headline(
            f"drift/{d}", f"Largest design drift, {d}", "displacement", item["design"][widest], f"{at}/design/{widest}"
        )
        yield Headline(
            f"share/{d}", f"Largest share of the drift limit, {d}", "share", item["share"][worst], f"{at}/share/{worst}"
        )
        if item["second_order"] is not None:
            theta = item["second_order"]["theta"]
            most = int(np.argmax(theta))
            place = f"{at}/second_order/theta/{most}"
            yield Headline(f"theta/{d}", f"Largest stability coefficient θ, {d}", "ratio", theta[most], place)
        place, label = f"{at}/displacement/{top}", f"Design displacement of the top level, {d}"
        yield Headline(f"top/{d}", label, "displacement", item["displacement"][top], place)


def _actions(result: Result) -> Iterator[Headline]:
    for d, item, at in _each(result):
        modal, static, design = item["modal_base_shear"], item["static"], item["design_base_shear"]
        yield Headline(f"modal/{d}", f"Modal base shear, {d}", "force", modal, f"{at}/modal_base_shear")
        if static is not None:
            yield Headline(f"static/{d}", f"Static base shear, {d}", "force", static["shear"], f"{at}/static/shear")
        yield Headline(f"design/{d}", f"Design base shear, {d}", "force", design, f"{at}/design_base_shear")
        moment = item["moment"][0]
        yield Headline(f"overturning/{d}", f"Overturning moment at the base, {d}", "moment", moment, f"{at}/moment/0")
        if item["torsion"] is not None:
            label = f"Accidental torsion: factor at the edge, {d}"
            yield Headline(f"torsion/{d}", label, "ratio", item["torsion"], f"{at}/torsion")


def _edges(result: Result) -> Iterator[Headline]:
    for d, item, at in _each(result):
        storey, edge = item["worst"]
        label, place = f"Largest share of the drift limit at an edge, {d}", f"{at}/share/{storey}/{edge}"
        yield Headline(f"share/{d}", label, "share", item["share"][storey][edge], place)
        if item["static"] is not None:
            ratio = item["static"]["ratio"]
            most = int(np.argmax(ratio))
            label, place = f"Largest static edge ratio of drifts, {d}", f"{at}/static/ratio/{most}"
            yield Headline(f"static ratio/{d}", label, "ratio", ratio[most], place)


HEADLINES: Mapping[str, Callable[[Result], Iterator[Headline]]] = {
    "storeys": _storeys,
    "modes": _modes,
    "participation": _participation,
    "demand": _demand,
    "drift": _drift,
    "actions": _actions,
    "torsion": _edges,
}


# ---- conclusions -----------------------------------------------------------------------------------------------------


def _about_modes(payload: Payload, payloads: Payloads) -> Iterator[Conclusion]:
    for model in payload["result"]["models"]:
        d, modes = model["name"], model["modes"]
        close = "; ".join(f"{group[0]} to {group[-1]}" for group in modes["close"])
        yield Conclusion(f"close modes/{d}", f"Close modes in {d}", close or "none")
        local = ", ".join(str(found["mode"]) for found in modes["local"])
        yield Conclusion(f"local modes/{d}", f"Local modes in {d}", local or "none")


def _about_participation(payload: Payload, payloads: Payloads) -> Iterator[Conclusion]:
    for d, part, _ in _each(payload["result"]):
        reached, modes = part["needed"] is not None, str(part["needed"] or "more than are kept")
        yield Conclusion(f"target/{d}", f"Target share of the mass in {d}", "reached" if reached else "not reached")
        yield Conclusion(f"modes needed/{d}", f"Modes needed for the target share in {d}", modes)


def _about_demand(payload: Payload, payloads: Payloads) -> Iterator[Conclusion]:
    for d, item, _ in _each(payload["result"]):
        yield Conclusion(f"permitted/{d}", f"This analysis is permitted, {d}", item["permitted"]["verdict"])
        yield Conclusion(f"torsion/{d}", f"Accidental torsion, {d}", item["torsion"]["verdict"])
        if item["static"] is not None:
            governs = item["static"]["governing"]
            yield Conclusion(f"static governed/{d}", f"What governs the static base shear, {d}", governs)


def _about_drift(payload: Payload, payloads: Payloads) -> Iterator[Conclusion]:
    levels = payloads[payload["needs"]["storeys"]]["inputs"]["level"]
    for d, item, _ in _each(payload["result"]):
        worst, second = item["worst"], item["second_order"]
        verdict = "passes" if item["share"][worst] <= 1.0 else "exceeds"
        yield Conclusion(f"limit/{d}", f"Drift limit, {d}", verdict)
        label = f"Storey with the largest share of its drift limit, {d}"
        yield Conclusion(f"governing storey/{d}", label, f"below level {levels[worst]}", quoted=True)
        capped = "the elastic spectrum's drift" if item["capped"] else "the drift by the edition's factor"
        yield Conclusion(f"capped/{d}", f"What governs the design drift, {d}", capped)
        verdict = "not assessed" if second is None else second["verdict"]
        yield Conclusion(f"second order/{d}", f"Second order, {d}", verdict)
        if second is not None:
            yield Conclusion(f"amplified/{d}", f"Second-order effects, {d}", _effects(second))
        for screen in item["screens"]:
            name = screen["name"]
            yield Conclusion(f"screen/{d}/{name}", f"Irregularity in {d}: {name}", screen["verdict"])


def _effects(second: Result) -> str:
    """What becomes of second-order effects; a building beyond the edition's limit is redesigned, whatever its factor."""
    if second["verdict"] == "exceeds":
        return "to be redesigned"
    return "amplified" if max(second["factor"]) > 1.0 else "ignored"


def _about_actions(payload: Payload, payloads: Payloads) -> Iterator[Conclusion]:
    for d, item, _ in _each(payload["result"]):
        scaled = "scaled" if item["scaling"]["forces"] > 1.0 else "not scaled"
        yield Conclusion(f"scaled/{d}", f"Modal forces to the static base shear, {d}", scaled)


def _about_edges(payload: Payload, payloads: Payloads) -> Iterator[Conclusion]:
    for d, item, _ in _each(payload["result"]):
        storey, edge = item["worst"]
        verdict = "passes" if item["share"][storey][edge] <= 1.0 else "exceeds"
        yield Conclusion(f"limit/{d}", f"Drift limit at the edges, {d}", verdict)


CONCLUSIONS: Mapping[str, Callable[[Payload, Payloads], Iterator[Conclusion]]] = {
    "modes": _about_modes,
    "participation": _about_participation,
    "demand": _about_demand,
    "drift": _about_drift,
    "actions": _about_actions,
    "torsion": _about_edges,
}


def _evidence(payload: Payload) -> Iterator[Conclusion]:
    if payload["evidence"]:
        word = "within its limits" if all(e["within"] for e in payload["evidence"]) else "beyond its limits"
        yield Conclusion("evidence", f"Evidence of the {payload['kind']}", word)


def _nothing(payload: Payload, payloads: Payloads) -> Iterator[Conclusion]:
    yield from ()
