"""Natural modes: frequencies, shapes, their scale and sign, energies, close groups and local modes."""

from __future__ import annotations

from dataclasses import dataclass, field
from itertools import pairwise
from typing import Literal

import numpy as np

from calcsheet.core.arrays import Array, Frozen, agrees
from calcsheet.core.errors import ModelError
from calcsheet.core.model import Model

CLOSE = 0.9
"""Two modes are close where the shorter period is above this share of the longer (EN 1998-1:2004, 4.3.3.3.2(1))."""
REPEATED = 1e-6
"""Relative difference of frequencies up to which modes count as repeated."""
LOCAL_ENERGY = 0.5
"""Share of a mode's kinetic energy in one level from which it may be local …"""
LOCAL_MASS = 0.25
"""… where that level's mass is below this share of the average level mass."""
TIE = 1e-6
"""Relative difference up to which two components of a shape count as equally large."""

Scale = Literal["mass", "largest", "roof"]


@dataclass(frozen=True, eq=False)
class Modes(Frozen):
    """Modes of a model, in ascending frequency.

    Parameters
    ----------
    omega : (m,) array
        Circular frequency [rad/s].
    frequency : (m,) array
        Frequency ω/2π [Hz].
    period : (m,) array
        Period 2π/ω [s].
    psi : (N, m) array
        Mass-normalised shapes, ψᵀMψ = I [t^-1/2]; the largest translation is positive.
    strain_energy : (m,) array
        ½ψᵀKψ = ½ω², the strain energy at unit modal displacement [s^-2].
    kinetic : (L, m) array
        Share of each mode's kinetic energy in each level; columns sum to 1.
    strain : (S, m) array
        Share of each mode's strain energy in each storey; columns sum to 1.
    close : tuple of tuple of int
        Groups of close modes, by mode number from 1.
    repeated : tuple of tuple of int
        Groups of modes with one frequency: their shapes are one orthonormal basis of many.
    local : tuple of LocalMode
        Modes that live in one light level.
    """

    omega: Array = field(metadata=agrees(rtol=1e-9))
    frequency: Array = field(metadata=agrees(rtol=1e-9))
    period: Array = field(metadata=agrees(rtol=1e-9))
    psi: Array = field(metadata=agrees(subspace="omega", atol=1e-7))
    strain_energy: Array = field(metadata=agrees(rtol=1e-9))
    kinetic: Array = field(metadata=agrees(group="omega", atol=1e-8))
    strain: Array = field(metadata=agrees(group="omega", atol=1e-8))
    close: tuple[tuple[int, ...], ...]
    repeated: tuple[tuple[int, ...], ...]
    local: tuple[LocalMode, ...]


@dataclass(frozen=True)
class LocalMode:
    """A mode with most of its kinetic energy in one light level.

    Parameters
    ----------
    mode : int
        Mode number, from 1.
    level : str
        The level.
    energy : float
        Share of the mode's kinetic energy in the level.
    mass : float
        The level's mass over the average level mass.
    """

    mode: int
    level: str
    energy: float = field(metadata=agrees(rtol=1e-7))
    mass: float = field(metadata=agrees(rtol=1e-9))


def modes_of(model: Model, keep: int | None = None) -> Modes:
    """The first modes of a model: Kφ = ω²Mφ.

    Parameters
    ----------
    model : Model
        N degrees of freedom.
    keep : int, optional
        Number of modes, 1 to N; all where omitted.

    Returns
    -------
    Modes

    Raises
    ------
    ModelError
        `keep` outside 1 to N.
    """
    keep = model.size if keep is None else keep
    if not 1 <= keep <= model.size:
        raise ModelError("number of modes", f"{keep}", f"must be 1 to {model.size}, the number of degrees of freedom")
    omega, shapes = model.lateral.modes(model.mass, keep)
    psi = shapes * _signs(model, shapes)
    kinetic = model.by_level(model.mass[:, None] * psi**2)
    return Modes(
        omega=omega,
        frequency=omega / (2.0 * np.pi),
        period=2.0 * np.pi / omega,
        psi=psi,
        strain_energy=0.5 * omega**2,
        kinetic=kinetic,
        strain=model.lateral.storey_energy(psi) / omega**2,
        close=groups(omega, 1.0 / CLOSE - 1.0),
        repeated=groups(omega, REPEATED),
        local=_local(model, kinetic),
    )


def groups(omega: Array, gap: float) -> tuple[tuple[int, ...], ...]:
    """Groups of two or more consecutive modes, from 1, whose frequencies follow each other within `gap`, relative.

    Parameters
    ----------
    omega : (m,) array
        Circular frequencies, ascending [rad/s].
    gap : float
        Largest (ω_j - ω_i)/ω_i of neighbours in a group; for close periods T_j > 0.9 T_i it is 1/0.9 - 1.
    """
    apart = np.flatnonzero(np.diff(omega) >= gap * omega[:-1]) + 1
    edges = pairwise([0, *apart.tolist(), omega.size])
    return tuple(tuple(range(a + 1, b + 1)) for a, b in edges if b - a > 1)


def scaled(psi: Array, to: Scale) -> Array:
    """Shapes brought to another scale; nothing derived from them depends on it.

    Parameters
    ----------
    psi : (L, m) array
        Mass-normalised translations of the levels, lowest first.
    to : {"mass", "largest", "roof"}
        As they are; largest translation ±1; translation of the top level 1.

    Returns
    -------
    (L, m) array
        With "roof", not-a-number in the columns of modes whose top level does not move.
    """
    if to == "mass":
        return psi
    largest = np.abs(psi).max(axis=0)
    if to == "largest":
        return psi / largest
    return psi / np.where(np.abs(psi[-1]) > TIE * largest, psi[-1], np.nan)


def _signs(model: Model, shapes: Array) -> Array:
    """±1 a mode, (m,): the largest component is made positive, of equals the top-most level's.

    Rotations count scaled by the radius of gyration, the square root of inertia over translational mass.
    """
    moving = np.abs(model.influence).max(axis=0) > 0.0
    gyration = np.sqrt(model.mass / model.level_mass[np.asarray(model.level_of)])
    size = np.where(moving, 1.0, gyration)[:, None] * np.abs(shapes)
    largest = size >= (1.0 - TIE) * size.max(axis=0)
    last = size.shape[0] - 1 - np.argmax(largest[::-1], axis=0)
    return np.where(shapes[last, np.arange(shapes.shape[1])] < 0.0, -1.0, 1.0)


def _local(model: Model, kinetic: Array) -> tuple[LocalMode, ...]:
    ratio = model.level_mass / model.level_mass.mean()
    most, energy = kinetic.argmax(axis=0), kinetic.max(axis=0)
    return tuple(
        LocalMode(int(i) + 1, model.level[most[i]], float(energy[i]), float(ratio[most[i]]))
        for i in np.flatnonzero((energy > LOCAL_ENERGY) & (ratio[most] < LOCAL_MASS))
    )
