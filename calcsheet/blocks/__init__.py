"""Blocks of a calculation notebook: a live view over a step, and its static twin in the saved file."""

from __future__ import annotations

from calcsheet.blocks.blocks import FloorLines, ModePlot, ModeSolver, ParticipationSummary
from calcsheet.blocks.demand import DemandSpectrum, DriftCheck, EdgeDrifts, ModalTable, StaticComparison, StoreyActions
from calcsheet.blocks.jobcard import JobCard
from calcsheet.blocks.storeytable import StoreyTable

__all__ = [
    "DemandSpectrum",
    "DriftCheck",
    "EdgeDrifts",
    "FloorLines",
    "JobCard",
    "ModalTable",
    "ModePlot",
    "ModeSolver",
    "ParticipationSummary",
    "StaticComparison",
    "StoreyActions",
    "StoreyTable",
]
