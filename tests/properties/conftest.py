"""Buildings drawn at random, and a profile that keeps this folder quick and its draws the same on every run."""

from __future__ import annotations

import pytest
from hypothesis import settings

settings.register_profile("calcsheet", max_examples=60, deadline=None, derandomize=True)


@pytest.fixture(scope="session", autouse=True)
def profile():
    """Use the profile."""
    settings.load_profile("calcsheet")
