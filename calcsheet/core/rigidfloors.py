"""Floors rigid in their plane: x, y and a rotation a level, on lines of resistance.

Each level moves by x and y at its centre of mass and turns by θ from x to y, so that the mass matrix is diagonal:
m, m and m·ρ². A line resists along its own direction; its displacement at a level is

    c x + s y + θ (s (p_x - x_m) - c (p_y - y_m)),

(c, s) its direction, p a point on it, (x_m, y_m) the centre of mass. With T from floors to lines, K = Σ TᵀK_line T.

Sources
-------
A. K. Chopra, Dynamics of Structures, section 9.5 and Example 10.6, one storey; the storeys' sum by statics (from
memory).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import ClassVar

import numpy as np
from numpy.linalg import LinAlgError
from scipy import sparse
from scipy.sparse.linalg import SuperLU, eigsh, splu

from calcsheet.core.arrays import Array, Frozen, positive
from calcsheet.core.condense import condensed
from calcsheet.core.errors import ModelError
from calcsheet.core.lateral import Lateral
from calcsheet.core.planar import above
from calcsheet.core.rooted import Rooted
from calcsheet.core.second_order import Critical, critical, over, refuse_buckled, softened

DENSE_UP_TO = 400
"""Degrees of freedom up to which dense matrices serve."""
DIRECTIONS = ("x", "y")
SQUARE = 1e-15
"""Cosine below which a line counts as square to an axis."""
HOLDS = 1e-10
"""Pivot, relative, down to which many floors need no second look for a mechanism."""
HELD = "lines of resistance must be neither all parallel nor all through one point"


@dataclass(frozen=True, eq=False)
class LineOfResistance:
    """A frame or wall that resists along one line of the plan.

    Parameters
    ----------
    name : str
        Its name.
    x, y : float
        A point on it [m].
    angle : float
        Its direction, from x towards y [rad].
    lateral : Chain, StiffnessMatrix, FlexibilityMatrix or Stick
        Its stiffness along that direction, from the base up: of all levels, or of the lowest ones where it ends there.
    """

    name: str
    x: float
    y: float
    angle: float
    lateral: Lateral

    @property
    def way(self) -> tuple[float, float]:
        """Cosine and sine of its direction; a right angle's cosine is 0, not what rounding leaves of it."""
        c, s = np.cos(self.angle), np.sin(self.angle)
        return float(c) if abs(c) > SQUARE else 0.0, float(s) if abs(s) > SQUARE else 0.0


