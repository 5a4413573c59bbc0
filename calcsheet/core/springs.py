"""Springs between a building and the ground."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from calcsheet.core.errors import ModelError


@dataclass(frozen=True)
class BaseSprings:
    """Springs between a building and the ground, in one direction.

    Parameters
    ----------
    translation : float or None
        Stiffness against translation [kN/m]; None where the base does not move.
    rocking : float or None
        Stiffness against rocking [kN·m/rad]; None where the base does not turn.
    damping : float or None
        Damping ratio that goes with them: kept and printed, used nowhere.

    Raises
    ------
    ModelError
        A value that is not finite and above zero.
    """

    translation: float | None = None
    rocking: float | None = None
    damping: float | None = None

    def __post_init__(self) -> None:
        for name in ("translation", "rocking", "damping"):
            value = getattr(self, name)
            if value is not None and not 0.0 < value < np.inf:
                raise ModelError(f"base, {name}", f"got {value:g}", "must be finite and above 0")

    @property
    def fixed(self) -> bool:
        """Whether the base neither moves nor turns."""
        return self.translation is None and self.rocking is None
