"""Published cases: their data, and how an expected value is held against one found.

Each file names its source, and whether its values are from memory; the tests state the source too.
"""

from __future__ import annotations

import json
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np
import pytest


@dataclass(frozen=True)
class Case:
    """A published case: its inputs, and its expected values, each with tolerance."""

    inputs: dict[str, Any]
    expected: dict[str, Any]

    def meets(self, key: str, found: Any) -> None:
        """Assert that what is found meets the expected value `key` within its printed tolerance."""
        wanted = self.expected[key]
        tolerance = {"rtol": wanted["tol"] if wanted["kind"] == "rel" else 0.0}
        tolerance["atol"] = wanted["tol"] if wanted["kind"] == "abs" else 0.0
        value = np.asarray(wanted["value"], dtype=float)
        assert np.shape(found) == value.shape
        np.testing.assert_allclose(found, value, **tolerance, err_msg=key)


@pytest.fixture(scope="session")
def case() -> Callable[[str], Case]:
    """A case by the name of its file."""

    def read(name: str) -> Case:
        data = json.loads((Path(__file__).parent / "cases" / f"{name}.json").read_text(encoding="utf-8"))
        return Case(data["inputs"], data["expected"])

    return read
