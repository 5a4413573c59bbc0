"""Keys and values of TOML as messages quote them, and what is wrong with them in one sentence."""

from __future__ import annotations

import datetime as dt
import re
from collections.abc import Sequence
from typing import Annotated, Any, get_args, get_origin

from pydantic import BaseModel

from calcsheet.job.errors import InputError


def dotted(keys: Sequence[str | int]) -> str:
    """Return keys joined by points, quoted where they need it: `stiffness."half cracked".factor`."""
    return ".".join(str(key) if re.fullmatch(r"[\w-]+", str(key), re.ASCII) else f'"{key}"' for key in keys)


def shorten(text: str) -> str:
    """Return a text short enough for a message."""
    return text if len(text) <= 60 else f"{text[:59]}…"


def shown(value: object) -> str:
    """Return a value of TOML as a message quotes it."""
    match value:
        case bool():
            return "true" if value else "false"
        case str():
            return f'"{shorten(value)}"'
        case int() | float() | dt.date() | dt.time():
            return shorten(str(value))
        case dict():
            return "a table"
        case _:
            return "a list"


def refusal(file: str, model: type[BaseModel], error: Any) -> InputError:
    """Return one sentence for one of pydantic's errors about the keys of a file."""
    place: list[str | int] = []
    kind: Any = model
    allowed = "a table"
    for key in error["loc"]:
        fields = kind.model_fields if isinstance(kind, type) and issubclass(kind, BaseModel) else None
        if fields is not None and key not in fields:  # an unknown key
            return InputError(file, dotted([*place, key]), "unknown key", f"must be one of {', '.join(fields)}")
        place.append(key)
        if fields is not None:
            kind, allowed = fields[key].annotation, fields[key].description or allowed
        else:
            kind = get_args(kind)[-1 if isinstance(key, str) else 0]  # of a mapping, of a list
            allowed = "a table"
            if get_origin(kind) is Annotated:
                kind, described = get_args(kind)
                allowed = described.description
    found = "missing" if error["type"] == "missing" else f"got {shown(error['input'])}"
    return InputError(file, dotted(place), found, f"must be {allowed}")
