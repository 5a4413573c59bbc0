"""Every view by its name."""

from __future__ import annotations

from collections.abc import Mapping

from calcsheet.render.actions import ACTIONS, COMPARISON
from calcsheet.render.card import CARD
from calcsheet.render.cautions import VIEW as CAUTIONS
from calcsheet.render.changes import CHANGES
from calcsheet.render.demand import DEMAND
from calcsheet.render.drift import DRIFT
from calcsheet.render.masses import MASSES
from calcsheet.render.modes import MODES
from calcsheet.render.motion import MOTION
from calcsheet.render.participation import PARTICIPATION
from calcsheet.render.peaks import PEAKS
from calcsheet.render.plan import PLAN
from calcsheet.render.plot import PLOT
from calcsheet.render.stiffnesstakeoff import MEMBERS, STIFFNESSES
from calcsheet.render.storeys import STOREYS
from calcsheet.render.torsion import TORSION
from calcsheet.render.view import View
from calcsheet.render.whatif import WHAT_IF

VIEWS: Mapping[str, View] = {
    view.name: view
    for view in (
        CARD,
        MASSES,
        STIFFNESSES,
        MEMBERS,
        STOREYS,
        MODES,
        PLOT,
        PLAN,
        PARTICIPATION,
        DEMAND,
        PEAKS,
        DRIFT,
        ACTIONS,
        COMPARISON,
        TORSION,
        CAUTIONS,
        CHANGES,
        MOTION,
        WHAT_IF,
    )
}
"""Every view by its name."""
