"""What one step's inputs take from another step's result: that both still say the same."""

from __future__ import annotations

from collections.abc import Mapping

from calcsheet.steps.agreement import Difference
from calcsheet.steps.step import Payload


def links(payloads: Mapping[str, Payload]) -> list[Difference]:
    """Hold the masses of storeys that come from the mass take-off against it.

    Parameters
    ----------
    payloads : mapping of str to payload
        The steps of a record by key.

    Returns
    -------
    list of Difference
        Where a mass isn't the take-off's; empty where all are, or none comes from there.
    """
    return [
        d
        for key, payload in payloads.items()
        if payload["kind"] == "storeys" and payload["state"] == "ok" and payload["inputs"]["given"] == "take-off"
        for d in _masses(key, payload["inputs"], payloads)
    ]


def _masses(key: str, storeys: Mapping, payloads: Mapping[str, Payload]) -> list[Difference]:
    source = next((p for p in payloads.values() if p["kind"] == "masses" and p["state"] == "ok"), None)
    if source is None:
        return [
            Difference(
                key, "inputs/mass", "by take-off", "no mass take-off is stored", "must be stored with the storeys"
            )
        ]
    held = {below["level"]: below["mass"] for below in storeys["below"]}
    held |= dict(zip(storeys["level"], storeys["mass"], strict=True))
    found = dict(zip(source["inputs"]["level"], source["result"]["mass"], strict=True))
    return [
        Difference(
            key,
            f'inputs/mass, level "{level}"',
            repr(held.get(level)),
            repr(found.get(level)),
            "must be the take-off's",
        )
        for level in dict.fromkeys([*held, *found])
        if held.get(level) != found.get(level)
    ]
