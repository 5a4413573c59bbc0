"""A what-if's model from the payloads: the saved numbers are those of the steps."""

from __future__ import annotations

import math

import pytest

from calcsheet.steps.whatif import Factors, asked, shown_by


@pytest.mark.parametrize("keep", [None, 1])
@pytest.mark.parametrize("basis", ["EN", "7-16", "IS", "points"])
def test_the_saved_model_answers_what_the_steps_say(demand_job, basis, keep):
    payloads = demand_job(basis, keep=keep).payloads()
    found = asked(payloads, "modes")
    assert found.directions == ("x", "y")
    for i, answer in enumerate(found.answered()):
        part = payloads["participation"]["result"]["directions"][i]
        assert answer.period.tolist() == pytest.approx(part["period"], rel=1e-12)
        assert answer.share.tolist() == pytest.approx(part["share"], rel=1e-12)
        modal = payloads["peaks"]["result"]["directions"][i]["forces"]["shear"][0]
        assert answer.base_shear == pytest.approx(modal, rel=1e-12)


def test_factors_go_to_masses_and_to_each_directions_stiffness(demand_job):
    """T scales with √(m/k), by algebra of Kφ = ω²Mφ."""
    found = asked(demand_job("EN").payloads(), "modes")
    (x0, y0), (x, y) = found.answered(), found.answered(Factors(1.2, 0.8, 1.5))
    assert x.period == pytest.approx(x0.period * math.sqrt(1.2 / 0.8), rel=1e-12)
    assert y.period == pytest.approx(y0.period * math.sqrt(1.2 / 1.5), rel=1e-12)
    assert x.share == pytest.approx(x0.share, rel=1e-9)


def test_without_a_demand_there_is_no_base_shear(job_folder, chain):
    from calcsheet.steps.graph import Job

    found = asked(chain(Job(job_folder())).payloads(), "modes")
    assert found.basis is None
    assert found.waits == ""
    assert [a.base_shear for a in found.answered()] == [None, None]


def test_a_demand_that_is_held_up_says_why(demand_job):
    payloads = demand_job("EN", ("ground_acceleration = 0.2", "ground_acceleration = -1")).payloads()
    found = asked(payloads, "modes")
    assert found.basis is None
    assert found.waits == payloads["demand"]["why"] != ""


def test_what_is_read_stays_the_same_object_until_it_changes(demand_job):
    job = demand_job("EN")
    before = shown_by(job.payloads(), "modes")
    job.set_value("job.reason", "another")
    assert all(a is b for a, b in zip(before, shown_by(job.payloads(), "modes"), strict=True))
    job.set_value("basis.q_x", 2.0)
    assert any(a is not b for a, b in zip(before, shown_by(job.payloads(), "modes"), strict=True))


@pytest.mark.parametrize("value", [0.24, 4.01, float("nan"), float("inf"), "1.1", None, True])
@pytest.mark.parametrize(("key", "name"), [("mass", "mass factor"), ("y", "stiffness factor y")])
def test_a_factor_out_of_range_is_refused(key, name, value):
    with pytest.raises(ValueError, match=f"^{name}: got {value!r}; must be a number from 0.25 to 4$"):
        Factors(**{key: value})
