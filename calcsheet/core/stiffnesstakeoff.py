"""Storey stiffnesses added up from members: rows of equal members, each serving one storey or several in a run.

Each member acts along one direction of the plan; its stiffness k at the angle γ from x goes into x with cos²γ and into
y with sin²γ.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from calcsheet.core.arrays import Array, Frozen, agrees
from calcsheet.core.errors import ModelError
from calcsheet.core.memberstiffness import (
    RESTRAINT,
    beam_ratio,
    beam_restraint,
    bending,
    diagonal,
    joint_rotation_index,
    with_shear,
)
from calcsheet.core.sections import Material, Properties, Section, properties_of

BEAMS, PINNED_BASE = "beams", "beams on pinned base"
PAIR, TENSION_ONLY = "pair", "pair in tension only"
KINDS = {
    "column": ("fixed-fixed", "fixed-pinned", BEAMS, PINNED_BASE),
    "wall": ("cantilever", "fixed-fixed"),
    "brace": ("single", PAIR, TENSION_ONLY),
    "infill strut": ("single",),
}
"""Kinds of members, with what each may act as. Of a pair in tension only, one acts at a time."""
DIAGONAL = ("brace", "infill strut")


@dataclass(frozen=True)
class Member:
    """A row of the take-off: equal members in equal places of one or several storeys.

    Parameters
    ----------
    name : str
        Its name.
    kind : str
        One of `KINDS`.
    acts_as : str
        How it is held, as `KINDS` allows.
    first, last : int
        Lowest and highest storey that it serves, from 0 at the base.
    section : str
        Name of its section.
    along : tuple of float
        cos γ and sin γ of the direction in which it acts, from x towards y.
    count : int
        Number of such members in each storey.
    axis : {"major", "minor"}
        Axis about which a column or wall bends.
    factor : float
        Stiffness factor: on EI of a column or wall, on EA of a diagonal.
    shear : bool
        Whether a column or wall deforms in shear too.
    shear_factor : float
        Stiffness factor on GA_s.
    height : float or None
        Height of the member [m]; None for the storey's.
    run : float or None
        Horizontal length of a diagonal [m].
    beam, beam_below : str
        Names of the sections of the beams that meet a column at its upper and its lower end.
    spans : tuple of float
        Spans of the beams at either end, one or two [m].
    beam_factor : float
        Stiffness factor on EI of the beams.
    ground : str
        Why these factors: the engineer's words.
    """

    name: str
    kind: str
    acts_as: str
    first: int
    last: int
    section: str
    along: tuple[float, ...]
    count: int
    axis: str
    factor: float
    shear: bool
    shear_factor: float
    height: float | None
    run: float | None
    beam: str
    beam_below: str
    spans: tuple[float, ...]
    beam_factor: float
    ground: str


@dataclass(frozen=True)
class SetFactor:
    """A stiffness set's own factor on the stiffnesses taken off.

    Parameters
    ----------
    name : str
        Name of the set.
    direction : str
        "x" or "y".
    factor : float
        The factor.
    """

    name: str
    direction: str
    factor: float


@dataclass(frozen=True, eq=False)
class Takeoff(Frozen):
    """All that a stiffness take-off is made from.

    Parameters
    ----------
    level : tuple of str
        Levels above the effective base, lowest first, n of them; a storey is named by the level above it.
    storey_height : (n,) array
        Height of each storey [m].
    direction : tuple of str
        The directions analysed, "x" and "y" (one or both).
    materials : tuple of Material
        Materials.
    sections : tuple of Section
        Sections.
    members : tuple of Member
        Members.
    factors : tuple of SetFactor
        Factors that the job's stiffness sets apply to what is taken off.
    no_origin : tuple of str
        Files whose origin isn't stated.
    """

    level: tuple[str, ...]
    storey_height: Array
    direction: tuple[str, ...]
    materials: tuple[Material, ...]
    sections: tuple[Section, ...]
    members: tuple[Member, ...]
    factors: tuple[SetFactor, ...] = ()
    no_origin: tuple[str, ...] = ()


@dataclass(frozen=True, eq=False)
class MemberStiffness(Frozen):
    """Stiffness of one row of members in each storey; 0 in a storey that it doesn't serve, and where it has no such value.

    Parameters
    ----------
    height : (n,) array
        Height of the member [m].
    length : (n,) array
        Length L of a diagonal [m].
    beams_above, beams_below : (n,) array
        Sums of EI/L of the beams at a column's ends [kN·m].
    ratio : (n,) array
        k̄ of a column held by beams.
    alone : (n,) array
        Stiffness of one member in its own direction [kN/m].
    lateral : (d, n) array
        Stiffness of all the row's members in each direction analysed [kN/m].
    share : (d, n) array
        The same over the storey's stiffness.
    """

    height: Array = field(metadata=agrees(rtol=1e-12))
    length: Array = field(metadata=agrees(rtol=1e-12))
    beams_above: Array = field(metadata=agrees(rtol=1e-12))
    beams_below: Array = field(metadata=agrees(rtol=1e-12))
    ratio: Array = field(metadata=agrees(rtol=1e-12))
    alone: Array = field(metadata=agrees(rtol=1e-12))
    lateral: Array = field(metadata=agrees(rtol=1e-12))
    share: Array = field(metadata=agrees(rtol=1e-12))


@dataclass(frozen=True, eq=False)
class DirectionStiffness(Frozen):
    """Storey stiffnesses in one direction.

    Parameters
    ----------
    direction : str
        "x" or "y".
    storey : (n,) array
        Stiffness of each storey, lowest first [kN/m].
    kind : tuple of str
        The kinds of members that act in this direction, m of them.
    share : (m, n) array
        Share of each kind in each storey.
    joint_rotation : (n,) array
        Joint rotation index ρ of the columns that are held by beams; 0 in a storey without such columns.
    wall_slenderness : float
        Height of all storeys with walls over the length of the longest wall; 0 without walls.
    """

    direction: str
    storey: Array = field(metadata=agrees(rtol=1e-12))
    kind: tuple[str, ...]
    share: Array = field(metadata=agrees(rtol=1e-12))
    joint_rotation: Array = field(metadata=agrees(rtol=1e-12))
    wall_slenderness: float = field(metadata=agrees(rtol=1e-12))


@dataclass(frozen=True, eq=False)
class StoreyStiffness(Frozen):
    """Result of a stiffness take-off.

    Parameters
    ----------
    sections : tuple of Properties
        Properties of each section.
    members : tuple of MemberStiffness
        Each row of members.
    directions : tuple of DirectionStiffness
        Each direction analysed, x before y.
    coupling : (n,) array
        Σ k sinγ cosγ of each storey over the root of k_x·k_y of the members [-]: what analysing x and y apart leaves out.
    """

    sections: tuple[Properties, ...]
    members: tuple[MemberStiffness, ...]
    directions: tuple[DirectionStiffness, ...]
    coupling: Array = field(metadata=agrees(rtol=1e-9, atol=1e-12))


def take_off(given: Takeoff) -> StoreyStiffness:
    """Add up the storey stiffnesses of a building from its members.

    Parameters
    ----------
    given : Takeoff
        Members with their sections and materials, and the storeys.

    Returns
    -------
    StoreyStiffness
        By storey, direction, kind and row.

    Raises
    ------
    ModelError
        A storey without a member that acts in a direction analysed.
    """
    sections = tuple(properties_of(s) for s in given.sections)
    rigidity = _Rigidity(given, sections)
    rows = [_row(member, given, rigidity) for member in given.members]
    xy = np.array([m.along for m in given.members]).reshape(-1, 2)
    all_k = np.array([m.count * row["alone"] for m, row in zip(given.members, rows, strict=True)])
    all_k = all_k.reshape(-1, len(given.level))
    axes = ["xy".index(d) for d in given.direction]
    lateral = (xy**2).T[:, :, None] * all_k
    storey = lateral.sum(axis=1)
    for d, axis in zip(given.direction, axes, strict=True):
        for i in np.flatnonzero(storey[axis] <= 0.0):
            where = f'stiffness {d} of the storey below level "{given.level[i]}"'
            raise ModelError(where, "no member acts", f"must have at least one that acts in {d}")
    acting = {axis: tuple(kind for kind in KINDS if _of_kind(given, lateral[axis], kind).any()) for axis in axes}
    directions = tuple(
        DirectionStiffness(
            direction=d,
            storey=storey[axis],
            kind=acting[axis],
            share=np.array([_of_kind(given, lateral[axis], kind) for kind in acting[axis]]) / storey[axis],
            joint_rotation=_joint_rotation(given, rows, rigidity, axis),
            wall_slenderness=_wall_slenderness(given, rigidity, axis),
        )
        for d, axis in zip(given.direction, axes, strict=True)
    )
    members = tuple(
        MemberStiffness(lateral=lateral[axes, i], share=lateral[axes, i] / storey[axes], **row)
        for i, row in enumerate(rows)
    )
    cross = (xy.prod(axis=1)[:, None] * all_k).sum(axis=0)
    scale = np.sqrt(storey[0] * storey[1])
    coupling = np.divide(cross, scale, out=np.zeros_like(cross), where=scale > 0.0)
    return StoreyStiffness(sections, members, directions, coupling)


def _of_kind(given: Takeoff, lateral: Array, kind: str) -> Array:
    """Stiffness of each storey from the members of a kind."""
    return np.asarray(lateral[[m.kind == kind for m in given.members]].sum(axis=0))


class _Rigidity:
    """Section and material of a member, by name."""

    def __init__(self, given: Takeoff, sections: tuple[Properties, ...]) -> None:
        materials = {m.name: m for m in given.materials}
        named = {s.name: s for s in given.sections}
        self.properties = dict(zip(named, sections, strict=True))
        self.material = {name: materials[s.material] for name, s in named.items()}

    def flexural(self, member: Member) -> float:
        """EI of a column or wall, with its factor [kN·m²]."""
        second, _ = self.properties[member.section].about(member.axis)
        return member.factor * self.material[member.section].modulus * second

    def shear(self, member: Member) -> float:
        """GA_s of a column or wall, with its factor [kN]."""
        _, area = self.properties[member.section].about(member.axis)
        return member.shear_factor * self.material[member.section].shear_modulus * area

    def axial(self, member: Member) -> float:
        """EA of a diagonal, with its factor [kN]."""
        return member.factor * self.material[member.section].modulus * self.properties[member.section].area

    def beams(self, member: Member, section: str) -> float:
        """Sum of EI/L of the beams of a section at one end of a column, with their factor [kN·m]."""
        second = self.properties[section].major
        return sum(member.beam_factor * self.material[section].modulus * second / span for span in member.spans)


def _row(member: Member, given: Takeoff, rigidity: _Rigidity) -> dict[str, Array]:
    """What a `MemberStiffness` holds of one member."""
    n = len(given.level)
    row = {name: np.zeros(n) for name in ("height", "length", "beams_above", "beams_below", "ratio", "alone")}
    served = slice(member.first, member.last + 1)
    height = row["height"][served]
    height[:] = given.storey_height[served] if member.height is None else member.height
    if member.kind in DIAGONAL:
        run = member.run or 0.0
        row["length"][served] = np.hypot(run, height)
        row["alone"][served] = diagonal(rigidity.axial(member), run, height) * (2.0 if member.acts_as == PAIR else 1.0)
        return row
    flexural = rigidity.flexural(member)
    if member.beam:
        above, below = rigidity.beams(member, member.beam), rigidity.beams(member, member.beam_below)
        row["beams_above"][served], row["beams_below"][served] = above, below
        ratio = row["ratio"][served]
        ratio[:] = beam_ratio(flexural / height, above, below)
        restraint = beam_restraint(ratio)
        if member.first == 0:
            row["beams_below"][0] = 0.0
            ratio[0] = beam_ratio(flexural / float(height[0]), above)
            restraint[0] = beam_restraint(float(ratio[0]), "pinned" if member.acts_as == PINNED_BASE else "fixed")
        stiffness = bending(flexural, height, RESTRAINT["fixed-fixed"] * restraint)
    else:
        stiffness = RESTRAINT[member.acts_as] * flexural / height**3
    row["alone"][served] = with_shear(stiffness, rigidity.shear(member), height) if member.shear else stiffness
    return row


def _joint_rotation(given: Takeoff, rows: list[dict[str, Array]], rigidity: _Rigidity, axis: int) -> Array:
    """ρ of each storey: a beam lies between two columns, so each counts half of it."""
    beams, columns = np.zeros(len(given.level)), np.zeros(len(given.level))
    for member, row in zip(given.members, rows, strict=True):
        if member.beam:
            weight = member.count * member.along[axis] ** 2
            served = slice(member.first, member.last + 1)
            beams += 0.5 * weight * row["beams_above"]
            columns[served] += weight * rigidity.flexural(member) / row["height"][served]
    held = columns > 0.0
    return np.array([joint_rotation_index(b, c) if h else 0.0 for b, c, h in zip(beams, columns, held, strict=True)])


def _wall_slenderness(given: Takeoff, rigidity: _Rigidity, axis: int) -> float:
    """Height of all storeys with walls over the length of the longest: that of the rectangle of the same A and I."""
    length, walled = 0.0, np.zeros(len(given.level), dtype=bool)
    for member in given.members:
        if member.kind == "wall" and member.along[axis] ** 2 > 0.5:
            properties = rigidity.properties[member.section]
            length = max(length, float(np.sqrt(12.0 * properties.major / properties.area)))
            walled[member.first : member.last + 1] = True
    return float(given.storey_height[walled].sum()) / length if length else 0.0
