"""Combination of modes, and response spectrum analysis of a three-storey frame.

Sources: A. Der Kiureghian (1981) and E. L. Wilson, A. Der Kiureghian, E. P. Bayo (1981), Earthquake Engineering and
Structural Dynamics 9 (from memory); A. K. Chopra, Dynamics of Structures, sections 13.7 and 13.8, five-storey frame (from
memory); the three-storey frame of R. W. Clough and J. Penzien in a flat spectrum, computed with 50 digits.
"""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.combine import combined, correlation
from calcsheet.core.modes import modes_of
from calcsheet.core.participation import participation
from calcsheet.core.peaks import peaks


def test_correlation_of_equal_damping(case):
    published = case("05-cqc-coefficients")
    for damping in published.inputs["damping"]:
        found = [correlation(np.array([1.0, r]), damping, "CQC")[0, 1] for r in published.inputs["ratio"]]
        published.meets(f"rho_{round(100 * damping)}", found)


def test_printed_table_of_correlations(case):
    published = case("05-cqc-coefficients")
    omega = np.array(published.inputs["table_omega"])
    published.meets("table_printed", correlation(omega, published.inputs["table_damping"], "CQC"))


def test_five_storey_frame(case, planar):
    """The printed base shears fix the ordinates; everything above the base follows from the modes."""
    published = case("05-chopra-5storey-combination")
    n, storey = published.inputs["n"], published.inputs["storey_height_ft"]
    model = planar([1.0] * n, [100.0] * n, storey * np.arange(1.0, n + 1.0))
    modes = modes_of(model)
    part = participation(model, modes, "x")
    base = np.array(published.inputs["modal_base_shear_kip"])
    found = peaks(model, modes, part, base / part.effective_mass)

    def by_rules(values, *rules):
        return [
            combined(values[None, :], correlation(modes.omega, published.inputs["damping"], r), r)[0] for r in rules
        ]

    published.meets("base_shear_ABS_SRSS_CQC_printed", by_rules(found.shear[0], "absolute", "SRSS", "CQC"))
    published.meets("V5_modal_kip", found.shear[-1])
    published.meets("V5_ABS_SRSS_CQC", by_rules(found.shear[-1], "absolute", "SRSS", "CQC"))
    published.meets("V5_SRSS_CQC_printed", by_rules(found.shear[-1], "SRSS", "CQC"))
    published.meets("Mb_ABS_SRSS_printed", by_rules(found.moment[0], "absolute", "SRSS"))
    published.meets("Mb_ABS_SRSS_CQC", by_rules(found.moment[0], "absolute", "SRSS", "CQC"))


def test_three_storey_frame_in_a_flat_spectrum(case, planar):
    published = case("05-rsa-chain-flat-spectrum")
    mass, stiffness = published.inputs["storey_mass_from_below"], published.inputs["storey_stiffness_from_below"]
    model = planar(mass, stiffness, published.inputs["storey_height_in"] * np.arange(1.0, 4.0))
    modes = modes_of(model)
    flat = published.inputs["A_in_s2"]
    found = peaks(model, modes, participation(model, modes, "x"), np.full(3, flat))
    published.meets("modal_storey_force", found.force.T)
    published.meets("modal_storey_shear", found.shear.T)
    published.meets("modal_overturning_at_storey_base", found.moment.T)
    published.meets("modal_drift", found.drift.T)
    srss = correlation(modes.omega, published.inputs["damping"], "SRSS")
    cqc = correlation(modes.omega, published.inputs["damping"], "CQC")
    shear = combined(found.shear, srss, "SRSS")
    published.meets("SRSS_shear", shear)
    published.meets("CQC_shear", combined(found.shear, cqc, "CQC"))
    published.meets("SRSS_drift", combined(found.drift, srss, "SRSS"))
    published.meets("SRSS_overturning", combined(found.moment, srss, "SRSS"))
    published.meets("sum_modal_base_shear_over_mA", found.shear[0].sum() / (sum(mass) * flat))
    published.meets("SRSS_of_forces_summed_is_not_base_shear", combined(found.force, srss, "SRSS").sum() / shear[0])


def test_ratios_are_the_same_from_either_end(case):
    published = case("05-cqc-coefficients")
    for ratio in published.inputs["ratio"]:
        found = correlation(np.array([1.0, ratio]), 0.05, "CQC")
        assert found[0, 1] == pytest.approx(found[1, 0], rel=1e-12)
