"""Ordinates of the moving shapes."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.render.motion import SHOWN, motion
from calcsheet.steps.graph import Job
from calcsheet.steps.modes import ModesOptions


@pytest.fixture
def payloads(job_folder):
    def of(**how):
        job = Job(job_folder(**how))
        job.attach("modes", ModesOptions())
        return job.payloads()

    return of


def test_shapes_are_the_payloads_own_scaled_to_their_largest(payloads):
    held = payloads()
    found = motion(held, "modes")
    assert [m["name"] for m in found["models"]] == ["x", "y"]
    for model, drawn in zip(held["modes"]["result"]["models"], found["models"], strict=True):
        psi = np.array(model["modes"]["psi"])
        for n, mode in enumerate(drawn["modes"]):
            assert mode["shape"][0] == 0.0
            assert np.abs(mode["shape"]).max() == pytest.approx(1.0)
            assert np.array(mode["shape"][1:]) * np.abs(psi[:, n]).max() == pytest.approx(psi[:, n])


def test_levels_stand_from_the_base_up_in_the_systems_unit(payloads):
    found = motion(payloads(), "modes")
    assert [level["name"] for level in found["levels"]] == ["base", "1", "2", "3", "4", "Roof"]
    assert found["levels"][0]["elevation"] == 1.2
    assert found["unit"] == "m"
    us = motion(payloads(us=True, name="us"), "modes")
    assert us["unit"] == "ft"
    assert us["levels"][0]["name"] == "Plaza"
    assert us["levels"][-1]["elevation"] == pytest.approx(62.5)
    assert us["levels"][-1]["label"] == "62.50"


def test_no_more_modes_than_can_be_told_apart(payloads):
    head = "level,storey height [m],mass [t],stiffness x [kN/m],stiffness y [kN/m]\n"
    rows = "".join(f"{i},3,{100 + i},{2e5},{1e5}\n" for i in range(20, 0, -1))
    found = motion(payloads(files={"storeys.csv": head + rows}), "modes")
    assert [len(m["modes"]) for m in found["models"]] == [SHOWN, SHOWN]
