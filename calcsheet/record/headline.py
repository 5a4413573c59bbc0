"""Headline results: what the first pages say of each step, in the order of the calculation."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from html import escape
from typing import Any

import numpy as np

from calcsheet.record.status import reasons
from calcsheet.render.numbers import number, text
from calcsheet.render.symbols import symbols
from calcsheet.render.table import facts
from calcsheet.render.view import system_of
from calcsheet.render.words import outcome
from calcsheet.steps.step import Payload

Payloads = Mapping[str, Payload]
Row = tuple[str, str]
"""A label, as text, and HTML."""


def brief(payloads: Payloads) -> list[Row]:
    """Results in brief, for the cover.

    Parameters
    ----------
    payloads : mapping of str to payload
        The steps of a record, upstream first.
    """
    return [row for key, payload in payloads.items() for row in _of(key, payload, payloads, BRIEF)]


def in_full(record: Mapping[str, Any]) -> str:
    """HTML of a record's results, and of what stands between it and its use."""
    payloads = record["payloads"]
    figures = [e for p in payloads.values() for e in p["evidence"]]
    kept = sum(e["within"] for e in figures)
    verdict = outcome("passes" if kept == len(figures) else "exceeds")
    raised = [c for p in payloads.values() for c in p["cautions"]]
    rows = brief(payloads)
    rows += [row for key, payload in payloads.items() for row in _of(key, payload, payloads, MORE)]
    rows.append(("Evidence", f"{kept} of {len(figures)} figures within their limits: {verdict}"))
    asked = sum(c["answer"] for c in raised)
    rows.append(("Cautions", f'<a href="#cautions">{len(raised)}</a>, of which {asked} ask for an answer'))
    kinds = {p["kind"] for p in payloads.values()}
    if not kinds & {"actions", "torsion"}:
        why = "x and y are planar models" if _planar(payloads) else "no edges of the floors in this record"
        rows.append(("Torsion", f"{outcome('not assessed')}: {why}"))
    missing = [words for kind, words in LEFT_OUT.items() if kind not in kinds]
    if missing:
        rows.append((", ".join(missing).capitalize(), f"{outcome('not assessed')} in this record"))
    if because := reasons(record):
        rows.append(("Draft because of", "; ".join(escape(reason) for reason in because)))
    return facts(rows)


def _planar(payloads: Payloads) -> bool:
    """Whether every model moves in one direction."""
    solved = [p["result"] for p in payloads.values() if p["kind"] == "modes" and p["result"]]
    return not any(model.get("rows") for result in solved for model in result["models"])


def _of(key: str, payload: Payload, payloads: Payloads, said: Mapping[str, Rows]) -> Iterator[Row]:
    """The rows that `said` has for a step; its name goes with them where it is one of several of its kind."""
    kind = payload["kind"]
    if kind in said:
        named = "" if key == kind else f" ({key})"
        for label, html in said[kind](key, payload["result"], system_of(payloads)):
            yield label + named, html


def _joined(result: Mapping[str, Any], one: Callable[[Mapping[str, Any], int], str]) -> str:
    """The same said of each direction, in one line."""
    return "; ".join(f"{escape(d['direction'])}: {one(d, i)}" for i, d in enumerate(result["directions"]))


def _storeys(key: str, result: Mapping[str, Any], system: str) -> Iterator[Row]:
    weight = number(result["weight"], "weight", system, f"/{key}/result/weight")
    mass = number(result["mass"], "mass", system, f"/{key}/result/mass")
    yield "Weight, mass above the effective base", f"{weight}, {mass}"


def _modes(key: str, result: Mapping[str, Any], system: str) -> Iterator[Row]:
    for i, model in enumerate(result["models"]):
        at = f"/{key}/result/models/{i}/modes"
        period = number(model["modes"]["period"][0], "period", system, f"{at}/period/0")
        frequency = number(model["modes"]["frequency"][0], "frequency", system, f"{at}/frequency/0")
        yield f"First period in {model['name']}", f"T₁ = {period}, f₁ = {frequency}"


def _participation(key: str, result: Mapping[str, Any], system: str) -> Iterator[Row]:
    for i, part in enumerate(result["directions"]):
        reached = _reached(part, f"/{key}/result/directions/{i}", system)
        yield f"Modes for the target share in {part['direction']}", reached


def _reached(part: Mapping[str, Any], at: str, system: str) -> str:
    def share(modes: int) -> str:
        return number(part["cumulative"][modes - 1], "share", system, f"{at}/cumulative/{modes - 1}")

    target, used = number(part["target"], "share", system, f"{at}/target"), len(part["cumulative"])
    if part["needed"] is None:
        return f'<span class="exceeds">not reached</span>: {share(used)} of {target} with all {used} used'
    needed = f'<data value="{at}/needed">{part["needed"]}</data>'
    return f"{needed}, with {share(part['needed'])} (target {target}); {used} used, with {share(used)}"


