"""calcsheet: how a multi-storey building moves sideways, calculated in a notebook and issued as a record to be checked.

The blocks are loaded when they are first named.
"""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from calcsheet.blocks import (
        Cautions,
        DemandSpectrum,
        DriftCheck,
        EdgeDrifts,
        FloorLines,
        JobCard,
        MassTakeoff,
        ModalTable,
        ModeMotion,
        ModePlot,
        ModeSolver,
        ParticipationSummary,
        StaticComparison,
        StiffnessTakeoff,
        StoreyActions,
        StoreyTable,
        WhatChanged,
        WhatIf,
    )

__version__ = "0.1.0"
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
    "__version__",
]


def __getattr__(name: str) -> Any:
    if name in __all__:
        return getattr(importlib.import_module("calcsheet.blocks"), name)
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")


def __dir__() -> list[str]:
    return __all__
