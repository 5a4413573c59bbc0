"""The parts of a notebook that a record prints, and their plain JSON."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any


@dataclass(frozen=True)
class Words:
    """A markdown cell: its source and attachments."""

    source: str
    attachments: Mapping[str, Mapping[str, str]] = field(default_factory=dict)


@dataclass(frozen=True)
class Shown:
    """A block: name of its view, key of its step, options."""

    view: str
    step: str
    options: Mapping[str, Any]


@dataclass(frozen=True)
class Own:
    """A cell of the engineer's own: its source and what `own.printable` keeps of its outputs. It is not replayed."""

    source: str
    outputs: tuple[Mapping[str, str], ...]


Part = Words | Shown | Own


def to_plain(part: Part) -> dict[str, Any]:
    """Plain JSON of a part."""
    if isinstance(part, Words):
        kept = {name: dict(kinds) for name, kinds in part.attachments.items()}
        return {"words": part.source, "attachments": kept}
    if isinstance(part, Shown):
        return {"view": part.view, "step": part.step, "options": dict(part.options)}
    return {"own": part.source, "outputs": [dict(output) for output in part.outputs]}


def from_plain(data: Mapping[str, Any]) -> Part:
    """The part that `to_plain` made `data` from."""
    if "words" in data:
        return Words(data["words"], data["attachments"])
    if "view" in data:
        return Shown(data["view"], data["step"], data["options"])
    return Own(data["own"], tuple(data["outputs"]))
