"""How a record is shown: paper, engine, and the fingerprint of all that turns its data into pages."""

from __future__ import annotations

import hashlib
from collections.abc import Iterator
from functools import cache
from importlib.metadata import version
from importlib.resources import files
from importlib.resources.abc import Traversable
from typing import Any

from calcsheet.steps.serial import fingerprint

DRAWS = ("matplotlib", "jinja2", "markupsafe", "mistune", "bleach", "latex2mathml", "ziamath", "fonttools", "pypdf")
"""Libraries whose version may show in print."""
SOURCES = ("units.py", "steps", "render", "record")
NOT_PRINTING = (
    "record/check",
    *(
        f"record/{name}.py"
        for name in (
            "answering",
            "commenting",
            "comparison",
            "execute",
            "exporter",
            "issue",
            "opened",
            "place",
            "recordfile",
            "register",
            "rules",
            "schema",
            "sign",
            "strictjson",
            "tables",
        )
    ),
    "record/record.schema.json",
)
"""Sources among these that no page is made with."""
TEXTS = (".py", ".css", ".j2", ".svg", ".json", ".txt")


def layout_of(paper: str, engine: str = "") -> dict[str, Any]:
    """The layout of a record made here and now.

    Parameters
    ----------
    paper : {"a4", "letter"}
        Paper size.
    engine : str
        Name and version of the program that makes the PDF; empty where none is made.

    Returns
    -------
    dict
        paper; engine; code, the SHA-256 of the sources that print (template, style, renderers, fonts); libraries, their
        versions. Two records of one layout print alike from like data.
    """
    return {"paper": paper, "engine": engine, "code": code(), "libraries": {name: version(name) for name in DRAWS}}


@cache
def code() -> str:
    """SHA-256 of the program's sources that print a record, with line ends as on POSIX."""
    root = files("calcsheet")
    found = {}
    for name in SOURCES:
        for path, source in _sources(root / name, name):
            data = source.read_bytes()
            found[path] = hashlib.sha256(data.replace(b"\r\n", b"\n") if path.endswith(TEXTS) else data).hexdigest()
    return fingerprint(found)


def _sources(place: Traversable, path: str) -> Iterator[tuple[str, Traversable]]:
    if path in NOT_PRINTING:
        return
    if place.is_file():
        yield path, place
    elif not place.name.startswith(("__pycache__", ".")):
        for child in place.iterdir():
            if not (child.is_file() and child.name.endswith((".pyc", ".pyo"))):
                yield from _sources(child, f"{path}/{child.name}")
