"""Stored steps run again, each on its stored upstream results, so that a difference names its step."""

from __future__ import annotations

from collections.abc import Mapping

from calcsheet.core.errors import ModelError
from calcsheet.steps.agreement import Difference, differences
from calcsheet.steps.links import links
from calcsheet.steps.registry import STEPS
from calcsheet.steps.serial import from_json
from calcsheet.steps.step import Caution, Evidence, Line, Outcome, Payload, done


def replay(payloads: Mapping[str, Payload]) -> list[Difference]:
    """Run every stored step again.

    Parameters
    ----------
    payloads : mapping of str to payload
        The steps of a record by key, in any order.

    Returns
    -------
    list of Difference
        Where results, worked lines, cautions or evidence disagree; empty where all agree.
    """
    return [d for key, payload in payloads.items() for d in _replayed(key, payload, payloads)] + links(payloads)


def _replayed(key: str, payload: Payload, payloads: Mapping[str, Payload]) -> list[Difference]:
    step = STEPS.get(payload["kind"])
    if step is None or step.version != payload["version"]:
        here = "unknown" if step is None else f"version {step.version}"
        return [
            Difference(
                key,
                "version",
                f"{payload['kind']} version {payload['version']}",
                here,
                "needs a calcsheet that knows it",
            )
        ]
    if payload["state"] != "ok":
        return [Difference(key, "state", payload["state"], "not replayed", "must be ok")]
    upstream = []
    for kind in step.needs:
        below = payloads.get(payload["needs"].get(kind, ""))
        if below is None or below["state"] != "ok":
            return [Difference(key, "needs", kind, "no result of it is stored", "must be stored with the step")]
        upstream.append(done(STEPS[kind], below))
    try:
        outcome = step.run(from_json(step.inputs, payload["inputs"]), *upstream)
    except ModelError as error:
        return [Difference(key, "state", "ok", f"refused: {error}", "must be ok")]
    stored = Outcome(
        from_json(step.result, payload["result"]),
        from_json(tuple[Line, ...], payload["lines"]),
        from_json(tuple[Caution, ...], payload["cautions"]),
        from_json(tuple[Evidence, ...], payload["evidence"]),
    )
    found = differences(stored, outcome, "")
    return [Difference(key, at.lstrip("/"), a, b, allowed) for at, a, b, allowed in found]
