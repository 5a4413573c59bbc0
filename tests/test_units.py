from __future__ import annotations

import pint
import pytest

from calcsheet.units import DISPLAY, STANDARD_GRAVITY, UNITS, UnitError, allowed_units, display, parse_unit

CORE = {
    "length": "m",
    "elevation": "m",
    "displacement": "m",
    "metres": "m",
    "square metres": "m**2",
    "feet": "m",
    "area": "m**2",
    "member length": "m",
    "section size": "m",
    "section area": "m**2",
    "second moment": "m**4",
    "modulus": "kN/m**2",
    "joint stiffness": "kN*m",
    "pressure": "kN/m**2",
    "area load": "kN/m**2",
    "unit weight": "kN/m**3",
    "ordinate": "standard_gravity",
    "mass": "tonne",
    "weight": "kN",
    "force": "kN",
    "stiffness": "kN/m",
    "flexibility": "m/kN",
    "bending stiffness": "kN*m**2",
    "shear stiffness": "kN",
    "rotational stiffness": "kN*m/rad",
    "angle": "rad",
    "moment": "kN*m",
    "energy": "kJ",
    "acceleration": "m/s**2",
    "period": "s",
    "frequency": "1/s",
    "circular frequency": "rad/s",
    "share": "",
    "ratio": "",
    "count": "",
    "coefficient": "",
    "correlation": "",
    "modal energy": "1/s**2",
    "mass times length squared": "tonne*m**2",
    "participation": "tonne**0.5",
    "normalised shape": "tonne**-0.5",
}
REGISTRY = pint.UnitRegistry()


PINT = {
    "t": "tonne",
    "g": "standard_gravity",
    "psf": "lbf/ft**2",
    "pcf": "lbf/ft**3",
    "t·m²": "tonne*m**2",
    "10⁶ mm⁴": "km*mm**3",  # pint takes no number in a unit
    "·10⁶ mm⁴": "km*mm**3",
    "%": "percent",
    "°": "degree",
    "Hz": "1/s",  # pint's hertz counts turns, in radians
    "s⁻²": "s**-2",
    "√t": "tonne**0.5",
    "√(kip·s²/ft)": "(kip*s**2/ft)**0.5",
    "1/√t": "tonne**-0.5",
    "1/√(kip·s²/ft)": "(kip*s**2/ft)**-0.5",
    "": "dimensionless",
}


def in_core(symbol: str, quantity: str) -> float:
    """The factor of a unit by pint, which knows nothing of the table."""
    powers = {"²": "**2", "³": "**3", "⁴": "**4", "·": "*"}
    spelled = PINT.get(symbol, symbol.translate(str.maketrans(powers)))
    return REGISTRY.Quantity(1.0, spelled).to(CORE[quantity] or "dimensionless").magnitude


@pytest.mark.parametrize(("quantity", "unit"), [(q, u) for q, units in UNITS.items() for u in units])
def test_units_of_headings_agree_with_pint(quantity, unit):
    assert unit.factor == pytest.approx(in_core(unit.symbol, quantity), rel=1e-12)


@pytest.mark.parametrize(("quantity", "system"), [(q, s) for q in DISPLAY for s in ("SI", "US")])
def test_units_shown_agree_with_pint(quantity, system):
    shown = display(quantity, system)
    assert shown.factor == pytest.approx(in_core(shown.symbol, quantity), rel=1e-12)
    assert shown.of(3.0 * shown.factor) == pytest.approx(3.0, rel=1e-15)
    assert shown.digits in (3, 4)


def test_gravity_is_pints():
    assert REGISTRY.Quantity(1.0, "standard_gravity").to("m/s**2").magnitude == STANDARD_GRAVITY


@pytest.mark.parametrize(
    "spelled", ["kip·s²/in", "kip s2/in", "kip*s^2/in", "kip-s²/in", "kip s^2/in", " kips × s² / in "]
)
def test_spellings_of_a_mass(spelled):
    assert parse_unit(spelled, "mass") == parse_unit("kip·s²/in", "mass")


@pytest.mark.parametrize("spelled", ["kN/m³", "kN/m3", "kN / m^3"])
def test_spellings_of_a_unit_weight(spelled):
    assert parse_unit(spelled, "unit weight") == parse_unit("kN/m³", "unit weight")


@pytest.mark.parametrize("spelled", ["10⁶ mm⁴", "10^6 mm^4", "10⁶·mm⁴"])
def test_spellings_of_a_second_moment(spelled):
    assert parse_unit(spelled, "second moment") == parse_unit("10⁶ mm⁴", "second moment")


def test_pounds_of_force():
    assert parse_unit("lb/ft^2", "pressure").factor == parse_unit("psf", "pressure").factor
    assert parse_unit("lb", "weight") == parse_unit("lbf", "weight")
    assert parse_unit("lb/in", "stiffness").symbol == "lbf/in"


@pytest.mark.parametrize(
    ("text", "quantity", "message"),
    [
        (
            "kN",
            "mass",
            '"kN" is a unit of weight, not of mass; must be t, kg, kip·s²/ft or kip·s²/in',
        ),
        ("furlong", "length", '"furlong" is no unit of length; must be m, cm, mm, ft or in'),
        ("", "length", "names no unit; must be m, cm, mm, ft or in"),
        ("mN", "weight", '"mN" is no unit of weight; must be kN, MN, N, kip or lbf'),
    ],
)
def test_refusals(text, quantity, message):
    with pytest.raises(UnitError) as caught:
        parse_unit(text, quantity)
    assert str(caught.value) == message


def test_every_unit_is_named_as_allowed_and_read_back():
    for quantity, units in UNITS.items():
        for unit in units:
            assert unit.symbol in allowed_units(quantity)
            assert parse_unit(unit.symbol, quantity) == unit


def test_a_quantity_of_one_unit():
    assert allowed_units("period") == "s"
