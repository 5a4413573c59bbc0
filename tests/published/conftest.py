"""Published cases: their data, and how an expected value is held against one found.

Each file names its source, and whether its values are from memory; the tests state the source too.
"""

from __future__ import annotations

import json
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from calcsheet.core.chain import Chain
from calcsheet.core.model import Model
from calcsheet.core.storeys import Lateral

Planar = Callable[..., Model]


@pytest.fixture(scope="session")
def planar() -> Planar:
    """Build a model of one translation a level, lowest first; a sequence of stiffnesses makes a chain."""

    def build(
        mass: Sequence[float], lateral: Lateral | Sequence[float], height: Sequence[float] | None = None
    ) -> Model:
        n = len(mass)
        return Model(
            level=tuple(f"L{i + 1}" for i in range(n)),
            height=np.arange(1.0, n + 1.0) if height is None else np.asarray(height, dtype=float),
            mass=np.asarray(mass, dtype=float),
            level_of=tuple(range(n)),
            direction=("x",),
            influence=np.ones((1, n)),
            lateral=lateral if hasattr(lateral, "kind") else Chain(np.asarray(lateral, dtype=float)),
        )

    return build


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