def _demand(key: str, result: Mapping[str, Any], system: str) -> Iterator[Row]:
    def ratio(item: Mapping[str, Any], i: int) -> str:
        if item["static"] is None:
            return "no approximate period"
        approximate = item["static"]["approximate_period"]
        at = f"/{key}/result/directions/{i}/static/approximate_period"
        share = text(item["facts"]["period"] / approximate, 2)
        return f"T₁/T<sub>a</sub> = {share}, T<sub>a</sub> = {number(approximate, 'period', system, at)}"

    yield "First over approximate period", _joined(result, ratio)


def _actions(key: str, result: Mapping[str, Any], system: str) -> Iterator[Row]:
    def shear(value: float, item: Mapping[str, Any], at: str) -> str:
        return f"{number(value, 'force', system, at)} ({text(100 * value / item['weight'], 2)} % of W)"

    def modal(item: Mapping[str, Any], i: int) -> str:
        return shear(item["modal_base_shear"], item, f"/{key}/result/directions/{i}/modal_base_shear")

    def static(item: Mapping[str, Any], i: int) -> str:
        if item["static"] is None:
            return outcome("not assessed")
        return shear(item["static"]["shear"], item, f"/{key}/result/directions/{i}/static/shear")

    def design(item: Mapping[str, Any], i: int) -> str:
        at = f"/{key}/result/directions/{i}"
        scale = number(item["scaling"]["forces"], "ratio", system, f"{at}/scaling/forces")
        return f"{shear(item['design_base_shear'], item, f'{at}/design_base_shear')}, scale {scale}"

    yield "Modal base shear", _joined(result, modal)
    yield "Static base shear", _joined(result, static)
    yield "Design base shear", _joined(result, design)


def _torsion(key: str, result: Mapping[str, Any], system: str) -> Iterator[Row]:
    def said(item: Mapping[str, Any], i: int) -> str:
        if item["torsion"] is None:
            return f"accidental torsion {outcome('not assessed')}"
        return (
            f"actions × {number(item['torsion'], 'ratio', system, f'/{key}/result/directions/{i}/torsion')} at the edge"
        )

    yield "Torsion", _joined(result, said)


def _edges(key: str, result: Mapping[str, Any], system: str) -> Iterator[Row]:
    def share(item: Mapping[str, Any], i: int) -> str:
        storey, edge = item["worst"]
        at = f"/{key}/result/directions/{i}/share/{storey}/{edge}"
        largest = number(item["share"][storey][edge], "share", system, at)
        return f"{largest} of its limit, {outcome('passes' if item['share'][storey][edge] <= 1.0 else 'exceeds')}"

    yield "Largest drift at an edge", _joined(result, share)


def _drift(key: str, result: Mapping[str, Any], system: str) -> Iterator[Row]:
    def share(item: Mapping[str, Any], i: int) -> str:
        worst = item["worst"]
        largest = number(item["share"][worst], "share", system, f"/{key}/result/directions/{i}/share/{worst}")
        return f"{largest} of its limit, {outcome('passes' if item['share'][worst] <= 1.0 else 'exceeds')}"

    def theta(item: Mapping[str, Any], i: int) -> str:
        second = item["second_order"]
        if second is None:
            return f"{outcome('not assessed')}: {escape(item['second_order_note'])}"
        worst = int(np.argmax(second["theta"]))
        value = number(
            second["theta"][worst], "ratio", system, f"/{key}/result/directions/{i}/second_order/theta/{worst}"
        )
        return f"θ = {value}, {outcome(second['verdict'])}"

    yield "Largest drift", _joined(result, share)
    yield "Second order", _joined(result, theta)


def _screens(key: str, result: Mapping[str, Any], system: str) -> Iterator[Row]:
    def said(item: Mapping[str, Any], i: int) -> str:
        named = {
            word: [s["name"] for s in item["screens"] if s["verdict"] == word]
            for word in ("exceeds", "judgement", "not assessed", "passes")
        }
        return ", ".join(f"{outcome(word)}: {symbols(', '.join(names))}" for word, names in named.items() if names)

    yield "Irregularities", _joined(result, said)


Rows = Callable[[str, Mapping[str, Any], str], Iterator[Row]]
BRIEF: Mapping[str, Rows] = {
    "storeys": _storeys,
    "modes": _modes,
    "participation": _participation,
    "demand": _demand,
    "drift": _drift,
    "actions": _actions,
    "torsion": _edges,
}
MORE: Mapping[str, Rows] = {"actions": _torsion, "drift": _screens}
LEFT_OUT: Mapping[str, str] = {
    "demand": "design demand",
    "drift": "drift, second order, irregularities",
    "actions": "storey actions",
}
"""What is not assessed where a record has no step of the kind."""
