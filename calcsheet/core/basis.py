"""The basis of the demand: code edition with its parameters, combination of modes, declared masses, second model."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from calcsheet.core.codes.asce7_16 import ASCE716
from calcsheet.core.codes.asce7_22 import ASCE722
from calcsheet.core.codes.en1998_2004 import EN1998
from calcsheet.core.codes.is1893_2016 import IS1893
from calcsheet.core.codes.points import GivenPoints
from calcsheet.core.combine import Rule

AnyEdition = EN1998 | ASCE716 | ASCE722 | IS1893 | GivenPoints
"""The editions that a basis may hold, told apart by their `kind`."""
Residual = Literal["last ordinate", "zero period", "none"]
RESIDUALS: tuple[Residual, ...] = ("last ordinate", "zero period", "none")
"""Ordinates for what truncated modes leave out, the usual one first."""


@dataclass(frozen=True)
class MassShare:
    """A load and the share of it that the masses hold.

    Parameters
    ----------
    load : str
        The load, such as "imposed load on floors".
    share : float
        The share, 0 to 1.
    clause : str
        The clause that asks for it; may be empty.
    """

    load: str
    share: float
    clause: str


@dataclass(frozen=True)
class SecondModel:
    """A result of another model or of a hand calculation, to be held against this one's.

    Parameters
    ----------
    quantity : {"period", "weight", "base shear"}
        What it is.
    direction : {"x", "y", ""}
        Its direction; empty for a weight.
    value : float
        Its value [s or kN].
    origin : str
        Where it comes from.
    """

    quantity: str
    direction: str
    value: float
    origin: str


@dataclass(frozen=True)
class Basis:
    """The basis of the demand.

    Parameters
    ----------
    edition : EN1998, ASCE716, ASCE722, IS1893 or GivenPoints
        The code edition with its parameters.
    combination : {"CQC", "SRSS", "absolute", "grouped"}
        Rule of combination, one that the edition allows.
    residual : {"last ordinate", "zero period", "none"}
        Ordinate for what truncated modes leave out.
    mass_basis : tuple of MassShare
        What the masses hold of each load.
    second_model : tuple of SecondModel
        Results of other models.
    """

    edition: AnyEdition
    combination: Rule
    residual: Residual
    mass_basis: tuple[MassShare, ...]
    second_model: tuple[SecondModel, ...]
