"""Every step by its kind."""

from __future__ import annotations

from collections.abc import Mapping

from calcsheet.steps.actions import ACTIONS
from calcsheet.steps.basis import BASIS
from calcsheet.steps.card import CARD
from calcsheet.steps.demand import DEMAND
from calcsheet.steps.drift import DRIFT
from calcsheet.steps.earlier import EARLIER
from calcsheet.steps.masses import MASSES
from calcsheet.steps.modes import MODES
from calcsheet.steps.participation import PARTICIPATION
from calcsheet.steps.peaks import PEAKS
from calcsheet.steps.plan import PLAN
from calcsheet.steps.step import Step
from calcsheet.steps.stiffnesstakeoff import STIFFNESSES
from calcsheet.steps.storeys import STOREYS
from calcsheet.steps.torsion import TORSION

STEPS: Mapping[str, Step] = {
    step.kind: step
    for step in (
        CARD,
        MASSES,
        STIFFNESSES,
        STOREYS,
        MODES,
        PLAN,
        PARTICIPATION,
        BASIS,
        DEMAND,
        PEAKS,
        DRIFT,
        ACTIONS,
        TORSION,
        EARLIER,
    )
}