@dataclass(frozen=True, eq=False)
class Floors(Rooted, Frozen):
    """Lateral stiffness of L rigid floors: degrees of freedom x, y, θ of the lowest level, then of the next.

    Parameters
    ----------
    level : tuple of str
        Names of the levels, lowest first.
    storey_height : (L,) array
        Height of each storey [m].
    centre : (L, 2) array
        Centre of mass of each level [m].
    gyration : (L,) array
        Radius of gyration of each level's mass about its centre [m].
    lines : tuple of LineOfResistance
        What resists.
    gravity : (L,) array or None
        Gravity load of each level, spread as its mass is, that acts on the drifts [kN]; None where it is left out.

    Raises
    ------
    ModelError
        Arrays that do not fit, or a line of more levels than there are; when first solved, a mechanism, or gravity loads
        that buckle the building.
    """

    level: tuple[str, ...]
    storey_height: Array
    centre: Array
    gyration: Array
    lines: tuple[LineOfResistance, ...]
    gravity: Array | None = None
    kind: ClassVar[str] = "rigid floors"
    asymmetry: ClassVar[float] = 0.0

    def __post_init__(self) -> None:
        super().__post_init__()
        n = self.levels
        object.__setattr__(self, "gyration", positive(self.gyration, "radius of gyration [m]", self.level))
        for what, found, wanted in (
            ("storey height", self.storey_height.shape, (n,)),
            ("radius of gyration", self.gyration.shape, (n,)),
            ("centre of mass", self.centre.shape, (n, 2)),
        ):
            if found != wanted:
                raise ModelError(what, f"an array of shape {found}", f"must be of shape {wanted}, a row a level")
        if not self.lines:
            raise ModelError("lines of resistance", "none", "must be at least three, not all through one point")
        for line in self.lines:
            if line.lateral.size > n:
                allowed = f"must be at most {n}, that of the building"
                raise ModelError(f'line "{line.name}"', f"{line.lateral.size} levels", allowed)

    @property
    def levels(self) -> int:
        """Number of levels, L."""
        return len(self.level)

    @property
    def size(self) -> int:
        """Number of degrees of freedom, 3L."""
        return 3 * self.levels

    def inertia(self, mass: Array) -> Array:
        """Mass of each degree of freedom, (3L,) [t, t, t·m²], from the mass of each level, (L,) [t]."""
        return np.column_stack([mass, mass, mass * self.gyration**2]).ravel()

    @property
    def influence(self) -> Array:
        """Displacement of each degree of freedom when the base moves by 1 in x and in y, (2, 3L)."""
        return np.tile(np.eye(2, 3), self.levels)

    def reach(self, line: LineOfResistance) -> sparse.csr_matrix:
        """T, (n, 3L): from floors to the displacements of a `line` along itself at its n levels."""
        (c, s), n = line.way, line.lateral.size
        arm = s * (line.x - self.centre[:n, 0]) - c * (line.y - self.centre[:n, 1])
        values = np.column_stack([np.full(n, c), np.full(n, s), arm]).ravel()
        return sparse.csr_matrix((values, (np.repeat(np.arange(n), 3), np.arange(3 * n))), shape=(n, self.size))

    def at(self, x: Array, y: Array) -> tuple[sparse.csr_matrix, sparse.csr_matrix]:
        """Displacements in x and in y, (L, 3L) each, of a point of each level, (L,) each [m]."""
        rows = np.arange(self.levels)
        shape = (self.levels, self.size)

        def operator(along: int, arm: Array) -> sparse.csr_matrix:
            values = np.concatenate([np.ones(self.levels), arm])
            places = np.concatenate([3 * rows + along, 3 * rows + 2])
            return sparse.csr_matrix((values, (np.tile(rows, 2), places)), shape=shape)

        return operator(0, self.centre[:, 1] - y), operator(1, x - self.centre[:, 0])

    # ---- stiffness -------------------------------------------------------------------------------------------------

    @cached_property
    def _reaches(self) -> list[tuple[Lateral, sparse.csr_matrix, sparse.csr_matrix]]:
        """Each line's stiffness, its T and Tᵀ."""
        reaches = [(line.lateral, self.reach(line)) for line in self.lines]
        return [(lateral, reach, reach.T.tocsr()) for lateral, reach in reaches]

    @cached_property
    def line_root(self) -> sparse.csr_matrix:
        """C of all lines, (Σn, 3L), with K = CᵀC but for gravity."""
        return sparse.vstack([sparse.csr_matrix(lateral.root) @ reach for lateral, reach, _ in self._reaches], "csr")

    @cached_property
    def gravity_root(self) -> sparse.csr_matrix:
        """D, (3L, 3L), with the geometric stiffness DᵀD: three rows a storey."""
        load = np.zeros(self.levels) if self.gravity is None else self.gravity
        total = above(load)
        held = np.where(total > 0.0, total, 1.0)
        mean = above(load[:, None] * self.centre) / held[:, None]
        square = above(load * (self.gyration**2 + (self.centre**2).sum(axis=1))) / held - (mean**2).sum(axis=1)
        push, spread = np.sqrt(total / self.storey_height), np.sqrt(np.maximum(square, 0.0))

        def blocks(centre: Array, mean: Array, spread: Array) -> Array:
            """Movement of the loads' middle and turn of the loads, (s, 3, 3), by the floors with these centres."""
            block = np.zeros((spread.size, 3, 3))
            block[:, 0, 0] = block[:, 1, 1] = 1.0
            block[:, 0, 2], block[:, 1, 2] = centre[:, 1] - mean[:, 1], mean[:, 0] - centre[:, 0]
            block[:, 2, 2] = spread
            return block

        # the point that moves with a storey's upper floor is taken on its lower floor too
        upper = push[:, None, None] * blocks(self.centre, mean, spread)
        lower = -push[1:, None, None] * blocks(self.centre[:-1], mean[1:], spread[1:])
        data = np.concatenate([upper[:1], np.stack([lower, upper[1:]], axis=1).reshape(-1, 3, 3)])
        columns = np.concatenate(
            [[0], np.column_stack([np.arange(self.levels - 1), np.arange(1, self.levels)]).ravel()]
        )
        starts = np.concatenate([[0], 1 + 2 * np.arange(self.levels)])
        return sparse.bsr_matrix((data, columns, starts), shape=(self.size, self.size)).tocsr()

    @property
    def loaded(self) -> bool:
        """Whether gravity loads act on the drifts."""
        return self.gravity is not None and bool(self.gravity.any())

    @cached_property
    def fixed_root(self) -> Array:
        """Upper triangular C with CᵀC = K, (3L, 3L), without gravity."""
        try:
            return condensed(self.line_root.toarray(), range(self.size), self._names)
        except ModelError as error:
            raise ModelError(error.where, error.found, HELD) from None

    @cached_property
    def root(self) -> Array:
        """Upper triangular C with CᵀC = K, (3L, 3L)."""
        if not self.loaded:
            return self.fixed_root
        refuse_buckled(self.critical, self.level)
        return softened(self.fixed_root, self._pushed)

    @cached_property
    def _pushed(self) -> Array:
        return over(self.gravity_root.toarray(), self.fixed_root)

    @property
    def _names(self) -> tuple[str, ...]:
        moves = ("in x", "in y", "rotation about the vertical")
        return tuple(f'level "{level}", {move}' for level in self.level for move in moves)

    @cached_property
    def critical(self) -> Critical:
        """Elastic critical load factor of the gravity loads, which may not be all zero."""
        assert self.gravity is not None
        return critical(self._pushed, above(self.gravity))

    def force(self, u: Array) -> Array:
        """Forces and torques Ku, (3L, m) [kN, kN, kN·m], of displacements u, (3L, m) [m, m, rad]: line by line."""
        total = np.zeros(u.shape)
        for lateral, reach, back in self._reaches:
            total += back @ lateral.force(reach @ u)
        return total - self.gravity_root.T @ (self.gravity_root @ u) if self.loaded else total

    def energy(self, u: Array) -> Array:
        """Products uᵀKu, (m, m), of displacements u, (3L, m): line by line."""
        total = np.zeros((u.shape[1], u.shape[1]))
        for lateral, reach, _ in self._reaches:
            total += lateral.energy(reach @ u)
        if self.loaded:
            pushed = self.gravity_root @ u
            total -= pushed.T @ pushed
        return total

    # ---- storeys ---------------------------------------------------------------------------------------------------

    def drift(self, u: Array) -> Array:
        """Storey drifts, (3L, m), of displacements u, (3L, m), each at the upper level's centre of mass, and turns."""
        v = u.reshape(self.levels, 3, -1)
        lower = np.vstack([np.zeros((1, *v.shape[1:])), v[:-1]])
        arm = np.diff(self.centre, axis=0, prepend=self.centre[:1])
        lower[:, 0] -= lower[:, 2] * arm[:, 1:]
        lower[:, 1] += lower[:, 2] * arm[:, :1]
        return (v - lower).reshape(u.shape)

    def gravity_shear(self, u: Array) -> Array:
        """What gravity loads in the stiffness push each storey with, (3L, m) [kN, kN, kN·m], at displacements u, (3L, m)."""
        load = np.zeros(self.levels) if self.gravity is None else above(self.gravity)
        push = np.sqrt(load / self.storey_height).repeat(3)
        return push[:, None] * (self.gravity_root @ u)

    def storey_energy(self, u: Array) -> Array:
        """Shears and torque of each storey times its drifts, (L, m), of displacements u, (3L, m); the sum is uᵀKu."""
        v, f = u.reshape(self.levels, 3, -1), self.force(u).reshape(self.levels, 3, -1)
        x, y = self.centre[:, :1], self.centre[:, 1:]
        # both taken to one vertical axis, that of the origin
        moved = np.stack([v[:, 0] + v[:, 2] * y, v[:, 1] - v[:, 2] * x, v[:, 2]], axis=1)
        acting = np.stack([f[:, 0], f[:, 1], f[:, 2] + x * f[:, 1] - y * f[:, 0]], axis=1)
        apart = np.diff(moved, axis=0, prepend=np.zeros((1, *moved.shape[1:])))
        return (above(acting) * apart).sum(axis=1)

    def line_shear(self, u: Array, line: LineOfResistance) -> Array:
        """Storey shears of one `line`, (n, m) [kN], of displacements u, (3L, m)."""
        return above(line.lateral.force(self.reach(line) @ u))


