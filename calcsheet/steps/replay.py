"""Stored steps run again, each on its stored upstream results, so that a difference names its step."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

from numpy.linalg import LinAlgError

from calcsheet.core.errors import ModelError
from calcsheet.steps.agreement import Difference, differences
from calcsheet.steps.registry import STEPS
from calcsheet.steps.serial import from_json
from calcsheet.steps.step import Caution, Done, Evidence, Line, Number, Outcome, Payload, Step

MALFORMED = (KeyError, IndexError, TypeError, ValueError, AttributeError, StopIteration, ArithmeticError, LinAlgError)
"""What reading or running a step raises on data that no step has made."""
OUTCOMES = ("passes", "exceeds", "judgement", "not assessed")


def replay(payloads: Mapping[str, Payload], *, words: bool = True) -> list[Difference]:
    """Run every stored step again.

    Parameters
    ----------
    payloads : mapping of str to payload
        The steps of a record by key, in any order.
    words : bool
        Compare texts too: worked lines, cautions, and texts in results and evidence. Another version of the program may
        put them otherwise; then numbers and outcomes count, and a number in words must stand in the result as it says.

    Returns
    -------
    list of Difference
        Where results, worked lines, cautions or evidence disagree, or a step is malformed; empty where all agree.
    """
    return [d for key, payload in payloads.items() for d in _replayed(key, payload, payloads, words)]


def _replayed(key: str, payload: Payload, payloads: Mapping[str, Payload], words: bool) -> list[Difference]:
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
        if below is None or below["state"] != "ok" or below["kind"] != kind:
            return [Difference(key, "needs", kind, "no result of it is stored", "must be stored with the step")]
        try:
            upstream.append(
                Done(from_json(STEPS[kind].inputs, below["inputs"]), from_json(STEPS[kind].result, below["result"]))
            )
        except MALFORMED as error:
            return [_malformed(key, f"needs/{kind}", error)]
    return _run(key, step, payload, upstream, words)


def _run(key: str, step: Step, payload: Payload, upstream: list[Done], words: bool) -> list[Difference]:
    try:
        part = "inputs"
        inputs = from_json(step.inputs, payload["inputs"])
        part = "result"
        result = from_json(step.result, payload["result"])
        part = "lines, cautions, evidence"
        stored = Outcome(
            result,
            from_json(tuple[Line, ...], payload["lines"]),
            from_json(tuple[Caution, ...], payload["cautions"]),
            from_json(tuple[Evidence, ...], payload["evidence"]),
        )
        part = "run"
        outcome = step.run(inputs, *upstream)
        part = "comparison"
        if words:
            found = list(differences(stored, outcome, ""))
        else:
            found = [*_without_words(stored, outcome), *_misplaced(stored, payload)]
    except ModelError as error:
        return [Difference(key, "state", "ok", f"refused: {error}", "must be ok")]
    except MALFORMED as error:
        return [_malformed(key, part, error)]
    return [Difference(key, at.lstrip("/"), a, b, allowed) for at, a, b, allowed in found]


def _malformed(key: str, part: str, error: Exception) -> Difference:
    said = " ".join(str(error).split())[:120]
    return Difference(
        key, part, "malformed", f"{type(error).__name__}: {said}", "must be as a step of this kind makes it"
    )


def _without_words(stored: Outcome, outcome: Outcome) -> Iterator[tuple[str, str, str, str]]:
    """Differences of results and evidence in anything but wording: an outcome is no wording."""
    for part in ("result", "evidence"):
        for at, a, b, allowed in differences(getattr(stored, part), getattr(outcome, part), f"/{part}"):
            texts = a.startswith(("'", '"')) and b.startswith(("'", '"'))
            if not texts or {a[1:-1], b[1:-1]} & {*OUTCOMES}:
                yield at, a, b, allowed


def _misplaced(stored: Outcome, payload: Payload) -> Iterator[tuple[str, str, str, str]]:
    """Numbers in words that are not what stands at their place in the payload."""
    said = [(f"/lines/{i}", (*line.numbers, line.result)) for i, line in enumerate(stored.lines)]
    said += [(f"/cautions/{i}", caution.numbers) for i, caution in enumerate(stored.cautions)]
    for place, numbers in said:
        for number in numbers:
            held = _at(payload, number)
            if not isinstance(held, int | float) or abs(held - number.value) > 1e-12 + 1e-7 * abs(number.value):
                yield place, f"{number.value:.12g}", f"{held!r} at {number.at}", "must be what stands at its place"


def _at(payload: Payload, number: Number) -> Any:
    found: Any = payload
    for name in number.at.split("/"):
        found = found[int(name)] if isinstance(found, list) else found[name]
    return found
