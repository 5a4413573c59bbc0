"""The view of the demand: what the edition says, its parameters, ordinates, the spectrum drawn."""

from __future__ import annotations

import re

import pytest

from calcsheet.core.codes.registry import EDITIONS


@pytest.mark.parametrize("basis", ["EN", "7-16", "7-22", "IS", "points"])
def test_numbers_and_units(demand_job, rendered, document, numbers_hold, us, basis):
    job = demand_job(basis)
    seen = document(rendered(job, "demand"))
    numbers_hold(seen.numbers, job.payloads(), "SI")
    assert "design ordinate [m/s²]" in seen.words
    assert "period T [s]" in seen.words
    job = demand_job(basis, **us)
    seen = document(rendered(job, "demand"))
    numbers_hold(seen.numbers, job.payloads(), "US")
    assert "design ordinate [ft/s²]" in seen.words
    assert "m/s²" not in seen.words


@pytest.mark.parametrize("basis", ["EN", "7-16", "7-22", "IS", "points"])
def test_every_parameter_that_was_given_is_shown_under_its_key(demand_job, rendered, document, basis):
    job = demand_job(basis)
    seen = document(rendered(job, "demand"))
    given = job.payload("card")["inputs"]["basis"]
    assert EDITIONS[given["edition"]].name in seen.words
    for key in given:
        if key != "edition":
            assert f"basis.{key}" in seen.words, key
    level = re.sub(r"_", "", job.payload("basis")["result"]["level"])
    assert level in seen.words
    assert "is this analysis permitted? x" in seen.words
    assert "accidental torsion, y" in seen.words


def test_torsion_that_is_not_assessed_carries_the_word(demand_job, rendered):
    assert 'class="not-assessed">not assessed</span>: Accidental torsion needs' in rendered(
        demand_job("7-16"), "demand"
    )


def test_the_mass_basis_is_shown_as_text(demand_job, rendered, document):
    masses = '[[mass_basis]]\nload = "<b>Snow</b> {0}_x"\nshare = 0.2\nclause = "<i>4.2.4</i>"\n[answers]'
    html = rendered(demand_job("EN", card=[("[answers]", masses)]), "demand")
    seen = document(html)
    assert "mass basis: <b>Snow</b> {0}_x" in seen.words
    assert "20 % (<i>4.2.4</i>)" in seen.words
    assert not {"b", "i"} & {tag for tag, _ in seen.tags}


def test_the_spectrum_is_drawn_the_same_every_time(demand_job, drawn):
    job = demand_job("EN")
    (first,), (second,) = drawn(job, "demand"), drawn(job, "demand")
    assert first.svg == second.svg
    assert first.caption == "Design spectrum, EN 1998-1:2004, with the periods of the first modes."
    for text in ("direction x", "direction y", "period [s]", "design ordinate [m/s²]", "T1", "T2"):
        assert text in first.svg
