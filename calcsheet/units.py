"""Units at the edge: what headings may say, and how each quantity is shown.

Core units are m, kN, t, s, rad. A unit's factor turns a value in it into core units: core = value * factor.
"""

from __future__ import annotations

import math
import re
from collections.abc import Mapping
from dataclasses import dataclass

STANDARD_GRAVITY = 9.80665
"""Standard acceleration of free fall [m/s²], exact by definition."""

FOOT = 0.3048
INCH = 0.0254
POUND_FORCE = 0.45359237 * STANDARD_GRAVITY / 1000.0
KIP = 1000.0 * POUND_FORCE
"""The international foot and inch [m], the pound-force and the kip [kN], exact by definition."""


class UnitError(ValueError):
    """A unit is unknown or belongs to another quantity.

    Parameters
    ----------
    found : str
        What was given.
    allowed : str
        The units that may be given.
    """

    def __init__(self, found: str, allowed: str) -> None:
        super().__init__(f"{found}; {allowed}")
        self.found = found
        self.allowed = allowed


@dataclass(frozen=True)
class Unit:
    """A unit: ``core = value * factor``."""

    symbol: str
    factor: float


@dataclass(frozen=True)
class Display:
    """How a quantity is shown: in a unit, to a number of significant digits."""

    symbol: str
    factor: float
    digits: int

    def of(self, core: float) -> float:
        """Return a value given in core units in this unit."""
        return core / self.factor


_LENGTH = (Unit("m", 1.0), Unit("cm", 0.01), Unit("mm", 0.001), Unit("ft", FOOT), Unit("in", INCH))
_FORCE = (Unit("kN", 1.0), Unit("MN", 1000.0), Unit("N", 0.001), Unit("kip", KIP), Unit("lbf", POUND_FORCE))

UNITS: Mapping[str, tuple[Unit, ...]] = {
    "length": _LENGTH,
    "elevation": _LENGTH,
    "mass": (
        Unit("t", 1.0),
        Unit("kg", 0.001),
        Unit("kip·s²/ft", KIP / FOOT),
        Unit("kip·s²/in", KIP / INCH),
    ),
    "weight": _FORCE,
    "bending stiffness": (
        Unit("kN·m²", 1.0),
        Unit("MN·m²", 1000.0),
        Unit("GN·m²", 1e6),
        Unit("kip·ft²", KIP * FOOT**2),
        Unit("kip·in²", KIP * INCH**2),
    ),
    "angle": (Unit("°", math.pi / 180.0), Unit("deg", math.pi / 180.0), Unit("rad", 1.0)),
    "shear stiffness": (*_FORCE, Unit("GN", 1e6)),
    "area": (Unit("m²", 1.0), Unit("ft²", FOOT**2)),
    "pressure": (
        Unit("kN/m²", 1.0),
        Unit("kPa", 1.0),
        Unit("N/m²", 0.001),
        Unit("psf", POUND_FORCE / FOOT**2),
        Unit("lbf/ft²", POUND_FORCE / FOOT**2),
        Unit("kip/ft²", KIP / FOOT**2),
    ),
    "unit weight": (
        Unit("kN/m³", 1.0),
        Unit("pcf", POUND_FORCE / FOOT**3),
        Unit("lbf/ft³", POUND_FORCE / FOOT**3),
    ),
    "section area": (
        Unit("m²", 1.0),
        Unit("cm²", 1e-4),
        Unit("mm²", 1e-6),
        Unit("in²", INCH**2),
        Unit("ft²", FOOT**2),
    ),
    "second moment": (
        Unit("m⁴", 1.0),
        Unit("cm⁴", 1e-8),
        Unit("mm⁴", 1e-12),
        Unit("10⁶ mm⁴", 1e-6),
        Unit("in⁴", INCH**4),
        Unit("ft⁴", FOOT**4),
    ),
    "modulus": (
        Unit("GPa", 1e6),
        Unit("MPa", 1e3),
        Unit("kN/m²", 1.0),
        Unit("N/mm²", 1e3),
        Unit("ksi", KIP / INCH**2),
        Unit("psi", POUND_FORCE / INCH**2),
    ),
    "period": (Unit("s", 1.0),),
    "ordinate": (Unit("g", 1.0), Unit("m/s²", 1.0 / STANDARD_GRAVITY)),
    "stiffness": (
        Unit("kN/m", 1.0),
        Unit("kN/mm", 1000.0),
        Unit("MN/m", 1000.0),
        Unit("N/mm", 1.0),
        Unit("N/m", 0.001),
        Unit("kip/in", KIP / INCH),
        Unit("kip/ft", KIP / FOOT),
        Unit("lbf/in", POUND_FORCE / INCH),
    ),
    "flexibility": (
        Unit("m/kN", 1.0),
        Unit("mm/kN", 0.001),
        Unit("mm/MN", 1e-6),
        Unit("in/kip", INCH / KIP),
        Unit("ft/kip", FOOT / KIP),
    ),
}
"""The units that a heading may give, by quantity. Ordinates of a spectrum are held over g."""

