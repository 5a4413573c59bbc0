"""What a what-if shows beside the saved model; no part of any record."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from html import escape
from typing import Any

from calcsheet.core.whatif import Answered
from calcsheet.render.numbers import decimals_for, heading, text
from calcsheet.render.table import Column, table
from calcsheet.render.view import Rendered, View
from calcsheet.steps.step import Payload
from calcsheet.steps.whatif import Factors
from calcsheet.units import display

NOTICE = "A what-if is not part of the record."
SHOWN = 6
"""Modes listed in each direction, at most."""
LAW = (
    "With every mass × m and every stiffness in a direction × k, each period in it is exactly √(m/k) times as long and the "
    "effective-mass shares stay as they are. The numbers below are solved anew, not taken from this law."
)


def compared(saved: Sequence[Answered], now: Sequence[Answered], factors: Factors, waits: str, system: str) -> str:
    """HTML of what the multiplied model answers beside the saved one.

    Parameters
    ----------
    saved, now : sequence of Answered
        By direction, of the saved and of the multiplied model.
    factors : Factors
        The factors asked about.
    waits : str
        Why there is no base shear though a demand is asked for; may be empty.
    system : {"SI", "US"}
        System of units.
    """
    parts = [f"<p>{LAW}</p>"]
    parts += [_modes(a, b, factors, system) for a, b in zip(saved, now, strict=True)]
    if any(a.base_shear is not None for a in saved):
        parts.append(_base_shears(saved, now, system))
    if waits:
        parts.append(f'<p class="calcsheet-note" data-kind="waiting">No base shear: {escape(waits)}</p>')
    return "".join(parts)


def in_short(saved: Sequence[Answered], now: Sequence[Answered]) -> str:
    """The first periods in one sentence, as text."""
    said = []
    for a, b in zip(saved, now, strict=True):
        pair = [float(b.period[0]), float(a.period[0])]
        new, old = (text(v, decimals_for(pair, display("period", "SI").digits)) for v in pair)
        said.append(f"{new} s in {a.direction} (saved: {old} s)")
    return f"First period {' and '.join(said)}."


def _modes(saved: Answered, now: Answered, factors: Factors, system: str) -> str:
    d, count = saved.direction, min(saved.period.size, SHOWN)
    mass, stiffness = factors.mass, factors.along(d)
    columns = [
        Column("mode", tuple(str(i + 1) for i in range(count))),
        *_pair("period T", saved.period[:count].tolist(), now.period[:count].tolist(), "period", system),
        _ratio(saved.period[:count].tolist(), now.period[:count].tolist()),
        *_pair(f"effective mass {d}", saved.share[:count].tolist(), now.share[:count].tolist(), "share", system),
    ]
    law = f"√({mass:g}/{stiffness:g}) = {text(math.sqrt(mass / stiffness), 4)}"
    more = f"; the first {count} of {saved.period.size} modes" if count < saved.period.size else ""
    title = f"Direction {d}: masses × {mass:g}, stiffnesses × {stiffness:g}; √(m/k) = {law}{more}"
    return table(columns, kind="values", caption=title)


def _base_shears(saved: Sequence[Answered], now: Sequence[Answered], system: str) -> str:
    old, new = ([a.base_shear or 0.0 for a in answers] for answers in (saved, now))
    columns = [
        Column("direction", tuple(escape(a.direction) for a in saved), numeric=False),
        *_pair("modal base shear", old, new, "force", system),
        _ratio(old, new),
    ]
    return table(columns, kind="values", caption="Modal base shear, combined and not scaled")


def _pair(name: str, saved: Sequence[float], now: Sequence[float], quantity: str, system: str) -> list[Column]:
    how = display(quantity, system)
    old, new = ([how.of(v) for v in values] for values in (saved, now))
    places = 1 if quantity == "share" else decimals_for([*old, *new], how.digits)
    return [
        Column(heading(f"{name}, {word}", quantity, system), tuple(text(v, places) for v in values))
        for word, values in (("saved", old), ("what if", new))
    ]


def _ratio(saved: Sequence[float], now: Sequence[float]) -> Column:
    return Column("what if / saved", tuple(text(b / a, 4) if a else "" for a, b in zip(saved, now, strict=True)))


def _notice(payloads: Mapping[str, Payload], key: str, options: Mapping[str, Any]) -> Rendered:
    return Rendered(f"<p>{NOTICE}</p>")


WHAT_IF = View("what if", "What if", "modes", _notice, covers=lambda payloads, key: None, printed=False)
