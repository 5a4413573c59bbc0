"""The JSON Schema of a record, made from the types that its steps take and give.

``python -m calcsheet.record.schema > calcsheet/record/record.schema.json`` writes it anew.
"""

from __future__ import annotations

import dataclasses
import json
import sys
import types
from collections.abc import Iterator, Mapping
from functools import cache
from importlib.resources import files
from typing import Any, Literal, Union, get_args, get_origin, get_type_hints

import numpy as np
from jsonschema import Draft202012Validator
from jsonschema.exceptions import ValidationError, best_match
from jsonschema.validators import extend
from pydantic import BaseModel

from calcsheet.core.evidence import Evidence
from calcsheet.steps.registry import STEPS
from calcsheet.steps.step import Caution, Line

FILE = "record.schema.json"
DIALECT = "https://json-schema.org/draft/2020-12/schema"

Schema = dict[str, Any]

TEXT: Schema = {"type": "string"}
TEXTS: Schema = {"type": "object", "additionalProperties": TEXT}
DATE: Schema = {"type": "string", "pattern": r"^\d{4}-(0[1-9]|1[0-2])-(0[1-9]|[12]\d|3[01])$"}
DIGEST: Schema = {"type": "string", "pattern": "^[0-9a-f]{64}$"}
ROLE: Schema = {"enum": ["prepared", "checked", "approved"]}
KEY = r"^\w([\w. -]*\w)?$"
FINGERPRINTS = ("inputs", "notebook", "results", "layout", "versions", "people")
PERSON = ("name", "initials", "qualification", "registration")
PLAIN_NUMBERS = ({"type": "number"}, {"$ref": "#/$defs/numbers"})


def schema() -> Schema:
    """The schema of a record of the present format, JSON Schema draft 2020-12.

    Returns
    -------
    dict
        What `record.schema.json` holds. Steps of other versions than this program's are described as payloads alone.
    """
    made = _Made()
    record = _record()
    payload: Schema = record["properties"]["payloads"]["additionalProperties"]
    payload["properties"] |= {
        "lines": made.of(tuple[Line, ...]),
        "cautions": made.of(tuple[Caution, ...]),
        "evidence": made.of(tuple[Evidence, ...]),
    }
    payload["allOf"] = [
        {
            "if": {"properties": {"kind": {"const": step.kind}, "version": {"const": step.version}}},
            "then": {"properties": {"inputs": made.of(step.inputs), "result": made.of(step.result)}},
        }
        for step in STEPS.values()
    ]
    return {"$schema": DIALECT, "title": "Calculation record", **record, "$defs": dict(sorted(made.defs.items()))}


def as_text() -> str:
    """The schema as the text of its file."""
    return json.dumps(schema(), ensure_ascii=False, indent=1) + "\n"


def refusal(record: Any) -> str:
    """Why a record is not of the schema, in one clause: place, what was found, what is allowed; "" where it is."""
    error = best_match(_validator().iter_errors(record))
    if error is None:
        return ""
    place = "/" + "/".join(map(str, error.absolute_path))
    return f"{place[:200]}: {' '.join(error.message.split())[:300]}"


@cache
def published() -> Schema:
    """The schema as it is published in the package."""
    return json.loads((files("calcsheet.record") / FILE).read_text(encoding="utf-8"))


@cache
def _validator() -> Any:
    return extend(Draft202012Validator, {"items": _items})(published())


def _items(validator: Any, allowed: Any, found: Any, holder: Any) -> Iterator[ValidationError]:
    """The keyword "items"; arrays of numbers alone, which are most of a record, are looked through in one go."""
    plain = allowed in PLAIN_NUMBERS and isinstance(found, list) and all(type(v) in (int, float) for v in found)
    if not plain:
        yield from Draft202012Validator.VALIDATORS["items"](validator, allowed, found, holder)


def _object(required: Mapping[str, Schema], optional: Mapping[str, Schema] | None = None) -> Schema:
    return {
        "type": "object",
        "properties": {**required, **(optional or {})},
        "required": list(required),
        "additionalProperties": False,
    }


def _array(of: Schema, most: int | None = None) -> Schema:
    return {"type": "array", "items": of} | ({} if most is None else {"maxItems": most})


