"""The cantilever stick: a wall or core bending and shearing from its base, a Timoshenko element a storey.

Each level has a translation u and a rotation θ = du/dz of the section. An element of height h strains in two ways: in
pure bending, by θ₂ - θ₁ with stiffness EI/h, and in shear with bending, by (u₂ - u₁) - h(θ₁ + θ₂)/2 with stiffness
1/(h³/12EI + h/GA_s). The rotations carry no mass and are condensed out.

Sources
-------
J. S. Przemieniecki, Theory of Matrix Structural Analysis, on beam elements with shear deformation (from memory).
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import ClassVar

import numpy as np

from calcsheet.core.arrays import Array, Frozen, positive
from calcsheet.core.condense import condensed
from calcsheet.core.errors import ModelError
from calcsheet.core.given import Given
from calcsheet.core.planar import Planar, above
from calcsheet.core.rooted import Rooted


@dataclass(frozen=True, eq=False)
class Stick(Rooted, Planar, Frozen):
    """Lateral stiffness of a cantilever stick.

    Parameters
    ----------
    bending : (n,) array
        EI of each storey, lowest first [kN·m²].
    shear : (n,) array or None
        GA_s of each storey [kN]; None where shear deformation is neglected.
    storey_height : (n,) array
        Height of each storey [m].

    Raises
    ------
    ModelError
        A value that is not finite and above zero, by its number from the base, or arrays of different lengths.
    """

    bending: Array
    shear: Array | None
    storey_height: Array
    kind: ClassVar[str] = "cantilever stick"
    asymmetry: ClassVar[float] = 0.0
    columns: ClassVar[tuple[Given, ...]] = (
        Given("bending", "bending stiffness"),
        Given("shear", "shear stiffness", optional=True),
    )
    table: ClassVar[str] = ""

    def __post_init__(self) -> None:
        units = {"bending": "bending stiffness [kN·m²]", "shear": "shear stiffness [kN]", "storey_height": "height [m]"}
        for name, what in units.items():
            values = getattr(self, name)
            if values is None:
                continue
            object.__setattr__(self, name, positive(values, what))
            if values.size != np.size(self.bending):
                allowed = f"must have {np.size(self.bending)}, one a storey"
                raise ModelError(what, f"{values.size} entries", allowed)

    @classmethod
    def of(cls, columns: Mapping[str, Array | None], storey_height: Array) -> Stick:
        """A stick from its `columns` by field, and each `storey_height`."""
        assert columns["bending"] is not None
        return cls(columns["bending"], columns["shear"], storey_height)

    def times(self, factor: float) -> Stick:
        """The same with every stiffness times `factor`."""
        return Stick(self.bending * factor, None if self.shear is None else self.shear * factor, self.storey_height)

    @property
    def size(self) -> int:
        """Number of degrees of freedom, n."""
        return int(self.bending.size)

    @cached_property
    def element_root(self) -> Array:
        """C of translations and rotations, (2n, 2n): strains of the elements times roots of their stiffnesses."""
        n, h = self.size, self.storey_height
        flexible = h**3 / (12.0 * self.bending) + (0.0 if self.shear is None else h / self.shear)
        drift = np.eye(n) - np.eye(n, k=-1)
        mean = 0.5 * (np.eye(n) + np.eye(n, k=-1))
        shearing = np.hstack([drift, -h[:, None] * mean]) / np.sqrt(flexible)[:, None]
        bending = np.hstack([np.zeros((n, n)), drift]) * np.sqrt(self.bending / h)[:, None]
        return np.vstack([shearing, bending])

    @cached_property
    def root(self) -> Array:
        """Upper triangular C with CᵀC = K, (n, n), the rotations condensed out."""
        return condensed(self.element_root, range(self.size))

    def displacement(self, f: Array) -> Array:
        """Displacements K⁻¹f, (n, m) [m], of forces f, (n, m) [kN]: by statics, sums only.

        Shears and moments from the top down, then rotations and displacements from the base up.
        """
        h, bending = self.storey_height[:, None], self.bending[:, None]
        shear = above(f)
        foot = above(shear * h)
        top = np.vstack([foot[1:], np.zeros((1, f.shape[1]))])
        turned = np.cumsum((shear * h / 2.0 + top) * h / bending, axis=0)
        below = np.vstack([np.zeros((1, f.shape[1])), turned[:-1]])
        own = (shear * h / 3.0 + top / 2.0) * h**2 / bending
        if self.shear is not None:
            own = own + shear * h / self.shear[:, None]
        return np.cumsum(below * h + own, axis=0)
