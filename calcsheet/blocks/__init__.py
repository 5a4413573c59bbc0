"""Blocks of a calculation notebook: a live view over a step, and its static twin in the saved file."""

from __future__ import annotations

from calcsheet.blocks.blocks import FloorLines, ModePlot, ModeSolver, ParticipationSummary
from calcsheet.blocks.cautions import Cautions
from calcsheet.blocks.demand import DemandSpectrum, DriftCheck, EdgeDrifts, ModalTable, StaticComparison, StoreyActions
from calcsheet.blocks.jobcard import JobCard
from calcsheet.blocks.masstakeoff import MassTakeoff
from calcsheet.blocks.motion import ModeMotion
from calcsheet.blocks.stiffnesstakeoff import StiffnessTakeoff
from calcsheet.blocks.storeytable import StoreyTable
from calcsheet.blocks.whatchanged import WhatChanged
from calcsheet.blocks.whatif import WhatIf

__all__ = [
    "Cautions",
    "DemandSpectrum",
    "DriftCheck",
    "EdgeDrifts",
    "FloorLines",
    "JobCard",
    "MassTakeoff",
    "ModalTable",
    "ModeMotion",
    "ModePlot",
    "ModeSolver",
    "ParticipationSummary",
    "StaticComparison",
    "StiffnessTakeoff",
    "StoreyActions",
    "StoreyTable",
    "WhatChanged",
    "WhatIf",
]
