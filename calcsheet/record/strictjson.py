"""JSON of unknown origin: bounded, without what RFC 8785 can't hold."""

from __future__ import annotations

import json
import math
from typing import Any

from calcsheet.record.errors import RecordError

LARGEST_JSON = 32 * 1024 * 1024
DEEPEST = 60
LARGEST_INTEGER = 2**53 - 1
"""Beyond it an integer is held in double precision, as in every other program that reads JSON (RFC 8785, 3.2.2.3)."""


class _Refused(ValueError):  # noqa: N818
    """Why; it never leaves this file."""


def parsed(data: bytes, called: str) -> Any:
    """The value of a JSON text.

    Parameters
    ----------
    data : bytes
        UTF-8, with or without a byte-order mark.
    called : str
        Its name, for messages.

    Raises
    ------
    RecordError
        Beyond `LARGEST_JSON` or nested deeper than `DEEPEST`, no JSON, a key twice in one object, NaN, infinity or a number
        beyond double precision, or text that is not Unicode.
    """
    if len(data) > LARGEST_JSON:
        raise RecordError(f"{called}: its data are more than {LARGEST_JSON // 1024**2} MB; no record is as large")
    try:
        value = json.loads(
            data.decode("utf-8-sig"),
            object_pairs_hook=_once,
            parse_constant=_refused,
            parse_float=_finite,
            parse_int=_integer,
        )
        _walked(value)
    except _Refused as error:
        raise RecordError(f"{called}: {error}") from None
    except UnicodeDecodeError as error:
        raise RecordError(f"{called}: byte {error.start} of its data is not UTF-8; must be JSON in UTF-8") from None
    except json.JSONDecodeError as error:
        raise RecordError(
            f"{called}: its data are no JSON, line {error.lineno}, column {error.colno}: {error.msg}"
        ) from None
    except RecursionError:
        raise RecordError(f"{called}: {_TOO_DEEP}") from None
    return value


_TOO_DEEP = f"its data are nested deeper than {DEEPEST} levels; no record is"


def _once(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    found = dict(pairs)
    if len(found) != len(pairs):
        seen: set[str] = set()
        twice = next(key for key, _ in pairs if key in seen or seen.add(key))  # type: ignore[func-returns-value]
        raise _Refused(f'the key "{twice[:80]}" stands twice in one object of its data; once is allowed')
    return found


def _refused(constant: str) -> float:
    raise _Refused(f"its data hold {constant}; numbers must be finite")


def _finite(text: str) -> float:
    number = float(text)
    if not math.isfinite(number):
        raise _Refused(f"its data hold the number {text[:40]}; double precision is allowed")
    return number


def _integer(text: str) -> int | float:
    number = _finite(text)
    return int(text) if abs(number) <= LARGEST_INTEGER else number


def _walked(value: Any) -> None:
    """Look at depth and texts, without recursion."""
    row, depth = [value], 0
    while row:
        depth += 1
        if depth > DEEPEST:
            raise _Refused(_TOO_DEEP)
        below: list[Any] = []
        for item in row:
            if isinstance(item, dict):
                for key in item:
                    _unicode(key)
                below += item.values()
            elif isinstance(item, list):
                below += item
            elif isinstance(item, str):
                _unicode(item)
        row = below


def _unicode(text: str) -> None:
    if not text.isascii():
        try:
            text.encode()
        except UnicodeEncodeError:
            raise _Refused(f"its data hold text that is not Unicode: {text[:40]!a}") from None