_SAME = {"lb": "lbf", "kips": "kip", "lbs": "lbf"}


def _pair(si: Display, us: Display | None = None) -> Mapping[str, Display]:
    return {"SI": si, "US": us or si}


DISPLAY: Mapping[str, Mapping[str, Display]] = {
    "length": _pair(Display("m", 1.0, 4), Display("ft", FOOT, 4)),
    "elevation": _pair(Display("m", 1.0, 4), Display("ft", FOOT, 4)),
    "metres": _pair(Display("m", 1.0, 4)),
    "square metres": _pair(Display("m²", 1.0, 4)),
    "feet": _pair(Display("ft", FOOT, 4)),
    "area": _pair(Display("m²", 1.0, 4), Display("ft²", FOOT**2, 4)),
    "member length": _pair(Display("m", 1.0, 4), Display("in", INCH, 4)),
    "section size": _pair(Display("mm", 0.001, 4), Display("in", INCH, 4)),
    "section area": _pair(Display("mm²", 1e-6, 4), Display("in²", INCH**2, 4)),
    "second moment": _pair(Display("·10⁶ mm⁴", 1e-6, 4), Display("in⁴", INCH**4, 4)),
    "modulus": _pair(Display("GPa", 1e6, 4), Display("ksi", KIP / INCH**2, 4)),
    "joint stiffness": _pair(Display("kN·m", 1.0, 4), Display("kip·in", KIP * INCH, 4)),
    "displacement": _pair(Display("mm", 0.001, 3), Display("in", INCH, 3)),
    "mass": _pair(Display("t", 1.0, 4), Display("kip·s²/ft", KIP / FOOT, 4)),
    "weight": _pair(Display("kN", 1.0, 4), Display("kip", KIP, 4)),
    "force": _pair(Display("kN", 1.0, 4), Display("kip", KIP, 4)),
    "pressure": _pair(Display("kN/m²", 1.0, 3), Display("psf", POUND_FORCE / FOOT**2, 3)),
    "area load": _pair(Display("kN/m²", 1.0, 4), Display("psf", POUND_FORCE / FOOT**2, 4)),
    "unit weight": _pair(Display("kN/m³", 1.0, 4), Display("pcf", POUND_FORCE / FOOT**3, 4)),
    "stiffness": _pair(Display("kN/m", 1.0, 4), Display("kip/in", KIP / INCH, 4)),
    "flexibility": _pair(Display("mm/kN", 0.001, 4), Display("in/kip", INCH / KIP, 4)),
    "bending stiffness": _pair(Display("kN·m²", 1.0, 4), Display("kip·ft²", KIP * FOOT**2, 4)),
    "shear stiffness": _pair(Display("kN", 1.0, 4), Display("kip", KIP, 4)),
    "rotational stiffness": _pair(Display("kN·m/rad", 1.0, 4), Display("kip·ft/rad", KIP * FOOT, 4)),
    "angle": _pair(Display("°", math.pi / 180.0, 4)),
    "moment": _pair(Display("kN·m", 1.0, 4), Display("kip·ft", KIP * FOOT, 4)),
    "energy": _pair(Display("kN·m", 1.0, 3), Display("kip·ft", KIP * FOOT, 3)),
    "acceleration": _pair(Display("m/s²", 1.0, 4), Display("ft/s²", FOOT, 4)),
    "period": _pair(Display("s", 1.0, 4)),
    "frequency": _pair(Display("Hz", 1.0, 4)),
    "circular frequency": _pair(Display("rad/s", 1.0, 4)),
    "share": _pair(Display("%", 0.01, 3)),
    "ratio": _pair(Display("", 1.0, 4)),
    "count": _pair(Display("", 1.0, 4)),
    "correlation": _pair(Display("", 1.0, 4)),
    "coefficient": _pair(Display("", 1.0, 4)),
    "modal energy": _pair(Display("s⁻²", 1.0, 4)),
    "mass times length squared": _pair(Display("t·m²", 1.0, 4), Display("kip·s²·ft", KIP * FOOT, 4)),
    "participation": _pair(Display("√t", 1.0, 4), Display("√(kip·s²/ft)", (KIP / FOOT) ** 0.5, 4)),
    "normalised shape": _pair(Display("1/√t", 1.0, 4), Display("1/√(kip·s²/ft)", (FOOT / KIP) ** 0.5, 4)),
}
"""How each quantity is shown, by system.

The units of members are such that E I/h³ and E A/h come out in those of a stiffness: GPa · 10⁶ mm⁴ / m³ = kN/m.
"metres", "square metres" and "feet" are sizes that a code's empirical formula asks for in that unit; the last two are
Γ and ψ of mass-normalised modes.
"""


