"""The lateral models of one translation a level that a job can give."""

from __future__ import annotations

from calcsheet.core.chain import Chain
from calcsheet.core.matrix import FlexibilityMatrix, StiffnessMatrix
from calcsheet.core.stick import Stick

Lateral = Chain | StiffnessMatrix | FlexibilityMatrix | Stick
"""One of them, on a fixed base."""
LATERALS: tuple[type[Lateral], ...] = (Chain, StiffnessMatrix, FlexibilityMatrix, Stick)
"""All of them: each says by `columns` and `table` what it is made of."""
KINDS: dict[str, type[Lateral]] = {lateral.kind: lateral for lateral in LATERALS}
"""The same by name, as the job card names them."""