@dataclass(frozen=True, eq=False)
class SparseFloors(Floors):
    """The same for many floors: K is kept sparse, and few modes are found by shift and inversion.

    Of lines that are storey chains K has no more than nine entries in a row.

    Parameters
    ----------
    level, storey_height, centre, gyration, lines, gravity
        As `Floors` takes them.
    """

    @cached_property
    def stiffness(self) -> sparse.csc_matrix:
        """K, (3L, 3L)."""
        fixed = sparse.csc_matrix(self.line_root.T @ self.line_root)
        scale = sparse.diags(1.0 / np.sqrt(np.where(fixed.diagonal() > 0.0, fixed.diagonal(), 1.0)))
        try:
            held = bool((_pivoted_nowhere(sparse.csc_matrix(scale @ fixed @ scale)).U.diagonal() > HOLDS).all())
        except LinAlgError:  # exactly singular
            held = False
        if not held:
            _ = self.fixed_root  # the dense form says where
        if not self.loaded:
            return fixed
        refuse_buckled(self.critical, self.level)
        return sparse.csc_matrix(fixed - self.gravity_root.T @ self.gravity_root)

    @cached_property
    def _factors(self) -> SuperLU:
        return _pivoted_nowhere(self.stiffness)

    @cached_property
    def critical(self) -> Critical:
        """Elastic critical load factor of the gravity loads, which may not be all zero."""
        assert self.gravity is not None
        d, total = self.gravity_root, above(self.gravity)
        k = sparse.csc_matrix(self.line_root.T @ self.line_root)
        value, shape = eigsh(d.T @ d, k=1, M=k, which="LA", v0=np.ones(self.size))
        work = ((d @ shape[:, 0]) ** 2).reshape(self.levels, -1).sum(axis=1)
        storey = int(np.argmax(work))
        return Critical(float(1.0 / value[0]), storey, float(total[storey]))

    def modes(self, mass: Array, keep: int) -> tuple[Array, Array]:
        """First `keep` frequencies, (keep,) [rad/s], and mass-normalised shapes, (3L, keep), for `mass`, (3L,)."""
        if keep * 4 >= self.size:
            return super().modes(mass, keep)
        scale = sparse.diags(1.0 / np.sqrt(mass))
        squares, shapes = eigsh(sparse.csc_matrix(scale @ self.stiffness @ scale), k=keep, sigma=0.0, v0=np.sqrt(mass))
        order = np.argsort(squares)
        return np.sqrt(squares[order]), scale @ shapes[:, order]

    def displacement(self, f: Array) -> Array:
        """Displacements K⁻¹f, (3L, m), of forces f, (3L, m)."""
        return self._factors.solve(f)

    def count_below(self, mass: Array, omega: Array) -> Array:
        """Number of frequencies below each of `omega`, (s,) [rad/s], for `mass`, (3L,): inertia of K - ω²M."""
        inertia = sparse.diags(mass)
        pivots = [_pivoted_nowhere(sparse.csc_matrix(self.stiffness - w * w * inertia)).U.diagonal() for w in omega]
        return np.array([(p < 0.0).sum() for p in pivots], dtype=float)


def _pivoted_nowhere(a: sparse.csc_matrix) -> SuperLU:
    """LU factors of a symmetric matrix in its own order: their pivots have the signs of its eigenvalues (Sylvester)."""
    try:
        factors = splu(a, permc_spec="NATURAL", diag_pivot_thresh=0.0, options={"SymmetricMode": True})
    except RuntimeError as error:
        raise LinAlgError(str(error)) from None
    if not np.array_equal(factors.perm_r, np.arange(a.shape[0])):
        raise LinAlgError("a pivot of exactly 0")
    return factors


def floors_of(
    level: Sequence[str],
    storey_height: Array,
    centre: Array,
    gyration: Array,
    lines: Sequence[LineOfResistance],
    gravity: Array | None = None,
) -> Floors:
    """Rigid floors, dense or sparse by their number.

    Parameters
    ----------
    level, storey_height, centre, gyration, lines, gravity
        As `Floors` takes them.

    Returns
    -------
    Floors
        `SparseFloors` above `DENSE_UP_TO` degrees of freedom.
    """
    kind = Floors if 3 * len(level) <= DENSE_UP_TO else SparseFloors
    return kind(tuple(level), storey_height, centre, gyration, tuple(lines), gravity)