def display(quantity: str, system: str) -> Display:
    """Return how a quantity is shown in a system, "SI" or "US" (KeyError for any other)."""
    return DISPLAY[quantity][system]


def parse_unit(text: str, quantity: str) -> Unit:
    """Return the unit that a heading names, in any of its usual spellings.

    Parameters
    ----------
    text : str
        The unit as written, such as "kip s^2/in".
    quantity : str
        A key of `UNITS`.

    Raises
    ------
    UnitError
        The unit is unknown, or one of another quantity.
    """
    wanted = _spelling(text)
    for unit in UNITS[quantity]:
        if _spelling(unit.symbol) == wanted:
            return unit
    allowed = f"must be {allowed_units(quantity)}"
    for other in quantities_of(text):
        raise UnitError(f'"{text}" is a unit of {other}, not of {quantity}', allowed)
    raise UnitError(f'"{text}" is no unit of {quantity}' if text.strip() else "names no unit", allowed)


def quantities_of(text: str) -> tuple[str, ...]:
    """Return the quantities that a unit is one of, in any of its usual spellings: none where it is no unit."""
    wanted = _spelling(text)
    return tuple(q for q, units in UNITS.items() if any(_spelling(unit.symbol) == wanted for unit in units))


def allowed_units(quantity: str) -> str:
    """Return the units of a quantity as words: "t, kg, kip·s²/ft or kip·s²/in"."""
    *most, last = (unit.symbol for unit in UNITS[quantity])
    return f"{', '.join(most)} or {last}" if most else last


_POWERS = str.maketrans("²³⁴⁶", "2346", "^")


def _spelling(text: str) -> str:
    """One spelling of a unit's many: superscripts, signs of multiplication and plurals levelled."""
    text = re.sub(r"\s*/\s*", "/", text.strip().translate(_POWERS))
    text = re.sub(r"[\s·⋅∙*×.-]+", "·", text)
    return "/".join("·".join(_SAME.get(name, name) for name in part.split("·")) for part in text.split("/"))
