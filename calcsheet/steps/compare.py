"""Two calculations held against each other: inputs, headline results, conclusions."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from typing import Any, Protocol, TypeVar

from calcsheet.steps.given import Given, inputs_of
from calcsheet.steps.headlines import Conclusion, Headline, Payloads, conclusions_of, headlines_of

EARLIER = "earlier"
"""Kind of the step that holds the facts of an earlier revision: no fact of this one."""
SAME_INPUT = 1e-12
"""Relative difference up to which two inputs are one: 12 significant digits."""
SAME_RESULT = 1e-7
"""Relative difference up to which two results are one: no printed digit tells them apart, another machine may."""


@dataclass(frozen=True)
class Facts:
    """What can be said of a calculation.

    Parameters
    ----------
    levels : tuple of str
        Its levels, lowest first, those at and below the effective base among them.
    inputs : tuple of Given
        Its inputs.
    headlines : tuple of Headline
        Its headline results.
    conclusions : tuple of Conclusion
        Its conclusions.
    """

    levels: tuple[str, ...]
    inputs: tuple[Given, ...]
    headlines: tuple[Headline, ...]
    conclusions: tuple[Conclusion, ...]


class _Pair:
    """A fact before and now; one of them may be missing."""

    before: Any
    now: Any

    @property
    def one(self) -> Any:
        """The present one, or what it was."""
        return self.before if self.now is None else self.now


@dataclass(frozen=True)
class InputChange(_Pair):
    """An input changed; added where there is none before, removed where there is none now."""

    before: Given | None
    now: Given | None


@dataclass(frozen=True)
class HeadlineChange(_Pair):
    """A headline result before and now.

    Parameters
    ----------
    before, now : Headline or None
        None where there is none.
    change : float or None
        What was added, as a share of the value before; None where one is missing, the value before is 0 or the
        share beyond what can be calculated.
    same : bool
        Whether both agree.
    """

    before: Headline | None
    now: Headline | None
    change: float | None
    same: bool


@dataclass(frozen=True)
class ConclusionChange(_Pair):
    """A conclusion that is another now; new where there is none before, gone where there is none now."""

    before: Conclusion | None
    now: Conclusion | None


@dataclass(frozen=True)
class Changes:
    """What changed between two calculations.

    Parameters
    ----------
    levels : tuple of str
        Levels of both, lowest first.
    added, removed : tuple of str
        Levels that only the present one has, and only the one before.
    reordered : bool
        Whether the levels of both stand in another order.
    inputs : tuple of InputChange
        Inputs that changed.
    headlines : tuple of HeadlineChange
        All headline results.
    conclusions : tuple of ConclusionChange
        Conclusions that flipped, are new or are gone.
    """

    levels: tuple[str, ...]
    added: tuple[str, ...]
    removed: tuple[str, ...]
    reordered: bool
    inputs: tuple[InputChange, ...]
    headlines: tuple[HeadlineChange, ...]
    conclusions: tuple[ConclusionChange, ...]

    @property
    def same_inputs(self) -> bool:
        """Whether no input changed."""
        return not (self.inputs or self.reordered)

    @property
    def same(self) -> bool:
        """Whether nothing changed."""
        return self.same_inputs and not self.conclusions and all(h.same for h in self.headlines)


def facts_of(payloads: Payloads) -> Facts:
    """The facts of a calculation: of its steps that are "ok".

    Parameters
    ----------
    payloads : mapping of str to payload
        Its steps by key, upstream first.
    """
    own = {key: p for key, p in payloads.items() if p["kind"] != EARLIER}
    storeys = (p["inputs"] for p in own.values() if p["kind"] == "storeys" and p["state"] == "ok")
    levels = [str(name) for s in storeys for name in (*(b["level"] for b in s["below"]), *s["level"])]
    return Facts(tuple(levels), inputs_of(own), headlines_of(own), conclusions_of(own))


def placed(facts: Facts, at: str) -> Facts:
    """Facts whose pointers lead to themselves, stored at JSON pointer `at`."""
    return replace(
        facts,
        inputs=tuple(
            replace(g, at=f"{at}/inputs/{i}/{'text' if g.number is None else 'number'}")
            for i, g in enumerate(facts.inputs)
        ),
        headlines=tuple(replace(h, at=f"{at}/headlines/{i}/value") for i, h in enumerate(facts.headlines)),
    )


def compared(before: Facts, now: Facts) -> Changes:
    """What changed from the facts of one calculation to those of another.

    Parameters
    ----------
    before, now : Facts
        Levels are told apart by their names: one that is renamed is removed and added.

    Returns
    -------
    Changes
    """
    added = tuple(name for name in now.levels if name not in before.levels)
    removed = tuple(name for name in before.levels if name not in now.levels)
    kept = [name for name in now.levels if name in before.levels]
    inputs = (InputChange(a, b) for a, b in _pairs(_by_level(before.inputs), _by_level(now.inputs)))
    conclusions = (ConclusionChange(a, b) for a, b in _pairs(_by_key(before.conclusions), _by_key(now.conclusions)))
    return Changes(
        levels=_merged(before.levels, now.levels),
        added=added,
        removed=removed,
        reordered=kept != [name for name in before.levels if name in now.levels],
        inputs=tuple(c for c in inputs if not _same_input(c.before, c.now)),
        headlines=tuple(_headline(a, b) for a, b in _pairs(_by_key(before.headlines), _by_key(now.headlines))),
        conclusions=tuple(c for c in conclusions if c.before is None or c.now is None or c.before.word != c.now.word),
    )


def _headline(before: Headline | None, now: Headline | None) -> HeadlineChange:
    if before is None or now is None:
        return HeadlineChange(before, now, None, same=False)
    share = math.inf if before.value == 0.0 else (now.value - before.value) / before.value
    change = share if math.isfinite(share) else None
    return HeadlineChange(before, now, change, math.isclose(before.value, now.value, rel_tol=SAME_RESULT))


def _same_input(before: Given | None, now: Given | None) -> bool:
    if before is None or now is None:
        return False
    if before.number is None or now.number is None:
        return before.number is now.number and before.text == now.text
    return math.isclose(before.number, now.number, rel_tol=SAME_INPUT)


def _merged(before: Sequence[str], now: Sequence[str]) -> tuple[str, ...]:
    """The levels of both, one that is gone above the one that it stood upon."""
    merged = list(now)
    for i, name in enumerate(before):
        if name not in merged:
            merged.insert(merged.index(before[i - 1]) + 1 if i else 0, name)
    return tuple(merged)


class _Keyed(Protocol):
    @property
    def key(self) -> str: ...


Fact = TypeVar("Fact")
Keyed = TypeVar("Keyed", bound=_Keyed)


def _by_key(facts: Iterable[Keyed]) -> dict[tuple[str, ...], Keyed]:
    return {(fact.key,): fact for fact in facts}


def _by_level(inputs: Iterable[Given]) -> dict[tuple[str, ...], Given]:
    return {(given.level, given.key): given for given in inputs}


def _pairs(
    before: Mapping[tuple[str, ...], Fact], now: Mapping[tuple[str, ...], Fact]
) -> Iterator[tuple[Fact | None, Fact | None]]:
    """What goes by the same key, in the present order; then what is gone."""
    for key, fact in now.items():
        yield before.get(key), fact
    for key, fact in before.items():
        if key not in now:
            yield fact, None
