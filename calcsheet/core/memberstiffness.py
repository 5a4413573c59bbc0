"""Lateral stiffness of single members over one storey: columns, walls, braces, struts.

Functions take numbers or arrays alike. Stiffnesses are forces at the upper end for a displacement of 1 between the
storey's two levels.

Sources
-------
K. Muto, "Aseismic Design Analysis of Buildings" (1974), D-values; J. A. Blume, "Dynamic characteristics of multistory
buildings", J. Struct. Div. ASCE 94 (1968), joint rotation index; S. P. Timoshenko, J. M. Gere, "Mechanics of
Materials", beams with shear (all from memory).
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import TypeVar

from calcsheet.core.arrays import Array

Number = TypeVar("Number", float, Array)

RESTRAINT: Mapping[str, float] = {"fixed-fixed": 12.0, "fixed-pinned": 3.0, "cantilever": 3.0}
"""β of k = β E I/h³, by how a column or wall is held at its ends."""


def bending(flexural: float, height: Number, restraint: Number) -> Number:
    """Stiffness of a member in bending, βEI/h³ [kN/m].

    Parameters
    ----------
    flexural : float
        Flexural rigidity EI [kN·m²].
    height : float or array
        Height h [m].
    restraint : float or array
        β: 12 with both ends held against rotation, 3 with one, 12a with a from `beam_restraint`.
    """
    return restraint * flexural / height**3


def with_shear(stiffness: Number, shear: float, height: Number) -> Number:
    """Stiffness of a member that bends and shears, 1/(1/k + h/(GA_s)) [kN/m].

    Parameters
    ----------
    stiffness : float or array
        Stiffness in bending alone, k [kN/m].
    shear : float
        Shear rigidity GA_s [kN].
    height : float or array
        Height h [m].
    """
    return 1.0 / (1.0 / stiffness + height / shear)


def beam_ratio(column: Number, above: float, below: float | None = None) -> Number:
    """Ratio of beams to column, k̄, of the D-value method.

    Parameters
    ----------
    column : float or array
        EI/h of the column [kN·m].
    above, below : float
        Sums of EI/L over the beams that meet the column at its upper and at its lower end [kN·m]; None for the
        lower end of a column that stands on the base.
    """
    return above / column if below is None else (above + below) / (2.0 * column)


def beam_restraint(ratio: Number, base: str = "") -> Number:
    """Factor a on 12EI/h³ of a column held by beams, of the D-value method.

    Parameters
    ----------
    ratio : float or array
        k̄, from `beam_ratio`.
    base : {"", "fixed", "pinned"}
        How the lower end stands on the base; empty where beams meet it too.

    Notes
    -----
    k̄/(2 + k̄) is exact where all joints of a regular frame turn alike, 0.5k̄/(1 + 2k̄) where a column on a pinned
    base has no other above it. (0.5 + k̄)/(2 + k̄), on a fixed base, counts on a column above that turns the joint
    too: a frame of one storey is stiffer.
    """
    if base == "fixed":
        return (0.5 + ratio) / (2.0 + ratio)
    if base == "pinned":
        return 0.5 * ratio / (1.0 + 2.0 * ratio)
    return ratio / (2.0 + ratio)


def joint_rotation_index(beams: float, columns: float) -> float:
    """Joint rotation index ρ = Σ(EI_b/L)/Σ(EI_c/h) of a storey: 0 a cantilever, large a frame whose joints don't turn.

    Parameters
    ----------
    beams, columns : float
        The two sums [kN·m], each beam counted once.
    """
    return beams / columns


def diagonal(axial: float, run: float, rise: Number) -> Number:
    """Stiffness of a pin-ended diagonal, EA cos²α/L = EA b²/L³ [kN/m], L² = b² + h².

    Parameters
    ----------
    axial : float
        Axial rigidity EA [kN].
    run : float
        Horizontal length b [m].
    rise : float or array
        Height h [m].
    """
    return axial * run * run / (run * run + rise * rise) ** 1.5
