"""The view of the drift check: governing storey, second order, irregularities, separation."""

from __future__ import annotations

import re

import pytest

HOSTILE = """\
level,storey height [m],mass [t],stiffness x [kN/m],stiffness y [kN/m],gravity load [kN]
<b>R</b>_1 {0},3,100,50000,80000,950
"$x$ & ""y"" z",4,200,100000,160000,1950
"""


@pytest.mark.parametrize("basis", ["EN", "7-16", "7-22", "IS", "points"])
def test_numbers_and_units(demand_job, rendered, document, numbers_hold, us, basis):
    for how, system, unit in (({}, "SI", "mm"), (us, "US", "in")):
        job = demand_job(basis, **how)
        seen = document(rendered(job, "drift"))
        numbers_hold(seen.numbers, job.payloads(), system)
        for heading in ("elastic drift", "design drift", "limit", "design displacement"):
            assert f"{heading} [{unit}]" in seen.words
        assert "share of limit [%]" in seen.words
        assert "Stiffness set: gross." in seen.words


def test_the_governing_storey_is_named_and_marked(demand_job, rendered, document):
    html = rendered(demand_job("EN"), "drift")
    assert "below level Roof: " in document(html).words
    for row in re.findall(r"<tr class=marked>(.*?)</tr>", html):
        assert row.startswith('<th scope="row">Roof</th>')
    assert html.count("<tr class=marked>") == 2
    assert html.count('<span class="passes">passes</span>') >= 2
    exceeding = rendered(
        demand_job("EN", ("ground_acceleration = 0.2", "ground_acceleration = 0.7"), name="more"), "drift"
    )
    assert 'of its limit, <span class="exceeds">exceeds</span>' in exceeding


def test_a_capped_drift_is_said(demand_job, rendered, document):
    said = "the elastic spectrum's drift governs"
    assert said in document(rendered(demand_job("EN", ("q_x = 3", "q_x = 3\nq_d_x = 4")), "drift")).words
    assert said not in document(rendered(demand_job("EN", name="plain"), "drift")).words


def test_what_is_not_assessed_names_what_is_missing(demand_job, rendered, document):
    bare = "\n".join(line.rpartition(",")[0] for line in HOSTILE.splitlines()) + "\n"
    seen = document(rendered(demand_job("EN", storeys=bare), "drift"))
    assert "not assessed: gravity load column is missing" in seen.words
    seen = document(rendered(demand_job("IS", name="IS"), "drift"))
    assert "not assessed: not in this edition" in seen.words
    seen = document(rendered(demand_job("points", name="points"), "drift"))
    assert "separationnot assessed: not in this edition" in seen.words.replace("\n", "")


@pytest.mark.parametrize("basis", ["EN", "7-16", "7-22", "IS", "points"])
def test_screens_come_in_four_words(demand_job, rendered, basis):
    job = demand_job(basis)
    html = rendered(job, "drift")
    for item in job.payload("drift")["result"]["directions"]:
        for screen in item["screens"]:
            assert screen["name"] in html
            assert screen["verdict"] in ("passes", "exceeds", "judgement", "not assessed")
            assert f'class="{screen["verdict"].replace(" ", "-")}">{screen["verdict"]}</span>' in html
            assert screen["verdict"] != "not assessed" or "missing" in screen["text"] or "no code" in screen["text"]


@pytest.mark.parametrize("name", ["peaks", "drift", "actions", "comparison", "demand"])
def test_names_of_levels_stay_text(demand_job, rendered, document, drawn, name):
    job = demand_job("EN", storeys=HOSTILE)
    seen = document(rendered(job, name))
    assert "b" not in {tag for tag, _ in seen.tags}
    if name in ("peaks", "drift", "actions"):
        assert "<b>R</b>_1 {0}" in seen.words
        assert '$x$ & "y" z' in seen.words
    for figure in drawn(job, name):
        assert "<b>" not in figure.svg


def test_the_figure_is_the_same_every_time(demand_job, drawn, us):
    job = demand_job("7-16", **us)
    (first,), (second,) = drawn(job, "drift"), drawn(job, "drift")
    assert first.svg == second.svg
    for text in ("storey drift in x [in]", "storey drift in y [in]", "elevation [ft]", "design drift", "limit"):
        assert text in first.svg
