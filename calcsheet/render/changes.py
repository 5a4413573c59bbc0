"""View of what changed since an earlier revision: conclusions, headline results, inputs."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from html import escape
from typing import Any

from calcsheet.render.numbers import decimals_for, decimals_given, heading, number, text
from calcsheet.render.symbols import symbols
from calcsheet.render.table import Column, table, words
from calcsheet.render.view import Rendered, View, system_of
from calcsheet.render.words import outcome
from calcsheet.steps.compare import Changes, ConclusionChange, HeadlineChange, InputChange, compared, facts_of, placed
from calcsheet.steps.earlier import Earlier
from calcsheet.steps.given import Given
from calcsheet.steps.headlines import Conclusion, Headline
from calcsheet.steps.serial import from_json
from calcsheet.steps.step import Payload
from calcsheet.units import display

OUTCOMES = ("passes", "exceeds", "judgement", "not assessed")
NONE = "–"
CHANGED, WHOLE = 4, 7
"""Columns beside the level that one table holds: of "before → now", and of one number each."""
MANY = 8
"""Columns of one matrix from which it is summed up in words."""
SHORT = 12
"""Digits of a fingerprint in print."""


def render(payloads: Mapping[str, Payload], key: str, options: Mapping[str, Any]) -> Rendered:
    earlier = from_json(Earlier, payloads[key]["inputs"])
    if not earlier.revision:
        return Rendered("<p>First issue: nothing to compare.</p>")
    held_up = next((p for p in payloads.values() if p["state"] != "ok"), None)
    if held_up is not None:
        return Rendered(
            f"<p>Not compared: {escape(held_up['kind'])} is {held_up['state']}: {escape(held_up['why'])}.</p>"
        )
    changes = compared(placed(earlier.facts, f"/{key}/inputs/facts"), facts_of(payloads))
    system = system_of(payloads)
    parts = (_against(earlier), _conclusions(changes), _headlines(changes, system), _inputs(changes, system))
    return Rendered("".join(parts))


def _against(earlier: Earlier) -> str:
    signed = f" ({escape('; '.join(earlier.signatures))})" if earlier.signatures else ""
    names = escape(", ".join(earlier.drafts))
    after = f", passing over draft{'s' if len(earlier.drafts) > 1 else ''} {names} issued after it" if names else ""
    prints = ", ".join(
        f"{escape(name)} <code>{escape(earlier.fingerprints[name][:SHORT])}</code>"
        for name in ("inputs", "results")
        if name in earlier.fingerprints
    )
    return (
        f"<p>Against revision {escape(earlier.revision)} of {escape(earlier.date)}, {escape(earlier.status)}{signed}{after}"
        f"{f'; its fingerprints: {prints}' if prints else ''}.</p>"
    )


# ---- conclusions and results -----------------------------------------------------------------------------------------


def _conclusions(changes: Changes) -> str:
    title, rows = flipped(changes)
    if not rows:
        return f"<p>{title}.</p>"
    return table(
        (
            Column("conclusion", tuple(symbols(c.one.label) for c in rows), numeric=False),
            Column("before", tuple(_word(c.before) for c in rows), numeric=False),
            Column("now", tuple(_word(c.now) for c in rows), numeric=False),
        ),
        kind="words",
        caption=title,
    )


def flipped(changes: Changes) -> tuple[str, list[ConclusionChange]]:
    """Heading of the conclusions that changed, and these: first what is another now, then what is new or gone."""
    rows = sorted(changes.conclusions, key=lambda c: c.before is None or c.now is None)
    if not rows:
        return "No conclusion flipped", rows
    alone = any(c.before is None or c.now is None for c in rows)
    return "Conclusions that flipped" + (", are new or gone" if alone else ""), rows


def _word(conclusion: Conclusion | None) -> str:
    if conclusion is None:
        return NONE
    if conclusion.word in OUTCOMES:
        return outcome(conclusion.word)
    return escape(conclusion.word) if conclusion.quoted else symbols(conclusion.word)


def _headlines(changes: Changes, system: str) -> str:
    rows = changes.headlines
    if all(h.same for h in rows):
        return "<p>No headline result changed.</p>"
    return table(
        (
            Column("result", tuple(symbols(h.one.label) for h in rows), numeric=False),
            Column("before", tuple(_result(h, h.before, system) for h in rows)),
            Column("now", tuple(_result(h, h.now, system) for h in rows)),
            Column("change", tuple(change_of(h) for h in rows)),
        ),
        kind="values",
        caption="Headline results; change as a share of the value before",
    )


def _result(change: HeadlineChange, one: Headline | None, system: str) -> str:
    if one is None:
        return NONE
    return number(one.value, one.quantity, system, one.at, decimals=result_decimals(change, system))


def result_decimals(change: HeadlineChange, system: str) -> int:
    """Decimals of a headline result, the same before and now."""
    how = display(change.one.quantity, system)
    shown = [how.of(h.value) for h in (change.before, change.now) if h is not None]
    if change.one.quantity == "count":
        return 0
    return 1 if change.one.quantity == "share" else decimals_for(shown, how.digits)


def change_of(change: HeadlineChange) -> str:
    """The change of a headline result in words."""
    if change.before is None or change.now is None:
        return "new" if change.before is None else "gone"
    if change.same:
        return "none"
    if change.one.quantity == "count":
        return signed(change.now.value - change.before.value, 0)
    if change.change is None:
        return "from 0"
    percent = 100.0 * change.change
    if abs(percent) < 0.005:
        return "below 0.01 %"
    return f"{signed(percent, 1 if abs(percent) >= 1.0 else 2)} %"


def signed(value: float, decimals: int) -> str:
    """A number with its sign."""
    shown = text(value, decimals)
    return f"+{shown}" if value > 0.0 else shown


# ---- inputs ----------------------------------------------------------------------------------------------------------


def _inputs(changes: Changes, system: str) -> str:
    if changes.same_inputs:
        return "<p>No input changed.</p>"
    summed, columns = split(changes)
    parts = [f"<p>{escape(sentence)}</p>" for sentence in (*of_levels(changes), *map(summary, summed.values()))]
    whole = {*changes.added, *changes.removed}
    for caption, width, alone in (
        ("Storeys that changed", CHANGED, False),
        ("Levels added or removed", WHOLE, True),
    ):
        some = {key: [c for c in column if (c.one.level in whole) == alone] for key, column in columns.items()}
        keys = [key for key in some if some[key]]
        if keys and not alone:
            parts.append('<p class="below">Storeys before → now; what has not changed is left blank.</p>')
        for first in range(0, len(keys), width):
            held = {key: some[key] for key in keys[first : first + width]}
            parts.append(_storeys(changes, held, system, caption))
    others = [c for c in changes.inputs if not c.one.level]
    if others:
        parts.append(
            table(
                (
                    words("input", [c.one.label for c in others]),
                    Column("before", tuple(_side(c, c.before, system) for c in others), numeric=False),
                    Column("now", tuple(_side(c, c.now, system) for c in others), numeric=False),
                ),
                kind="words",
                caption="Other inputs that changed",
            )
        )
    return "".join(parts)


def of_levels(changes: Changes) -> list[str]:
    """Sentences on levels added, removed, and in another order."""
    said = [
        f"Level{'s' if len(names) > 1 else ''} {word}: {', '.join(names)}."
        for word, names in (("added", changes.added), ("removed", changes.removed))
        if names
    ]
    return [*said, "The levels of both stand in another order."] if changes.reordered else said


Columns = dict[str, list[InputChange]]


def split(changes: Changes) -> tuple[Columns, Columns]:
    """Inputs of levels that changed: matrices to be summed up in words, by name; and columns of a table, by key."""
    columns: Columns = {}
    for change in changes.inputs:
        if change.one.level:
            columns.setdefault(change.one.key, []).append(change)
    matrices: dict[str, list[str]] = {}
    for key in columns:
        if ", column " in key:
            matrices.setdefault(key.partition(", column ")[0], []).append(key)
    wide = {name: keys for name, keys in matrices.items() if len(keys) > MANY}
    summed = {name: [c for key in keys for c in columns.pop(key)] for name, keys in wide.items()}
    return summed, columns


def summary(entries: Sequence[InputChange]) -> str:
    """One sentence on a matrix that changed in many columns."""
    name = entries[0].one.label.partition(", column ")[0]
    shares = [
        100.0 * (c.now.number - c.before.number) / c.before.number
        for c in entries
        if c.before is not None and c.now is not None and c.before.number and c.now.number is not None
    ]
    ends = dict.fromkeys(f"{signed(share, 1)} %" for share in (min(shares), max(shares))) if shares else ()
    by = f", by {' to '.join(ends)}" if ends else ""
    return f"{name[0].upper()}{name[1:]}: {len(entries)} entries changed{by}."


def _storeys(changes: Changes, columns: Columns, system: str, caption: str) -> str:
    """Levels, roof first, with what changed in some columns."""
    held = {key: {c.one.level: c for c in some} for key, some in columns.items()}
    rows = [level for level in reversed(changes.levels) if any(level in some for some in held.values())]
    state = dict.fromkeys(changes.added, " (added)") | dict.fromkeys(changes.removed, " (removed)")
    cells = [words("level", [level + state.get(level, "") for level in rows])]
    for key, some in columns.items():
        one = some[0].one
        places = input_decimals(some, system)
        shown = tuple(_cell(held[key].get(level), level in state, system, places) for level in rows)
        cells.append(Column(heading(one.label, one.quantity, system), shown))
    return table(cells, kind="values", caption=caption)


def _cell(change: InputChange | None, whole: bool, system: str, places: int) -> str:
    if change is None:
        return ""
    if whole:
        return _given(change.one, system, places, unit=False)
    places = apart(change, system, places)
    before, now = (NONE if g is None else _given(g, system, places, unit=False) for g in (change.before, change.now))
    return f"{before} → {now}"


def _side(change: InputChange, one: Given | None, system: str) -> str:
    return (
        NONE if one is None else _given(one, system, apart(change, system, input_decimals([change], system)), unit=True)
    )


def _given(one: Given, system: str, places: int, unit: bool) -> str:
    if one.number is None:
        return escape(one.text)
    return number(one.number, one.quantity, system, one.at, decimals=places, unit=unit)


def input_decimals(column: Sequence[InputChange], system: str) -> int:
    """Decimals of a column of inputs that show every digit given."""
    sides = [g for c in column for g in (c.before, c.now) if g is not None and g.number is not None]
    return decimals_given([display(g.quantity, system).of(g.number) for g in sides if g.number is not None])


def apart(change: InputChange, system: str, places: int) -> int:
    """So many decimals that what changed is seen to differ."""
    sides = [g for g in (change.before, change.now) if g is not None and g.number is not None]
    shown = [display(g.quantity, system).of(g.number) for g in sides if g.number is not None]
    if len(shown) == 2 and shown[0] != shown[1]:
        while text(shown[0], places) == text(shown[1], places) and places < 15:
            places += 1
    return places


def covers(payloads: Mapping[str, Payload], key: str) -> Any:
    """What the view shows: the earlier revision, and the facts of this one by their names."""
    facts = facts_of(payloads)
    return {
        "earlier": payloads[key],
        "inputs": {f"{g.level}/{g.key}": g.text if g.number is None else g.number for g in facts.inputs},
        "headlines": {h.key: h.value for h in facts.headlines},
        "conclusions": {c.key: c.word for c in facts.conclusions},
    }


CHANGES = View("what changed", "What changed", "earlier", render, covers=covers)
