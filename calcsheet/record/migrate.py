"""Records of earlier formats as the present one reads them."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

from calcsheet.record.errors import RecordError
from calcsheet.steps.cautions import migrated_answer, migrated_caution

FORMAT = 2
"""Format of the JSON record."""


def migrated(record: Mapping[str, Any]) -> dict[str, Any]:
    """A record of any format as one of the present format.

    Its fingerprints stay those that it was issued with; they are of its own format.

    Raises
    ------
    RecordError
        A format that this version doesn't know.
    """
    found = dict(record)
    while (form := found.get("format")) != FORMAT:
        if not isinstance(form, int) or form not in MIGRATIONS:
            raise RecordError(f"record format {form!r}; this version reads 1 to {FORMAT}: install a later calcsheet")
        found = MIGRATIONS[form](found)
    return found


def _to_2(record: dict[str, Any]) -> dict[str, Any]:
    """From format 1: cautions by one key, answers as bare texts, no signatures but the job card's."""
    payloads = {key: _payload_to_2(key, payload) for key, payload in record["payloads"].items()}
    return {
        **record,
        "format": 2,
        "payloads": payloads,
        "notebook": [_part_to_2(part) for part in record["notebook"]],
        "layout": {"paper": "a4", "engine": "", "code": "", "libraries": {}},
        "signatures": [],
        "comments": [],
    }


def _payload_to_2(key: str, payload: Mapping[str, Any]) -> dict[str, Any]:
    new = {**payload, "cautions": [migrated_caution(caution) for caution in payload["cautions"]]}
    if key == "card":
        answers = {key: migrated_answer(text) for key, text in payload["inputs"]["answers"].items()}
        new["inputs"] = {**payload["inputs"], "answers": answers}
    return new


def _part_to_2(part: Mapping[str, Any]) -> dict[str, Any]:
    if "words" in part:
        return {"attachments": {}, **part}
    return {"outputs": [], **part} if "own" in part else dict(part)


MIGRATIONS: Mapping[int, Callable[[dict[str, Any]], dict[str, Any]]] = {1: _to_2}
