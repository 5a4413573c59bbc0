"""Whether this program can make a record's pages again, and which one can."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from calcsheet.record.layout import layout_of
from calcsheet.record.own import HTML
from calcsheet.record.pdf import NoEngine, choose_engine

MOST_CHARACTERS = 100_000


def same_layout(record: Mapping[str, Any]) -> bool:
    """Whether the sources and libraries that printed a record are this program's own."""
    layout = record["layout"]
    here = layout_of(layout["paper"], layout["engine"])
    return layout["code"] == here["code"] and layout["libraries"] == here["libraries"]


def too_long(record: Mapping[str, Any]) -> str:
    """Why a record's words are too long to be printed again for an unknown sender's sake, in a clause; "" where they aren't.

    Readers of markdown, equations and HTML take time that grows with the square of a text's length, where it is made to.
    """
    words = sum(len(part.get("words", "")) for part in record["notebook"])
    html = sum(len(output.get(HTML, "")) for part in record["notebook"] for output in part.get("outputs", ()))
    if max(words, html) <= MOST_CHARACTERS:
        return ""
    return (
        f"{words} characters of words and {html} of HTML outputs; at most {MOST_CHARACTERS} of each are printed again"
    )


def same_engine(record: Mapping[str, Any]) -> bool:
    """Whether the program that made a record's PDF is here, in the same version."""
    engine = record["layout"]["engine"]
    try:
        return bool(engine) and str(choose_engine(engine.partition(" ")[0])) == engine
    except NoEngine:
        return False


def to_install(record: Mapping[str, Any]) -> str:
    """What makes the pages of a record again, in a clause."""
    layout = record["layout"]
    libraries = layout["libraries"]
    here = layout_of(layout["paper"], layout["engine"])["libraries"]
    others = [f"{name} {libraries[name]}" for name in sorted(libraries) if here.get(name) != libraries[name]]
    if layout["engine"]:
        others.append(layout["engine"])
    beside = f" with {', '.join(others)}" if others else ""
    return f"made by {record['programme']}; install that version{beside} to have its pages made again and compared"
