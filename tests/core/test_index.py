"""The formula index names every formula, and the core's public names say what they take."""

from __future__ import annotations

import importlib
import inspect
import pkgutil
import re
from types import FunctionType

import pytest

import calcsheet.core
from calcsheet.core import FORMULAS

HELPERS = {"arrays.readonly", "arrays.positive", "arrays.agrees"}
"""Public functions that compute nothing of the method."""
MODULES = [importlib.import_module(m.name) for m in pkgutil.iter_modules(calcsheet.core.__path__, "calcsheet.core.")]


def public(module, kind):
    return {
        name: item
        for name, item in vars(module).items()
        if not name.startswith("_") and isinstance(item, kind) and item.__module__ == module.__name__
    }


def functions():
    """Public functions and methods by their dotted name in the core."""
    found = {}
    for module in MODULES:
        short = module.__name__.removeprefix("calcsheet.core.")
        found |= {f"{short}.{name}": item for name, item in public(module, FunctionType).items()}
        for owner, cls in public(module, type).items():
            methods = {name: item for name, item in vars(cls).items() if isinstance(item, FunctionType)}
            found |= {f"{short}.{owner}.{name}": item for name, item in methods.items() if not name.startswith("_")}
    return found


def classes():
    return {f"{m.__name__}.{name}": cls for m in [calcsheet.core, *MODULES] for name, cls in public(m, type).items()}


def test_the_index_is_complete():
    assert functions().keys() - HELPERS - {f.function for f in FORMULAS} == set()


@pytest.mark.parametrize("formula", FORMULAS, ids=lambda f: f.symbol)
def test_an_entry_resolves_and_has_a_source(formula):
    module, *path = formula.function.split(".")
    found = importlib.import_module(f"calcsheet.core.{module}")
    for name in path:
        found = getattr(found, name)
    assert callable(found)
    assert formula.symbol.strip()
    assert formula.source.strip()


def test_no_symbol_is_listed_twice():
    symbols = [f.symbol for f in FORMULAS]
    assert len(symbols) == len(set(symbols))


def parameters(documented) -> set[str]:
    """Names in the Parameters section of a docstring."""
    section = re.search(r"^Parameters\n-+\n(.*?)(?=^\S[^\n]*\n-+$|\Z)", inspect.getdoc(documented), re.S | re.M)
    names = re.findall(r"^([\w*][\w*, ]*?)(?: : .*)?$", section.group(1), re.M) if section else []
    return {name.strip(" *") for line in names for name in line.split(",")}


def arguments(item) -> set[str]:
    return {name for name in inspect.signature(item).parameters if name != "self"}


@pytest.mark.parametrize("name", sorted(functions()))
def test_a_function_documents_its_arguments(name):
    item = functions()[name]
    assert item.__doc__
    if name.count(".") == 1:  # a function of a module; a method may name them in its sentence
        assert parameters(item) == arguments(item)
    else:
        in_words = {a for a in arguments(item) if re.search(rf"\b{a}\b", item.__doc__)}
        assert in_words == arguments(item)


@pytest.mark.parametrize("name", sorted(classes()))
def test_a_record_documents_its_fields(name):
    cls = classes()[name]
    assert cls.__doc__
    taken = set() if cls.__init__ is object.__init__ else arguments(cls)
    assert parameters(cls) == taken
