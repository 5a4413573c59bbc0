"""Frozen records to plain JSON and back, by their type hints."""

from __future__ import annotations

import dataclasses
import hashlib
import json
import math
import types
from collections.abc import Mapping
from typing import Any, Union, get_args, get_origin, get_type_hints

import numpy as np
import rfc8785
from pydantic import BaseModel

from calcsheet.core.arrays import readonly


class NotFiniteError(ValueError):
    """A number that is not finite can't be stored."""


def to_json(value: Any) -> Any:
    """Plain JSON of a record, array, tuple, mapping or scalar.

    Raises
    ------
    NotFiniteError
        A number that is not finite: JSON has none, and no result may hold one.
    """
    if isinstance(value, BaseModel):
        return value.model_dump(mode="json")
    if dataclasses.is_dataclass(value) and not isinstance(value, type):
        kind = getattr(type(value), "kind", None)
        tag = {} if kind is None else {"kind": kind}
        return tag | {f.name: to_json(getattr(value, f.name)) for f in dataclasses.fields(value)}
    if isinstance(value, np.ndarray):
        if not np.isfinite(value).all():
            raise NotFiniteError("an array with entries that are not finite can't be stored")
        return value.tolist()
    if isinstance(value, Mapping):
        return {str(k): to_json(v) for k, v in value.items()}
    if isinstance(value, list | tuple):
        return [to_json(v) for v in value]
    if isinstance(value, float) and not math.isfinite(value):
        raise NotFiniteError("a number that is not finite can't be stored")
    if value is None or isinstance(value, str | int | float):
        return value
    raise TypeError(f"{type(value).__name__} can't be stored")


def from_json(hint: Any, data: Any) -> Any:
    """The value of type `hint` that `to_json` made `data` from; entries that are missing take their declared defaults.

    Raises
    ------
    KeyError
        A missing entry that has no default.
    """
    origin, args = get_origin(hint), get_args(hint)
    if origin in (Union, types.UnionType):
        return None if data is None else from_json(_chosen(args, data), data)
    if origin is np.ndarray:
        return readonly(data)
    if origin is tuple:
        return tuple(from_json(args[0], v) for v in data)
    if isinstance(origin, type) and issubclass(origin, Mapping):
        return {k: from_json(args[1], v) for k, v in data.items()}
    if isinstance(hint, type) and issubclass(hint, BaseModel):
        return hint.model_validate_json(json.dumps(data))
    if dataclasses.is_dataclass(hint) and isinstance(hint, type):
        if not isinstance(data, Mapping):
            raise TypeError(f"{hint.__name__}: got {type(data).__name__}; must be an object")
        hints = get_type_hints(hint)
        given = [f for f in dataclasses.fields(hint) if f.name in data or not _optional(f)]
        return hint(**{f.name: from_json(hints[f.name], data[f.name]) for f in given})
    return float(data) if hint is float else data


def _optional(field: dataclasses.Field[Any]) -> bool:
    return field.default is not dataclasses.MISSING or field.default_factory is not dataclasses.MISSING


def _chosen(args: tuple[Any, ...], data: Any) -> Any:
    """The member of a union that the data are of: by their tag where there are several records."""
    members = [a for a in args if a is not type(None)]
    if len(members) == 1:
        return members[0]
    kinds = {getattr(a, "kind", None): a for a in members}
    return kinds[data["kind"]]


def fingerprint(data: Any) -> str:
    """SHA-256, in hexadecimal, of the canonical form of plain JSON (RFC 8785)."""
    return hashlib.sha256(rfc8785.dumps(data)).hexdigest()
