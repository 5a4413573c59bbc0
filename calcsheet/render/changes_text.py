"""What changed, as words for a terminal."""

from __future__ import annotations

from collections.abc import Iterator

from calcsheet.render.changes import (
    NONE,
    apart,
    change_of,
    flipped,
    input_decimals,
    of_levels,
    result_decimals,
    split,
    summary,
)
from calcsheet.render.numbers import text
from calcsheet.steps.compare import Changes, InputChange
from calcsheet.steps.given import Given
from calcsheet.units import display


def as_text(changes: Changes, system: str, title: str = "") -> str:
    """What changed in lines of text, without any character that would steer a terminal.

    Parameters
    ----------
    changes : Changes
        What changed.
    system : {"SI", "US"}
        System of units.
    title : str
        A line put before all others.
    """
    lines = (
        *([title] if title else ()),
        *_conclusions(changes),
        *_headlines(changes, system),
        *_inputs(changes, system),
    )
    return "\n".join("".join(c if c.isprintable() else "?" for c in line) for line in lines)


def _conclusions(changes: Changes) -> Iterator[str]:
    title, rows = flipped(changes)
    if not rows:
        yield f"{title}."
        return
    yield title
    width = max(len(c.one.label) for c in rows)
    for c in rows:
        before, now = (NONE if side is None else side.word for side in (c.before, c.now))
        yield f"  {c.one.label:{width}}  {before} → {now}"


def _headlines(changes: Changes, system: str) -> Iterator[str]:
    rows = [h for h in changes.headlines if not h.same]
    if not rows:
        yield "No headline result changed."
        return
    yield "Headline results that changed"
    cells = []
    for h in rows:
        places = result_decimals(h, system)
        sides = (NONE if s is None else _united(s.value, s.quantity, system, places) for s in (h.before, h.now))
        cells.append((h.one.label, *sides, change_of(h)))
    label, before, now, change = (max(map(len, column)) for column in zip(*cells, strict=True))
    for a, b, c, d in cells:
        yield f"  {a:{label}}  {b:>{before}} → {c:>{now}}  {d:>{change}}"


def _inputs(changes: Changes, system: str) -> Iterator[str]:
    if changes.same_inputs:
        yield "No input changed."
        return
    yield "Inputs that changed"
    summed, columns = split(changes)
    for sentence in (*of_levels(changes), *map(summary, summed.values())):
        yield f"  {sentence}"
    places = {key: input_decimals(column, system) for key, column in columns.items()}
    by_level = {
        level: [c for column in columns.values() for c in column if c.one.level == level] for level in changes.levels
    }
    whole = {*changes.added, *changes.removed}
    for level in reversed(changes.levels):
        said = [f"{c.one.label} {_both(c, system, places[c.one.key], level in whole)}" for c in by_level[level]]
        if said:
            yield f"  level {level}: {'; '.join(said)}"
    for c in changes.inputs:
        if not c.one.level:
            yield f"  {c.one.label}: {_both(c, system, input_decimals([c], system), whole=False)}"


def _both(change: InputChange, system: str, places: int, whole: bool) -> str:
    if whole:  # its level is new or gone
        return _given(change.one, system, places)
    places = apart(change, system, places)
    before, now = (NONE if side is None else _given(side, system, places) for side in (change.before, change.now))
    return f"{before} → {now}"


def _given(one: Given, system: str, places: int) -> str:
    return one.text if one.number is None else _united(one.number, one.quantity, system, places)


def _united(value: float, quantity: str, system: str, places: int) -> str:
    how = display(quantity, system)
    return f"{text(how.of(value), places)} {how.symbol}".replace("\u202f", " ").rstrip()
