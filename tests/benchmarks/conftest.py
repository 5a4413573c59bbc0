"""Ratios measured in one run, and the table of them at its end: `pytest tests/benchmarks`."""

from __future__ import annotations

import importlib.util
import statistics
import sys
from collections.abc import Callable
from pathlib import Path
from time import perf_counter

import pytest

# The server and the browser of the browser tests.
_place = Path(__file__).parents[1] / "browser" / "conftest.py"
_spec = importlib.util.spec_from_file_location("browser_fixtures", _place)
assert _spec is not None
assert _spec.loader is not None
_browser = importlib.util.module_from_spec(_spec)
sys.modules["browser_fixtures"] = _browser  # dataclasses look their module up
_spec.loader.exec_module(_browser)
chromium, lab, opener, new_job = _browser.chromium, _browser.lab, _browser.opener, _browser.new_job


@pytest.fixture(scope="module")
def flavour() -> str:
    """JupyterLab."""
    return "lab"


_ROWS: list[tuple[str, float, str]] = []


def medians(runs: int, *functions: Callable[[], object]) -> list[float]:
    """Median time [s] of each function, called in turns."""
    times: list[list[float]] = [[] for _ in functions]
    for _ in range(runs):
        for function, taken in zip(functions, times, strict=True):
            start = perf_counter()
            function()
            taken.append(perf_counter() - start)
    return [statistics.median(taken) for taken in times]


@pytest.fixture
def compare() -> Callable[..., list[float]]:
    """Median times of functions called in turns; each runs once before."""

    def measured(runs: int, *functions: Callable[[], object]) -> list[float]:
        for function in functions:
            function()
        return medians(runs, *functions)

    return measured


@pytest.fixture
def report() -> Callable[[str, float, str], None]:
    """Put a figure into the table."""

    def add(what: str, figure: float, limit: str) -> None:
        _ROWS.append((what, figure, limit))

    return add


def pytest_terminal_summary(terminalreporter: pytest.TerminalReporter) -> None:
    if _ROWS:
        terminalreporter.section("benchmarks")
    for what, figure, limit in _ROWS:
        terminalreporter.write_line(f"{what:<78}{figure:>8.2f}  {limit}")
