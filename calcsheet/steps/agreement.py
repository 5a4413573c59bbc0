"""Two results held against each other, field by field, as each field declares."""

from __future__ import annotations

import dataclasses
from collections.abc import Iterator, Mapping
from typing import Any

import numpy as np
from scipy import linalg

from calcsheet.core.arrays import Agreement, Array
from calcsheet.core.modes import groups

SAME_GROUP = 1e-4
"""Relative gap of frequencies below which two runs may choose different shapes for one group."""


@dataclasses.dataclass(frozen=True)
class Difference:
    """One field in which two runs differ.

    Parameters
    ----------
    step : str
        Key of the step.
    field : str
        The field, such as "result/models/0/modes/omega".
    stored, found : str
        What the record holds and what the replay gives.
    allowed : str
        How closely they should agree.
    """

    step: str
    field: str
    stored: str
    found: str
    allowed: str

    def __str__(self) -> str:
        return f"{self.step}, {self.field}: stored {self.stored}, replayed {self.found}; {self.allowed}"


def differences(stored: Any, found: Any, at: str) -> Iterator[tuple[str, str, str, str]]:
    """Field, stored value, found value and rule wherever two results disagree.

    Parameters
    ----------
    stored, found : object
        Results of one type.
    at : str
        Place of the results, put before each field.
    """
    if type(stored) is not type(found):
        yield at, type(stored).__name__, type(found).__name__, "must be of one type"
    elif dataclasses.is_dataclass(stored):
        for field in dataclasses.fields(stored):
            a, b, place = getattr(stored, field.name), getattr(found, field.name), f"{at}/{field.name}"
            rule = field.metadata.get("agrees")
            if rule is None:
                yield from differences(a, b, place)
            else:
                yield from _ruled(rule, stored, found, a, b, place)
    elif isinstance(stored, tuple):
        if len(stored) != len(found):
            yield at, f"{len(stored)} entries", f"{len(found)} entries", "must be as many"
        else:
            for i, (a, b) in enumerate(zip(stored, found, strict=True)):
                yield from differences(a, b, f"{at}/{i}")
    elif isinstance(stored, Mapping):
        for key in sorted({*stored, *found}):
            yield from differences(stored.get(key), found.get(key), f"{at}/{key}")
    elif isinstance(stored, np.ndarray):
        if not np.array_equal(stored, found):
            yield at, "an array", "another", "must be equal"
    elif stored != found:
        yield at, repr(stored), repr(found), "must be equal"


def _ruled(rule: Agreement, old: Any, new: Any, a: Any, b: Any, at: str) -> Iterator[tuple[str, str, str, str]]:
    a, b = np.asarray(a, dtype=float), np.asarray(b, dtype=float)
    if a.shape != b.shape:
        yield at, f"shape {a.shape}", f"shape {b.shape}", "must be of one shape"
        return
    if rule.below is not None:
        if not np.array_equal(a, b) and max(a.max(initial=0.0), b.max(initial=0.0)) > rule.below:
            yield at, f"{a.max():.3g}", f"{b.max():.3g}", f"must be equal or both at most {rule.below:g}"
        return
    if rule.subspace is not None:
        apart = _apart(a, b, getattr(old, rule.subspace))
        if apart > rule.atol:
            yield (
                at,
                "shapes",
                f"shapes apart by {apart:.2g}",
                f"must be the same basis, but for turns, within {rule.atol:g}",
            )
        return
    grouped = None if rule.group is None else _split(getattr(old, rule.group))
    if grouped is not None:
        a, b = _summed(rule, old, a, grouped), _summed(rule, new, b, grouped)
    excess = np.abs(a - b) - (rule.atol + rule.rtol * np.abs(a))
    if (excess > 0.0).any():
        i = np.unravel_index(np.argmax(excess), a.shape)
        place = i if grouped is None else (*i[:-1], grouped[i[-1]][0])  # a group goes by its first mode
        allowed = f"must agree within {rule.rtol:g} of the value plus {rule.atol:g}"
        yield "/".join([at, *map(str, place)]), f"{a[i]:.12g}", f"{b[i]:.12g}", allowed


def _split(omega: Array) -> list[list[int]]:
    """Columns by group of frequencies."""
    grouped = {g[0] - 1: [m - 1 for m in g] for g in groups(omega, SAME_GROUP)}
    inside = {m for g in grouped.values() for m in g[1:]}
    return [grouped.get(i, [i]) for i in range(omega.size) if i not in inside]


def _apart(a: Array, b: Array, omega: Array) -> float:
    """Largest entry, relative, by which each group's columns differ once turned onto each other: their scale counts."""

    def gap(old: Array, new: Array) -> float:
        turn, _ = linalg.orthogonal_procrustes(new, old)
        return float(np.abs(new @ turn - old).max() / np.abs(old).max())

    return max(gap(a[:, g], b[:, g]) for g in _split(omega))


def _summed(rule: Agreement, record: Any, values: Array, grouped: list[list[int]]) -> Array:
    """What a rule compares of each group: sums over its members, weighted or squared, or the running sum at its end."""
    if rule.running:
        return values[..., [g[-1] for g in grouped]]
    terms = (values**2 if rule.squared else values) * (getattr(record, rule.weight) if rule.weight else 1.0)
    return np.stack([terms[..., g].sum(axis=-1) for g in grouped], axis=-1)