def _record() -> Schema:
    """A record but for what its steps take and give."""
    person = dict.fromkeys(PERSON, TEXT)
    part = {
        "oneOf": [
            _object({"words": TEXT, "attachments": {"type": "object", "additionalProperties": TEXTS}}),
            _object({"view": TEXT, "step": TEXT, "options": TEXTS}),
            _object({"own": TEXT, "outputs": _array(TEXTS)}),
        ]
    }
    payload = _object(
        {
            "kind": TEXT,
            "version": {"type": "integer", "minimum": 1},
            "state": {"const": "ok"},
            "why": {"const": ""},
            "needs": TEXTS,
            "inputs": {},
            "result": {},
            "lines": {},
            "cautions": {},
            "evidence": {},
        }
    )
    payloads = {
        "type": "object",
        "propertyNames": {"pattern": KEY},
        "additionalProperties": payload,
        "required": ["card", "storeys"],
        "maxProperties": MOST_STEPS,
    }
    signature = _object(
        {"role": ROLE, **person, "date": DATE, "scope": TEXT, "remark": TEXT, "agreed": _array(TEXT), "covers": DIGEST}
    )
    return _object(
        {
            "format": {"const": 2},
            "programme": TEXT,
            "status": {"enum": ["DRAFT", "FOR CHECKING", "CHECKED", "APPROVED"]},
            "payloads": payloads,
            "notebook": _array(part, MOST_PARTS),
            "layout": _object({"paper": {"enum": ["a4", "letter"]}, "engine": TEXT, "code": TEXT, "libraries": TEXTS}),
            "versions": TEXTS,
            "signatures": _array(signature, MOST_PARTS),
            "comments": _array(_comment(), MOST_PARTS),
            "fingerprints": _object({}, dict.fromkeys(FINGERPRINTS, DIGEST)),  # earlier formats had fewer
        }
    )


MOST_STEPS = 100
MOST_PARTS = 2000


def _comment() -> Schema:
    texts = ("revision", "by", "where", "comment", "reply", "replied_by", "closed_by")
    maybe = {"anyOf": [DATE, {"type": "null"}, {"const": ""}]}
    dates = {key: maybe for key in ("date", "replied_on", "closed_on")}
    return _object({"number": {"type": "integer", "minimum": 1}, **dict.fromkeys(texts, TEXT), **dates})


class _Made:
    """Schemas of types; each record type is defined once, under its name."""

    def __init__(self) -> None:
        self.names: dict[type, str] = {}
        self.defs: dict[str, Schema] = {"numbers": {"anyOf": [{"type": "number"}, _array({"$ref": "#/$defs/numbers"})]}}

    def of(self, hint: Any) -> Schema:
        """The schema of what `serial.to_json` makes of a value of this type."""
        origin, args = get_origin(hint), get_args(hint)
        if origin in (Union, types.UnionType):
            return {"anyOf": [self.of(member) for member in args]}
        if origin is Literal:
            return {"enum": list(args)}
        if origin is np.ndarray:
            return _array({"$ref": "#/$defs/numbers"})
        if origin is tuple:
            if args[-1:] == (Ellipsis,):
                return _array(self.of(args[0]))
            return {"type": "array", "prefixItems": [self.of(a) for a in args], "items": False, "minItems": len(args)}
        if isinstance(origin, type) and issubclass(origin, Mapping):
            return {"type": "object", "additionalProperties": self.of(args[1])}
        if isinstance(hint, type) and issubclass(hint, BaseModel):
            return self._model(hint)
        if dataclasses.is_dataclass(hint) and isinstance(hint, type):
            return self._defined(hint)
        return dict(PLAIN[hint])

    def _model(self, hint: type[BaseModel]) -> Schema:
        made = hint.model_json_schema(ref_template="#/$defs/{model}")
        for name, inner in made.pop("$defs", {}).items():
            self.defs[name] = inner
        self.defs[hint.__name__] = made
        return {"$ref": f"#/$defs/{hint.__name__}"}

    def _defined(self, hint: Any) -> Schema:
        if hint not in self.names:
            # two records may share a name: the later one's says where it is from
            free = hint.__name__ not in self.defs
            name = self.names[hint] = hint.__name__ if free else f"{hint.__module__.rpartition('.')[2]}.{hint.__name__}"
            self.defs[name] = {}  # a type may hold its own kind
            hints, kind = get_type_hints(hint), getattr(hint, "kind", None)
            members = {f.name: self.of(hints[f.name]) for f in dataclasses.fields(hint)}
            given = {f.name for f in dataclasses.fields(hint) if _has_default(f)}
            tag = {} if kind is None else {"kind": {"const": kind}}
            needed = {key: value for key, value in members.items() if key not in given}
            self.defs[name] = _object(tag | needed, {key: members[key] for key in members if key in given})
        return {"$ref": f"#/$defs/{self.names[hint]}"}


PLAIN: Mapping[Any, Schema] = {
    str: TEXT,
    bool: {"type": "boolean"},
    int: {"type": "integer"},
    float: {"type": "number"},
    type(None): {"type": "null"},
}


def _has_default(field: dataclasses.Field[Any]) -> bool:
    return field.default is not dataclasses.MISSING or field.default_factory is not dataclasses.MISSING


if __name__ == "__main__":
    sys.stdout.reconfigure(encoding="utf-8")  # type: ignore[union-attr]
    sys.stdout.write(as_text())
