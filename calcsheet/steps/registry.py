"""Every step by its kind."""

from __future__ import annotations

from collections.abc import Mapping

from calcsheet.steps.card import CARD
from calcsheet.steps.modes import MODES
from calcsheet.steps.participation import PARTICIPATION
from calcsheet.steps.step import Step
from calcsheet.steps.storeys import STOREYS

STEPS: Mapping[str, Step] = {step.kind: step for step in (CARD, STOREYS, MODES, PARTICIPATION)}
