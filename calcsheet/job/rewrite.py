"""One value of a TOML text changed: comments, order and every other line are kept."""

from __future__ import annotations

import datetime as dt
import re
import tomllib
from collections.abc import Mapping, Sequence
from difflib import SequenceMatcher
from typing import Any

import tomlkit

from calcsheet.job.card import FILE, parse_toml
from calcsheet.job.errors import InputError
from calcsheet.job.wording import dotted

Scalar = str | bool | int | float | dt.date
Value = Scalar | Mapping[str, Scalar]


def with_value(text: str, key: str | Sequence[str | int], value: Value | None) -> str:
    """Return the text with one key set.

    Parameters
    ----------
    text : str
        The TOML text.
    key : str or sequence
        The dotted key, such as ``'job.revision'`` or ``'answers."light roof"'``, or its parts. Tables that
        aren't there yet are made; a member of a list is named by its number from 0.
    value : str, bool, int, float, date, mapping of these, or None
        The value, a mapping as a table; None removes the key.

    Raises
    ------
    InputError
        The text is no TOML, or the key leads through something that is no table.
    """
    keys = _parts(key) if isinstance(key, str) else list(key)
    parse_toml(text)
    document = tomlkit.parse(text)
    before = tomlkit.dumps(document)
    table: Any = document
    for depth, name in enumerate(keys[:-1]):
        table = _member(table, name, keys[:depth])
    last = keys[-1]
    if not isinstance(table, dict):
        raise InputError(FILE, dotted(keys[:-1]), "is no table", "must be a table to hold a value")
    if value is None:
        table.pop(last, None)
    else:
        table[last] = dict(value) if isinstance(value, Mapping) else value
    return _line_endings(_keep_lines(text, before, tomlkit.dumps(document)), text)


def _parts(key: str) -> list[str | int]:
    try:
        table: Any = tomllib.loads(f"{key} = 0")
    except tomllib.TOMLDecodeError:
        allowed = "must be written as in TOML, such as job.revision"
        raise InputError(FILE, key, "is no dotted key", allowed) from None
    parts: list[str | int] = []
    while isinstance(table, dict):
        ((name, table),) = table.items()
        parts.append(name)
    return parts


def _member(table: Any, name: str | int, above: Sequence[str | int]) -> Any:
    if isinstance(table, list):
        try:
            return table[int(name)]
        except (ValueError, IndexError):
            allowed = f"must be a number from 0 to {len(table) - 1}"
            raise InputError(FILE, dotted([*above, name]), "is not in the list", allowed) from None
    if not isinstance(table, dict):
        raise InputError(FILE, dotted(above), "is no table", "must be a table to hold a value")
    if name not in table:
        table[str(name)] = tomlkit.table()
    return table[str(name)]


def _keep_lines(text: str, before: str, after: str) -> str:
    """Carry the change from `before` to `after` over to `text`, which differs from `before` in spaces."""
    kept, old, new = (t.splitlines(keepends=True) for t in (text, before, after))
    if text == before or len(kept) != len(old):
        return after
    steps = SequenceMatcher(None, old, new, autojunk=False).get_opcodes()
    return "".join("".join(kept[i:k] if tag == "equal" else new[j:m]) for tag, i, k, j, m in steps)


def _line_endings(text: str, like: str) -> str:
    """Give lines that were added the line ending of the file."""
    if "\r\n" in like and not re.search(r"(?<!\r)\n", like):
        return re.sub(r"(?<!\r)\n", "\r\n", text)
    return text
