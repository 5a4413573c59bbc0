"""Torsion of rigid floors: centres of stiffness, eccentricities, torsional radii, shares of modes, edges.

Sources
-------
EN 1998-1:2004, 4.2.3.2 and 4.3.2; A. K. Chopra, Dynamics of Structures, section 9.5 (from memory).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace

import numpy as np
from scipy import linalg

from calcsheet.core.arrays import Array, Frozen, agrees
from calcsheet.core.chain import Chain
from calcsheet.core.codes.edition import PlanFacts
from calcsheet.core.errors import ModelError
from calcsheet.core.model import Model
from calcsheet.core.modes import Modes
from calcsheet.core.rigidfloors import Floors


@dataclass(frozen=True, eq=False)
class Centres(Frozen):
    """Centres of stiffness of the storeys, which exist where every line is a storey chain.

    Parameters
    ----------
    centre : (L, 2) array
        Centre of stiffness of each storey [m].
    eccentricity : (L, 2) array
        Centre of mass of the level above less the centre of stiffness, along x and y [m].
    stiffness : (L, 2) array
        Storey stiffness in x and in y [kN/m].
    coupling : (L,) array
        Storey stiffness that couples x with y, 0 where they are principal directions [kN/m].
    torsion : (L,) array
        Torsional stiffness of each storey about its centre of stiffness [kN·m/rad].
    radius : (L, 2) array
        Torsional radii: √(torsional stiffness over stiffness in y), the one along x; and over stiffness in x [m].
    """

    centre: Array = field(metadata=agrees(rtol=1e-8, atol=1e-8))
    eccentricity: Array = field(metadata=agrees(rtol=1e-8, atol=1e-8))
    stiffness: Array = field(metadata=agrees(rtol=1e-9))
    coupling: Array = field(metadata=agrees(rtol=1e-8, atol=1e-3))
    torsion: Array = field(metadata=agrees(rtol=1e-8))
    radius: Array = field(metadata=agrees(rtol=1e-8))


def centres(floors: Floors) -> Centres | None:
    """Centres of stiffness, eccentricities and torsional radii of the storeys.

    Parameters
    ----------
    floors : Floors
        L levels.

    Returns
    -------
    Centres or None
        None where a line bends as a whole: its storeys then have no stiffness of their own, nor centres.

    Raises
    ------
    ModelError
        A storey whose lines leave a mechanism.

    Notes
    -----
    A line of direction (c, s) through p adds k(c, s, s p_x - c p_y) ⊗ itself to the storey's stiffness at the origin,
    [k_t q; qᵀ k_θ]; the coupling vanishes at the centre of stiffness. Torsional radius along x: r_x = √(k_θ/k_y) (EN
    1998-1:2004, 4.2.3.2(6)).
    """
    n = floors.levels
    storey = np.zeros((n, 3, 3))
    middle = floors.centre.mean(axis=0)  # near the lines, wherever the origin is
    for line in floors.lines:
        if not isinstance(line.lateral, Chain):
            return None
        c, s = line.way
        way = np.array([c, s, s * (line.x - middle[0]) - c * (line.y - middle[1])])
        storey[: line.lateral.size] += line.lateral.storey[:, None, None] * np.outer(way, way)
    moved = np.linalg.cond(storey[:, :2, :2]) < 1e12
    if not moved.all():
        level = floors.level[int(np.argmin(moved))]
        raise ModelError(f'storey below level "{level}"', "lines of one direction only", "must resist x and y")
    arm = np.linalg.solve(storey[:, :2, :2], storey[:, :2, 2:])[:, :, 0]
    torsion = storey[:, 2, 2] - (storey[:, :2, 2] * arm).sum(axis=1)
    centre = np.column_stack([arm[:, 1], -arm[:, 0]]) + middle
    stiffness = np.column_stack([storey[:, 0, 0], storey[:, 1, 1]])
    return Centres(
        centre=centre,
        eccentricity=floors.centre - centre,
        stiffness=stiffness,
        coupling=storey[:, 0, 1],
        torsion=torsion,
        radius=np.sqrt(torsion[:, None] / stiffness[:, ::-1]),
    )


def plan_facts(floors: Floors, direction: str) -> PlanFacts:
    """What a code may ask about a plan in one direction.

    Parameters
    ----------
    floors : Floors
        L levels.
    direction : {"x", "y"}
        The direction: eccentricity is taken square to it, the torsional radius with the stiffness along it.
    """
    found = centres(floors)
    across = 1 if direction == "x" else 0
    return PlanFacts(
        eccentricity=None if found is None else found.eccentricity[:, across],
        radius=None if found is None else found.radius[:, across],
        gyration=floors.gyration,
    )


@dataclass(frozen=True, eq=False)
class Uncoupled(Frozen):
    """First periods of the floors held in all but one of their movements.

    Parameters
    ----------
    x, y, rotation : float
        First period of each movement alone, about the centres of mass [s].
    """

    x: float = field(metadata=agrees(rtol=1e-8))
    y: float = field(metadata=agrees(rtol=1e-8))
    rotation: float = field(metadata=agrees(rtol=1e-8))


def uncoupled(floors: Floors, mass: Array) -> Uncoupled:
    """First periods without coupling.

    Parameters
    ----------
    floors : Floors
        L levels.
    mass : (L,) array
        Mass of each level [t].

    Notes
    -----
    Each block of K on its own: with the other movements held, K is that of the remaining columns of its root.
    """
    inertia, root = np.sqrt(floors.inertia(mass)), floors.root
    largest = [
        linalg.svdvals(linalg.qr(root[:, i::3] / inertia[i::3], mode="r")[0][: floors.levels])[-1] for i in range(3)
    ]
    return Uncoupled(*(float(2.0 * np.pi / value) for value in largest))


def direction_shares(model: Model, modes: Modes) -> Array:
    """Share of each mode's kinetic energy in x, in y and in rotation, (3, m); columns sum to 1.

    Parameters
    ----------
    model : Model
        A model of rigid floors.
    modes : Modes
        Its m modes.
    """
    energy = model.mass[:, None] * modes.psi**2
    return energy.reshape(model.levels, 3, -1).sum(axis=0)


def shifted(floors: Floors, along: Array) -> Floors:
    """The floors with their masses shifted, lines where they were.

    Parameters
    ----------
    floors : Floors
        L levels.
    along : (L, 2) array
        What each centre of mass is moved by [m]; radii of gyration about it are kept.
    """
    return replace(floors, centre=floors.centre + along)


def displaced(floors: Floors, u: Array, x: Array, y: Array) -> tuple[Array, Array]:
    """Displacements in x and in y of one point of each level, (L, m) each.

    Parameters
    ----------
    floors : Floors
        L levels.
    u : (3L, m) array
        Displacements of the floors.
    x, y : (L,) array
        The point of each level [m].
    """
    in_x, in_y = floors.at(x, y)
    return in_x @ u, in_y @ u


def point_drifts(floors: Floors, u: Array, x: Array, y: Array) -> tuple[Array, Array]:
    """Drifts in x and in y of each storey at one point of its upper level, (L, m) each.

    Parameters
    ----------
    floors : Floors
        L levels.
    u : (3L, m) array
        Displacements of the floors.
    x, y : (L,) array
        The point of each level; that of a storey's upper level is followed on its lower one [m].
    """
    upper_x, upper_y = displaced(floors, u, x, y)
    below = [displaced(floors, u, np.append(x[1:], 0.0), np.append(y[1:], 0.0))[i][:-1] for i in range(2)]
    none = np.zeros((1, u.shape[1]))
    return upper_x - np.vstack([none, below[0]]), upper_y - np.vstack([none, below[1]])


def static(floors: Floors, force: Array, direction: str, eccentricity: Array) -> Array:
    """Displacements of the floors, (3L, 1), under static forces beside the centres of mass.

    Parameters
    ----------
    floors : Floors
        L levels.
    force : (L,) array
        Force at each level [kN].
    direction : {"x", "y"}
        Its direction.
    eccentricity : (L,) array
        How far beside the centre of mass it acts: towards +y for a force in x, towards +x for one in y [m].

    Notes
    -----
    Torques are F e in y and -F e in x. EN 1998-1:2004, 4.3.3.3.3(1), M_a = e_a F (from memory).
    """
    load = np.zeros((floors.levels, 3))
    axis = ("x", "y").index(direction)
    load[:, axis] = force
    load[:, 2] = force * eccentricity * (-1.0 if axis == 0 else 1.0)
    return floors.displacement(load.reshape(-1, 1))


def amplification(edges: Sequence[float]) -> float:
    """Amplification of accidental torsion by the displacements of the two edges, 1 to 3.

    Parameters
    ----------
    edges : sequence of float
        Displacement of each edge in the direction of the force, under static forces with A_x = 1 [m].

    Notes
    -----
    A_x = (δ_max/1.2 δ_avg)², ASCE/SEI 7-16, 12.8.4.3 (from memory).
    """
    largest, mean = max(abs(e) for e in edges), abs(sum(edges)) / len(edges)
    return float(np.clip((largest / (1.2 * mean)) ** 2, 1.0, 3.0))
