"""What a mass take-off shares with storey table and job card, held against each other."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

CLOSE = 1e-9
"""Relative difference that conversion of units and sums leave."""

Payloads = Mapping[str, Mapping[str, Any]]


def taken_off(key: str, payloads: Payloads) -> Iterator[tuple[str, str]]:
    """Place and words of whatever the take-off `key` says otherwise than the storeys and the job card do."""
    floors = payloads[key]
    for other, payload in payloads.items():
        if payload["kind"] == "storeys":
            yield from _storeys(key, floors, other, payload["inputs"])
        elif payload["kind"] == "card":
            yield from _shares(key, floors["inputs"]["load"], payload["inputs"]["mass_basis"])


def missing(payloads: Payloads) -> Iterator[tuple[str, str]]:
    """Storeys whose masses are said to come from a take-off that the record hasn't."""
    if not any(p["kind"] == "masses" for p in payloads.values()):
        for key, payload in payloads.items():
            if payload["kind"] == "storeys" and payload["inputs"]["given"] == "take-off":
                yield f"/{key}/inputs/given", "masses by take-off, but the record has no mass take-off"


def _storeys(key: str, floors: Mapping[str, Any], other: str, storeys: Mapping[str, Any]) -> Iterator[tuple[str, str]]:
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


def _shares(key: str, loads: list[Mapping[str, Any]], basis: list[Mapping[str, Any]]) -> Iterator[tuple[str, str]]:
    """Variable loads count with their share in the mass basis, permanent ones whole."""
    stated = {" ".join(entry["load"].split()).casefold(): entry["share"] for entry in basis}
    for i, load in enumerate(loads):
        share = 1.0 if load["kind"] == "permanent" else stated.get(load["name"].casefold())
        if (share is None) != (load["share"] is None) or (share is not None and not _near(share, load["share"])):
            words = f"{str(load['name'])[:40]}: share {load['share']}, the job card's mass basis gives {share}"
            yield f"/{key}/inputs/load/{i}/share", words


def _near(a: float, b: float) -> bool:
    return abs(a - b) <= CLOSE * max(abs(a), abs(b))
