"""What holds for every combination of modal peaks."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calcsheet.core.combine import RULES, combined, correlation

profile = settings.get_profile("calcsheet")
rules = st.sampled_from(RULES)
damping = st.floats(0.005, 0.3)


@st.composite
def responses(draw, least: int = 1):
    """Frequencies [rad/s], ascending, and signed modal peaks of three quantities."""
    m = draw(st.integers(least, 8))
    ratio = draw(st.lists(st.floats(1.0, 3.0), min_size=m, max_size=m))
    values = st.floats(-1e4, 1e4, allow_subnormal=False)
    peaks = draw(st.lists(st.lists(values, min_size=m, max_size=m), min_size=3, max_size=3))
    return 2.0 * np.cumprod(ratio), np.array(peaks)


def alike(found, expected):
    """Equal to rounding, also where modes cancel."""
    return found == pytest.approx(expected, rel=1e-9, abs=1e-6 * max(1.0, float(np.abs(expected).max())))


@profile
@given(responses(), rules, damping, st.randoms(use_true_random=False))
def test_order_of_modes_and_of_rows_does_not_matter(response, rule, xi, random):
    omega, peaks = response
    expected = combined(peaks, correlation(omega, xi, rule), rule)
    modes, rows = random.sample(range(omega.size), omega.size), random.sample(range(3), 3)
    found = combined(peaks[np.ix_(rows, modes)], correlation(omega[modes], xi, rule), rule)
    assert alike(found, expected[rows])


@profile
@given(responses(), rules, damping)
def test_twice_the_demand_is_twice_the_peak_and_the_sign_of_the_demand_does_not_matter(response, rule, xi):
    omega, peaks = response
    related = correlation(omega, xi, rule)
    expected = combined(peaks, related, rule)
    assert alike(combined(-2.0 * peaks, related, rule), 2.0 * expected)


@profile
@given(responses(), damping)
def test_no_rule_is_above_the_absolute_sum(response, xi):
    omega, peaks = response
    found = {rule: combined(peaks, correlation(omega, xi, rule), rule) for rule in RULES}
    above = found["absolute"] * (1.0 + 1e-9) + 1e-6
    for rule in RULES:
        assert (found[rule] <= above).all()
    assert (found["SRSS"] <= found["grouped"] * (1.0 + 1e-9) + 1e-6).all()


@profile
@given(responses(least=2), damping)
def test_cqc_is_srss_where_modes_are_far_apart(response, xi):
    omega, peaks = response
    apart = 2.0 * 300.0 ** np.arange(omega.size)
    srss = combined(peaks, np.eye(omega.size), "SRSS")
    cqc = combined(peaks, correlation(apart, xi, "CQC"), "CQC")
    assert cqc == pytest.approx(srss, rel=0.01, abs=1e-3)


@profile
@given(responses(), damping)
def test_cqc_of_identical_modes_is_the_algebraic_sum(response, xi):
    omega, peaks = response
    cqc = combined(peaks, correlation(np.full(omega.size, 7.0), xi, "CQC"), "CQC")
    scale = max(1.0, float(np.abs(peaks).sum()))
    assert cqc == pytest.approx(np.abs(peaks.sum(axis=1)), rel=1e-6, abs=1e-6 * scale)


@profile
@given(responses(), st.data())
def test_correlations_are_symmetric_within_one_and_make_no_negative_square(response, data):
    omega, _ = response
    xi = np.array(data.draw(st.lists(damping, min_size=omega.size, max_size=omega.size)))
    related = correlation(omega, xi, "CQC")
    assert related == pytest.approx(related.T, rel=1e-12)
    assert np.diag(related) == pytest.approx(np.ones(omega.size), rel=1e-12)
    assert ((related > 0.0) & (related <= 1.0 + 1e-12)).all()
    assert np.linalg.eigvalsh(related).min() > -1e-10
