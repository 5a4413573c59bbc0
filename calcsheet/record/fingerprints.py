"""Fingerprints of a record: what was given, what came of it, how it is shown, and who signed, kept apart."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import Any

from calcsheet.steps.compare import EARLIER
from calcsheet.steps.serial import fingerprint

Record = Mapping[str, Any]

SHORT = 12
"""Digits of a fingerprint in print."""
RESULTS = ("result", "lines", "cautions", "evidence")
COVERED = ("inputs", "notebook", "results")


def fingerprints_of(record: Record) -> dict[str, str]:
    """The six fingerprints of a record, SHA-256 in hexadecimal of RFC 8785 JSON.

    Parameters
    ----------
    record : mapping
        A record of the present format; its own entry "fingerprints" is not read.

    Returns
    -------
    dict of str to str
        - inputs: kind, needs and inputs of every step, without people, empty entries left out (`sparse`).
        - notebook: the notebook's parts in order, and what the earlier revision said.
        - results: results, worked lines, cautions and evidence of every step.
        - layout: template, style, renderers, fonts, paper, engine.
        - versions: of the program, of Python and of the libraries that calculate and draw.
        - people: who is named, who signed, who commented.

    Notes
    -----
    An empty entry (null, "", [], {}, false) says nothing, so a later version of the program that knows one more
    optional entry finds the same inputs.
    """
    own = {key: p for key, p in record["payloads"].items() if key != EARLIER}
    card = own["card"]
    no_people = {k: v for k, v in card["inputs"].items() if k != "people"}
    given = {k: {"kind": p["kind"], "needs": p["needs"], "inputs": p["inputs"]} for k, p in own.items()}
    given["card"]["inputs"] = no_people
    parts = {
        "inputs": sparse(given),
        "notebook": {"parts": record["notebook"], "earlier": record["payloads"].get(EARLIER)},
        "results": {k: {part: p[part] for part in RESULTS} for k, p in own.items()},
        "layout": record["layout"],
        "versions": record["versions"],
        "people": {
            "named": card["inputs"]["people"],
            "signatures": record["signatures"],
            "comments": record["comments"],
        },
    }
    return {name: fingerprint(part) for name, part in parts.items()}


def covered(fingerprints: Mapping[str, str]) -> str:
    """What a signature covers: the fingerprint of the fingerprints of inputs, notebook and results."""
    return fingerprint({name: fingerprints[name] for name in COVERED})


def short(fingerprints: Mapping[str, str], names: Iterable[str] = ("inputs", "results")) -> str:
    """Fingerprints as printed on the cover and in the footers."""
    return ", ".join(f"{name} {fingerprints[name][:SHORT]}" for name in names)


def sparse(data: Any) -> Any:
    """Plain JSON without the empty members of its objects: null, "", [], {} and false, from the inside out."""
    if isinstance(data, Mapping):
        kept = {key: sparse(value) for key, value in data.items()}
        return {key: value for key, value in kept.items() if not _empty(value)}
    return [sparse(value) for value in data] if isinstance(data, list) else data


def _empty(value: Any) -> bool:
    return value is None or value is False or value in ("", [], {})
