"""Inputs that a record holds twice, held against each other: job card, storey table, take-offs, basis."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

import numpy as np
from numpy.typing import NDArray

from calcsheet.record.check.finding import AGREES, DIFFERS, Finding
from calcsheet.record.check.takenoff import Wrong, masses, missing, stiffnesses

PART = "data"
CLOSE = 1e-9
"""Relative difference that conversion of units and sums leave."""
SCALED = ("storey", "bending", "shear", "matrix")
"""Numbers of a lateral stiffness that a factor applies to."""
IN_FEET = (1.0, 0.3048, 0.3048**2)
"""What a value of the card in US units may be multiplied by: none, a length, an area."""

Array = NDArray[np.float64]
Payloads = Mapping[str, Mapping[str, Any]]


def said_twice(payloads: Payloads) -> Iterator[Finding]:
    """Whether what the inputs say twice is the same.

    Parameters
    ----------
    payloads : mapping of str to payload
        The steps of a record.
    """
    cards = [p["inputs"] for p in payloads.values() if p["kind"] == "card"]
    wrong: list[Wrong] = []
    for key, payload in payloads.items():
        if payload["kind"] == "storeys":
            wrong += _heights(key, payload["inputs"])
            wrong += [item for card in cards for item in _factors(key, payload["inputs"], card)]
        elif payload["kind"] == "basis":
            wrong += [item for card in cards for item in _edition(key, payload["inputs"]["edition"], card)]
        elif payload["kind"] == "masses":
            wrong += masses(key, payloads)
        elif payload["kind"] == "stiffness take-off":
            wrong += stiffnesses(key, payloads)
    wrong += missing(payloads)
    yield from (Finding(PART, DIFFERS, text, place) for place, text in wrong)
    if not wrong:
        yield Finding(PART, AGREES, "storey heights, stiffness sets and basis say the same wherever they stand twice")


def _heights(key: str, given: Mapping[str, Any]) -> Iterator[Wrong]:
    """Storey heights are differences of elevations."""
    elevation = np.array(given["elevation"], dtype=float)
    between = np.diff(elevation, prepend=given["base_elevation"])
    for i, height in enumerate(given["storey_height"]):
        if not abs(between[i] - height) <= CLOSE * max(1.0, float(np.abs(elevation).max())):
            text = f"storey height {height:.9g} m, but elevations apart by {between[i]:.9g} m"
            yield f"/{key}/inputs/storey_height/{i}", text


def _factors(key: str, given: Mapping[str, Any], card: Mapping[str, Any]) -> Iterator[Wrong]:
    """Stiffness sets without values of their own are factors on one table."""
    ways = dict.fromkeys(way for named in given["stiffness"] for way in named["lateral"])
    for direction in ways:
        before: tuple[str, Any] | None = None
        for i, named in enumerate(given["stiffness"]):
            basis, lateral = card["stiffness"].get(named["name"]), named["lateral"].get(direction)
            if basis is None or lateral is None or basis["own"]:
                continue
            factor = basis["factor"] if basis["factor"] is not None else basis[f"factor_{direction}"]
            values = np.concatenate([np.ravel(lateral[name]) for name in SCALED if lateral.get(name) is not None])
            table = values * factor if lateral["kind"] == "flexibility matrix" else values / factor
            if before is not None and not _alike(table, before[1]):
                text = f'sets "{before[0]}" and "{named["name"]}" in {direction} are not their factors times one table'
                yield f"/{key}/inputs/stiffness/{i}/lateral/{direction}", text
            before = before or (named["name"], table)


def _alike(one: Array, other: Array) -> bool:
    return one.shape == other.shape and np.allclose(one, other, rtol=CLOSE, atol=0.0)


def _edition(key: str, edition: Mapping[str, Any], card: Mapping[str, Any]) -> Iterator[Wrong]:
    """Parameters of the edition are those of the job card."""
    given = card["basis"] or {}
    factors = IN_FEET if card["units"]["system"] == "US" else IN_FEET[:1]
    for name in edition.keys() & given.keys():
        if not _same(edition[name], given[name], factors):
            text = f"{name} is {str(edition[name])[:40]}, the job card has {str(given[name])[:40]}"
            yield f"/{key}/inputs/edition/{name}", text


def _same(used: Any, given: Any, factors: tuple[float, ...]) -> bool:
    if type(given) in (int, float) and type(used) in (int, float):
        return any(abs(used - given * factor) <= CLOSE * abs(used) for factor in factors)
    if isinstance(given, str) and isinstance(used, str):
        return given == used
    return True  # a file's name beside its points, or a choice that was turned into numbers
