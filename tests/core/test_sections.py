"""Properties of sections against handbook formulas and integrals."""

from __future__ import annotations

import mpmath
import pytest

from calcsheet.core.sections import Section, properties_of


def of(shape, **sizes):
    return properties_of(Section("S", "M", shape, **sizes))


def test_rectangle_by_hand():
    # 300 × 600 mm: A = 0.18 m², I = 0.3·0.6³/12 = 5.4e-3 and 0.6·0.3³/12 = 1.35e-3 m⁴, A_s = 5/6 A = 0.15 m²
    found = of("rectangle", depth=0.6, width=0.3)
    assert found.area == pytest.approx(0.18)
    assert (found.major, found.minor) == pytest.approx((5.4e-3, 1.35e-3))
    assert (found.shear_major, found.shear_minor) == pytest.approx((0.15, 0.15))


def test_the_major_axis_is_that_of_the_larger_second_moment():
    assert of("rectangle", depth=0.3, width=0.6) == of("rectangle", depth=0.6, width=0.3)
    box = of("box", depth=0.25, width=0.4, thickness=0.01)
    assert box == of("box", depth=0.4, width=0.25, thickness=0.01)
    assert box.shear_major == pytest.approx(2 * 0.01 * 0.4)  # the webs, along the longer side


def test_circle_and_pipe_by_integrals():
    # A = ∫2πr dr, I = ∫πr³ dr (polar moment halved)
    for inner, found in ((0.0, of("circle", depth=0.5)), (0.19, of("pipe", depth=0.5, thickness=0.06))):
        assert found.area == pytest.approx(float(mpmath.quad(lambda r: 2 * mpmath.pi * r, [inner, 0.25])), rel=1e-12)
        assert found.major == pytest.approx(float(mpmath.quad(lambda r: mpmath.pi * r**3, [inner, 0.25])), rel=1e-12)
        assert found.minor == found.major


def test_box_by_hand():
    # 200 × 100 × 10 mm: A = 20 000 − 180·80 = 5 600 mm²; I = (100·200³ − 80·180³)/12 = 27.787 (10⁶ mm⁴)
    found = of("box", depth=0.2, width=0.1, thickness=0.01)
    assert found.area == pytest.approx(5600e-6)
    assert found.major == pytest.approx(27.787e-6, rel=1e-4)
    assert found.minor == pytest.approx((200 * 100**3 - 180 * 80**3) / 12 * 1e-12)


def test_shear_area_of_a_rectangle_by_energy():
    # A_s = I²/∫(Q²/b) dA with Q = b(d²/4 − y²)/2 (Timoshenko and Gere, strain energy of shear, from memory)
    b, d = 0.3, 0.6
    second = b * d**3 / 12
    energy = mpmath.quad(lambda y: (b * (d**2 / 4 - y**2) / 2) ** 2 / b, [-d / 2, d / 2])
    assert of("rectangle", depth=d, width=b).shear_major == pytest.approx(float(second**2 / energy), rel=1e-12)


def test_an_own_section_has_what_is_given():
    found = of("own", area=7e-3, major=9e-5)
    assert (found.area, found.major, found.minor, found.shear_major) == (7e-3, 9e-5, 0.0, 0.0)
    assert found.about("major") == (9e-5, 0.0)
