"""Rules of combination by numbers worked by hand."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.combine import RULES, combined, correlation
from calcsheet.core.errors import ModelError


def test_cqc_of_equal_damping():
    """8 ξ² (1 + r) r^1.5/((1 - r²)² + 4 ξ² r (1 + r)²) at r = 2, ξ = 0.05."""
    # 8 × 0.0025 × 3 × 2^1.5 = 0.169706; (1 - 4)² + 4 × 0.0025 × 2 × 9 = 9.18
    by_hand = 8 * 0.0025 * 3 * 2**1.5 / (9 + 4 * 0.0025 * 2 * 9)
    found = correlation(np.array([10.0, 20.0]), 0.05, "CQC")
    assert found == pytest.approx(np.array([[1.0, by_hand], [by_hand, 1.0]]), rel=1e-13)


def test_cqc_of_unequal_damping():
    """ξ = 0.02 and 0.08 at r = 1.25, by the full formula, and the same from the other end."""
    top = 8 * (0.02 * 0.08) ** 0.5 * (0.02 + 1.25 * 0.08) * 1.25**1.5
    low = (1 - 1.25**2) ** 2 + 4 * 0.02 * 0.08 * 1.25 * (1 + 1.25**2) + 4 * (0.02**2 + 0.08**2) * 1.25**2
    found = correlation(np.array([8.0, 10.0]), [0.02, 0.08], "CQC")
    assert found[0, 1] == pytest.approx(top / low, rel=1e-13)
    assert found[1, 0] == pytest.approx(top / low, rel=1e-13)


def test_close_groups():
    """Up to 10 % of the lower: 10 and 11, then 12.1 by its neighbour; 13.4 is 10.7 % above."""
    omega = np.array([10.0, 11.0, 12.1, 13.4])
    together = [[1, 1, 1, 0], [1, 1, 1, 0], [1, 1, 1, 0], [0, 0, 0, 1]]
    assert correlation(omega, 0.05, "grouped").tolist() == together
    mixed = [2, 0, 3, 1]
    assert (correlation(omega[mixed], 0.05, "grouped") == np.array(together)[np.ix_(mixed, mixed)]).all()


@pytest.mark.parametrize(
    ("rule", "expected"),
    [
        ("SRSS", 13.0),  # √(3² + 4² + 12²)
        ("absolute", 19.0),
        ("grouped", (7**2 + 12**2) ** 0.5),  # (3 + 4) together, 12 apart
    ],
)
def test_combined(rule, expected):
    related = correlation(np.array([10.0, 10.5, 30.0]), 0.05, rule)
    peaks = np.array([[3.0, -4.0, 12.0], [-3.0, 4.0, -12.0]])
    assert combined(peaks, related, rule) == pytest.approx([expected, expected], rel=1e-14)


def test_cqc_keeps_signs():
    """ρ of above: √(800² + 200² + 2 ρ 800 × 200), √(400² + 200² - 2 ρ 400 × 200)."""
    rho = 8 * 0.0025 * 3 * 2**1.5 / 9.18
    related = correlation(np.array([10.0, 20.0]), 0.05, "CQC")
    found = combined(np.array([[800.0, 200.0], [400.0, -200.0]]), related, "CQC")
    by_hand = [(680000 + 2 * rho * 160000) ** 0.5, (200000 - 2 * rho * 80000) ** 0.5]
    assert found == pytest.approx(by_hand, rel=1e-13)


@pytest.mark.parametrize("rule", RULES)
@pytest.mark.parametrize(
    ("damping", "shown"), [(0.0, "0"), (-0.02, "-0.02"), (1.0, "1"), (5.0, "5"), ([0.05, 1.5], "1.5"), (np.nan, "nan")]
)
def test_a_damping_ratio_outside_its_range(rule, damping, shown):
    with pytest.raises(ModelError) as caught:
        correlation(np.array([10.0, 20.0]), damping, rule)
    assert str(caught.value) == f"damping ratio: got {shown}; must be above 0 and below 1"


def test_an_unknown_rule():
    with pytest.raises(ModelError) as caught:
        correlation(np.array([10.0]), 0.05, "sum")
    assert str(caught.value) == 'rule of combination: got "sum"; must be SRSS, CQC, absolute or grouped'
