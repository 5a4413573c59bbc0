"""Buildings drawn at random, and a profile that keeps this folder quick and its draws the same on every run."""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np
import pytest
from hypothesis import settings

from calcsheet.core.chain import Chain
from calcsheet.core.model import Model
from calcsheet.core.storeys import Lateral

settings.register_profile("calcsheet", max_examples=60, deadline=None, derandomize=True)


@pytest.fixture(scope="session", autouse=True)
def profile():
    """Use the profile."""
    settings.load_profile("calcsheet")


@pytest.fixture(scope="session")
def planar() -> Callable[..., Model]:
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
