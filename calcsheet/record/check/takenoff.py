"""What the take-offs share with storey table and job card, held against each other."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

CLOSE = 1e-9
"""Relative difference that conversion of units and sums leave."""

Payloads = Mapping[str, Mapping[str, Any]]


Wrong = tuple[str, str]
"""Place and what is wrong there."""


def masses(key: str, payloads: Payloads) -> Iterator[Wrong]:
    """Whatever the mass take-off `key` says otherwise than the storeys and the job card do."""
    floors = payloads[key]
    for other, payload in payloads.items():
        if payload["kind"] == "storeys":
            yield from _masses_of(floors, other, payload["inputs"])
        elif payload["kind"] == "card":
            yield from _shares(key, floors["inputs"]["load"], payload["inputs"]["mass_basis"])


def stiffnesses(key: str, payloads: Payloads) -> Iterator[Wrong]:
    """Whatever the stiffness take-off `key` says otherwise than the storeys and the job card do."""
    members = payloads[key]
    cards = [p["inputs"] for p in payloads.values() if p["kind"] == "card"]
    for card in cards:
        yield from _factors(key, members["inputs"]["factors"], card["stiffness"])
    for other, payload in payloads.items():
        if payload["kind"] == "storeys":
            yield from _heights(key, members["inputs"], other, payload["inputs"])
            for card in cards:
                if card["model"].get("members") is not None:
                    yield from _stiffnesses_of(members, other, payload["inputs"], card["stiffness"])


def missing(payloads: Payloads) -> Iterator[Wrong]:
    """Storeys whose masses or stiffnesses are said to come from a take-off that the record hasn't."""
    kinds = {payload["kind"] for payload in payloads.values()}
    for key, payload in payloads.items():
        given = payload["inputs"]
        if payload["kind"] == "storeys" and given["given"] == "take-off" and "masses" not in kinds:
            yield f"/{key}/inputs/given", "masses by take-off, but the record has no mass take-off"
        if (
            payload["kind"] == "card"
            and given["model"].get("members") is not None
            and "stiffness take-off" not in kinds
        ):
            yield f"/{key}/inputs/model/members", "stiffnesses by take-off, but the record has no stiffness take-off"


# ---- masses ----------------------------------------------------------------------------------------------------------


def _masses_of(floors: Mapping[str, Any], other: str, storeys: Mapping[str, Any]) -> Iterator[Wrong]:
    """Storey heights are those of the storey table, and its masses the take-off's where it says so."""
    place = {level: i for i, level in enumerate(floors["inputs"]["level"])}
    held = {"storey_height": (storeys["storey_height"], floors["inputs"]["storey_height"])}
    if storeys["given"] == "take-off":
        held["mass"] = (storeys["mass"], floors["result"]["mass"])
    for name, (here, there) in held.items():
        for i, level in enumerate(storeys["level"]):
            if level not in place:
                yield f"/{other}/inputs/level/{i}", f'level "{str(level)[:40]}" is not in the mass take-off'
            elif not _near(here[i], there[place[level]]):
                words = f"{name.replace('_', ' ')} {here[i]:.9g}, the mass take-off has {there[place[level]]:.9g}"
                yield f"/{other}/inputs/{name}/{i}", words
    if storeys["given"] == "take-off":
        for i, below in enumerate(storeys["below"]):
            at = place.get(below["level"])
            if at is None or not _near(below["mass"], floors["result"]["mass"][at]):
                yield f"/{other}/inputs/below/{i}/mass", f"mass {below['mass']:.9g} is not that of the mass take-off"


def _shares(key: str, loads: list[Mapping[str, Any]], basis: list[Mapping[str, Any]]) -> Iterator[Wrong]:
    """Variable loads count with their share in the mass basis, permanent ones whole."""
    stated = {" ".join(entry["load"].split()).casefold(): entry["share"] for entry in basis}
    for i, load in enumerate(loads):
        share = 1.0 if load["kind"] == "permanent" else stated.get(load["name"].casefold())
        if (share is None) != (load["share"] is None) or (share is not None and not _near(share, load["share"])):
            words = f"{str(load['name'])[:40]}: share {load['share']}, the job card's mass basis gives {share}"
            yield f"/{key}/inputs/load/{i}/share", words


# ---- stiffnesses -----------------------------------------------------------------------------------------------------


def _heights(key: str, members: Mapping[str, Any], other: str, storeys: Mapping[str, Any]) -> Iterator[Wrong]:
    """Levels and storey heights are those of the storey table."""
    if members["level"] != storeys["level"]:
        yield f"/{key}/inputs/level", "levels are not those of the storeys"
        return
    for i, (here, there) in enumerate(zip(storeys["storey_height"], members["storey_height"], strict=True)):
        if not _near(here, there):
            words = f"storey height {here:.9g}, the stiffness take-off has {there:.9g}"
            yield f"/{other}/inputs/storey_height/{i}", words


def _stiffnesses_of(
    members: Mapping[str, Any], other: str, storeys: Mapping[str, Any], sets: Mapping[str, Any]
) -> Iterator[Wrong]:
    """Storey stiffnesses are those taken off, times the factor of their set."""
    taken = {item["direction"]: item["storey"] for item in members["result"]["directions"]}
    for i, named in enumerate(storeys["stiffness"]):
        for d, lateral in named["lateral"].items():
            place, factor = f"/{other}/inputs/stiffness/{i}/lateral/{d}", _factor(sets, named["name"], d)
            if factor is None or d not in taken or len(lateral.get("storey", ())) != len(taken[d]):
                yield place, "storey stiffnesses by take-off, but the stiffness take-off has none for them"
                continue
            for j, (here, there) in enumerate(zip(lateral["storey"], taken[d], strict=True)):
                if not _near(here, there * factor):
                    words = f"stiffness {here:.9g}, the stiffness take-off gives {there * factor:.9g}"
                    yield f"{place}/storey/{j}", words


def _factors(key: str, given: list[Mapping[str, Any]], sets: Mapping[str, Any]) -> Iterator[Wrong]:
    """The factors that the take-off warns of are those of the job card's sets."""
    for i, item in enumerate(given):
        factor = _factor(sets, item["name"], item["direction"])
        if factor is None or not _near(item["factor"], factor):
            words = f"{str(item['name'])[:40]}: factor {item['factor']}, the job card has {factor}"
            yield f"/{key}/inputs/factors/{i}/factor", words


def _factor(sets: Mapping[str, Any], name: str, direction: str) -> float | None:
    """The job card's factor of a set in a direction; None where it has none."""
    basis = sets.get(name, {})
    factor = basis.get("factor")
    return basis.get(f"factor_{direction}") if factor is None else factor


def _near(a: float, b: float) -> bool:
    return abs(a - b) <= CLOSE * max(abs(a), abs(b))
