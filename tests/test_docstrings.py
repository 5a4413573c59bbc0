"""Docstrings name what a function takes: in the core always, elsewhere wherever they have a section for it."""

from __future__ import annotations

import importlib
import inspect
import pkgutil
import re
from collections.abc import Iterator
from typing import Any

import pytest

import calcsheet

SECTION = re.compile(r"^Parameters\n-+\n(.*?)(?=^\S[^\n]*\n-+$|\Z)", re.DOTALL | re.MULTILINE)
NAMES = re.compile(r"^([\w*][\w*, ]*?)(?: : .*)?$", re.MULTILINE)


def defined(holder: Any, module: str) -> Iterator[tuple[str, Any]]:
    """Public functions, classes and methods of a module."""
    for name, item in vars(holder).items():
        item = getattr(item, "__func__", item)
        if name.startswith("_") or getattr(item, "__module__", None) != module:
            continue
        if inspect.isfunction(item):
            yield f"{module}.{item.__qualname__}", item
        elif inspect.isclass(item):
            yield f"{module}.{item.__qualname__}", item
            yield from defined(item, module)


MODULES = [m.name for m in pkgutil.walk_packages(calcsheet.__path__, "calcsheet.") if "__main__" not in m.name]
PUBLIC = dict(found for name in MODULES for found in defined(importlib.import_module(name), name))
WITH_SECTION = {name: item for name, item in PUBLIC.items() if SECTION.search(inspect.getdoc(item) or "")}
CORE = {name: item for name, item in PUBLIC.items() if name.startswith("calcsheet.core")}


def documented(item: Any) -> set[str]:
    section = SECTION.search(inspect.getdoc(item) or "")
    names = NAMES.findall(section.group(1)) if section else []
    return {name.strip(" *") for line in names for name in line.split(",")}


def taken(item: Any) -> dict[str, bool]:
    """Arguments by name, and whether each is one of its own rather than the rest of them."""
    if inspect.isclass(item) and item.__init__ is object.__init__:
        return {}
    rest = (inspect.Parameter.VAR_POSITIONAL, inspect.Parameter.VAR_KEYWORD)
    arguments = inspect.signature(item).parameters.items()
    return {name: p.kind not in rest for name, p in arguments if name not in ("self", "cls")}


@pytest.mark.parametrize("name", sorted(WITH_SECTION))
def test_a_section_names_all_that_is_taken(name):
    arguments = taken(WITH_SECTION[name])
    assert {a for a, own in arguments.items() if own} <= documented(WITH_SECTION[name]) <= arguments.keys()


@pytest.mark.parametrize("name", sorted(CORE))
def test_the_core_documents_all_that_is_taken(name):
    item = CORE[name]
    words = inspect.getdoc(item)  # that of the method it overrides, where it has none of its own
    assert words
    if inspect.isfunction(item) and "." in item.__qualname__:  # a method may name them in its sentence
        assert {a for a in taken(item) if re.search(rf"\b{a}\b", words)} == taken(item).keys()
    else:
        assert documented(item) == taken(item).keys()
