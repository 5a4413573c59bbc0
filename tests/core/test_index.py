"""The formula index names every formula."""

from __future__ import annotations

import importlib
import pkgutil
from types import FunctionType

import pytest

import calcsheet.core
from calcsheet.core import FORMULAS

HELPERS = {"arrays.readonly", "arrays.positive", "arrays.agrees", "codes.edition.key", "codes.common.listed"}
"""Public functions that compute nothing of the method."""
MODULES = [importlib.import_module(m.name) for m in pkgutil.walk_packages(calcsheet.core.__path__, "calcsheet.core.")]


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


def test_the_index_is_complete():
    assert functions().keys() - HELPERS - {f.function for f in FORMULAS} == set()


@pytest.mark.parametrize("formula", FORMULAS, ids=lambda f: f.symbol)
def test_an_entry_resolves_and_has_a_source(formula):
    assert callable(pkgutil.resolve_name(f"calcsheet.core.{formula.function}"))
    assert formula.symbol.strip()
    assert formula.source.strip()


def test_no_symbol_is_listed_twice():
    symbols = [f.symbol for f in FORMULAS]
    assert len(symbols) == len(set(symbols))
