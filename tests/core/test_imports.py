"""What an import brings along, each in a fresh process."""

from __future__ import annotations

import subprocess
import sys

import pytest

FRONT = ("ipywidgets", "anywidget", "IPython", "matplotlib", "nbformat", "nbconvert", "pydantic", "weasyprint")


def loaded(statement: str) -> set[str]:
    code = f"import sys\n{statement}\nprint('\\n'.join(sys.modules))"
    return set(subprocess.run([sys.executable, "-c", code], check=True, capture_output=True, text=True).stdout.split())


@pytest.fixture(scope="module")
def with_core():
    modules = "alternate, arrays, bounds, chain, evidence, matrix, model, modes, participation, storeys, totals"
    return loaded(f"from calcsheet.core import {modules}")


@pytest.mark.parametrize("module", [*FRONT, "calcsheet.units", "calcsheet.job", "calcsheet.steps", "calcsheet.render"])
def test_the_core_loads_no_front_end_and_no_units(with_core, module):
    assert "calcsheet.core.evidence" in with_core
    assert module not in with_core


def test_the_package_loads_nothing_before_a_block_is_named():
    names = loaded("import calcsheet; assert 'ModeSolver' in dir(calcsheet)")
    assert not names & {*FRONT, "numpy", "scipy", "calcsheet.blocks", "calcsheet.core"}
    assert "calcsheet.blocks" in loaded("from calcsheet import ModeSolver")
