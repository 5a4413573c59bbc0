"""Cross-sections of members: area, second moments and shear areas, from dimensions or as given."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field

from calcsheet.core.arrays import agrees

SHAPES: Mapping[str, tuple[str, ...]] = {
    "rectangle": ("depth", "width"),
    "circle": ("depth",),
    "box": ("depth", "width", "thickness"),
    "pipe": ("depth", "thickness"),
    "own": (),
}
"""Shapes of a section, with the dimensions that each takes; "own" gives its properties instead."""
OWN = ("area", "major", "minor", "shear_area")
"""Properties that a section of its own shape may give."""
AXES = ("major", "minor")
"""The axes that a section bends about: the major axis is that of the larger second moment."""


@dataclass(frozen=True)
class Material:
    """A linear elastic material.

    Parameters
    ----------
    name : str
        Its name.
    kind : {"concrete", "masonry", "steel", "timber", "other"}
        What it is: concrete and masonry crack.
    modulus : float
        Modulus of elasticity E [kN/m²].
    shear_modulus : float
        Shear modulus G [kN/m²]; 0 where it isn't given.
    """

    name: str
    kind: str
    modulus: float
    shear_modulus: float


@dataclass(frozen=True)
class Section:
    """A cross-section as it is given.

    Parameters
    ----------
    name : str
        Its name.
    material : str
        Name of its material.
    shape : str
        One of `SHAPES`.
    depth, width, thickness : float or None
        Outer dimensions and wall thickness [m]; None where the shape has none.
    area : float or None
        Area, of an own shape [m²].
    major, minor : float or None
        Second moments about the two axes, of an own shape [m⁴].
    shear_area : float or None
        Shear area in bending about the major axis, of an own shape [m²].
    """

    name: str
    material: str
    shape: str
    depth: float | None = None
    width: float | None = None
    thickness: float | None = None
    area: float | None = None
    major: float | None = None
    minor: float | None = None
    shear_area: float | None = None


@dataclass(frozen=True)
class Properties:
    """Properties of a cross-section; 0 where a section of its own shape doesn't give one.

    Parameters
    ----------
    area : float
        Area A [m²].
    major, minor : float
        Second moments I about the major and the minor axis [m⁴].
    shear_major, shear_minor : float
        Shear areas A_s in bending about each [m²].
    """

    area: float = field(metadata=agrees(rtol=1e-12))
    major: float = field(metadata=agrees(rtol=1e-12))
    minor: float = field(metadata=agrees(rtol=1e-12))
    shear_major: float = field(metadata=agrees(rtol=1e-12))
    shear_minor: float = field(metadata=agrees(rtol=1e-12))

    def about(self, axis: str) -> tuple[float, float]:
        """Second moment [m⁴] and shear area [m²] in bending about `axis`, "major" or "minor"."""
        return (self.major, self.shear_major) if axis == "major" else (self.minor, self.shear_minor)


def properties_of(section: Section) -> Properties:
    """Properties of a cross-section.

    Parameters
    ----------
    section : Section
        The section, with the dimensions that its shape takes.

    Notes
    -----
    Shear areas over the area: 5/6 of a rectangle, 9/10 of a circle, 1/2 of a thin pipe, and the two webs of a box
    (Roark's Formulas for Stress and Strain, form factors of beams, from memory).
    """
    depth, width, t = section.depth or 0.0, section.width or 0.0, section.thickness or 0.0
    if section.shape == "own":
        given = (section.area, section.major, section.minor, section.shear_area)
        area, major, minor, shear = (value or 0.0 for value in given)
        return Properties(area, major, minor, shear, 0.0)
    if section.shape in ("circle", "pipe"):
        inner = depth - 2.0 * t if section.shape == "pipe" else 0.0
        area = math.pi / 4.0 * (depth * depth - inner * inner)
        second = area / 16.0 * (depth * depth + inner * inner)
        shear = area * (0.5 if section.shape == "pipe" else 0.9)
        return Properties(area, second, second, shear, shear)
    hollow = (depth - 2.0 * t, width - 2.0 * t) if section.shape == "box" else (0.0, 0.0)
    area = depth * width - hollow[0] * hollow[1]
    about = [
        (
            (b * d * d * d - inner_b * inner_d * inner_d * inner_d) / 12.0,
            2.0 * t * d if section.shape == "box" else 5.0 / 6.0 * area,
        )
        for d, b, inner_d, inner_b in ((depth, width, *hollow), (width, depth, *hollow[::-1]))
    ]
    (major, shear_major), (minor, shear_minor) = sorted(about, reverse=True)
    return Properties(area, major, minor, shear_major, shear_minor)
