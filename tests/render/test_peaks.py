"""The view of the modal peaks: enough to check a combined base shear by hand."""

from __future__ import annotations

import math
import re

import pytest

TALL = "level,storey height [m],mass [t],stiffness x [kN/m],stiffness y [kN/m],gravity load [kN]\n" + "".join(
    f"{n},3,{100 + n},{50000 + 4000 * (12 - n)},{60000 + 4000 * (12 - n)},1000\n" for n in range(12, 0, -1)
)


def value(text):
    return float(re.sub(r"\s", "", text).replace("\u2212", "-"))


@pytest.mark.parametrize("basis", ["EN", "7-16", "IS", "points"])
def test_numbers_and_units(demand_job, rendered, document, numbers_hold, us, basis):
    for how, system, headings in (
        ({}, "SI", ("ordinate [m/s²]", "effective mass [t]", "base shear [kN]", "base moment [kN·m]", "mode 2 [kN]")),
        (us, "US", ("ordinate [ft/s²]", "effective mass [kip·s²/ft]", "base shear [kip]", "base moment [kip·ft]")),
    ):
        job = demand_job(basis, **how)
        seen = document(rendered(job, "peaks"))
        numbers_hold(seen.numbers, job.payloads(), system)
        for heading in headings:
            assert heading in seen.words
        assert "Modal values in x, unscaled" in seen.words
        assert "neither scaled nor amplified for second order" in seen.words


def test_the_combined_base_shear_from_printed_numbers(demand_job, rendered, document):
    shown = dict(document(rendered(demand_job("EN"), "peaks")).numbers)
    at = "/peaks/result/directions/0"
    first, second, rho = (value(shown[f"{at}/{p}"]) for p in ("shear/0/0", "shear/0/1", "related/0/1"))
    combined = value(shown[f"{at}/forces/shear/0"])
    assert math.sqrt(first**2 + second**2 + 2 * rho * first * second) == pytest.approx(combined, rel=2e-4)
    mass, ordinate = (
        value(shown["/participation/result/directions/0/effective_mass/0"]),
        value(shown[f"{at}/ordinate/0"]),
    )
    assert mass * ordinate == pytest.approx(first, rel=3e-4)


def test_the_residual_has_a_row_and_a_column(demand_job, rendered, document, numbers_hold):
    job = demand_job("EN", keep=1)
    html = rendered(job, "peaks")
    assert html.count('<th scope="row">residual</th>') == 2  # x and y
    seen = document(html)
    assert seen.words.count("residual [kN]") == 2
    numbers_hold(seen.numbers, job.payloads(), "SI")


def test_many_modes_show_their_first_ten_shears_and_say_so(demand_job, rendered, document):
    html = rendered(demand_job("EN", storeys=TALL), "peaks")
    seen = document(html).words
    assert "mode 10 [kN]" in seen
    assert "mode 11 [kN]" not in seen
    assert seen.count("list the first 10 of 12; combined values hold all") == 2
    assert html.count('<th scope="row">12</th>') >= 2  # all modes stand in the table of modal values
