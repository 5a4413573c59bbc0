"""Headline results: complete where all steps are there, plain about what is not; two records issued end to end."""

from __future__ import annotations

import json
import re
import shutil

import pytest

from calcsheet.record.collect import Content
from calcsheet.record.document import record_of
from calcsheet.record.headline import brief
from calcsheet.record.headline import in_full as of_record
from calcsheet.record.issue import issue
from calcsheet.resources import folder
from calcsheet.steps.demand import DemandOptions
from calcsheet.steps.modes import ModesOptions
from calcsheet.steps.participation import ParticipationOptions
from calcsheet.steps.replay import replay


def in_full(payloads):
    return of_record(record_of(Content((), payloads)))


def text(html: str) -> str:
    return re.sub(r"\s+", " ", re.sub(r"<[^>]*>", "", html)).replace("&lt;", "<").replace("&gt;", ">")


def rows(html: str) -> dict[str, str]:
    found = re.findall(r'<tr><th scope="row">(.*?)</th><td>(.*?)</td></tr>', html, re.DOTALL)
    assert len(found) == len({label for label, _ in found})  # no label twice
    return {text(label): text(value) for label, value in found}


@pytest.mark.parametrize("basis", ["EN", "7-16", "7-22", "IS", "points"])
def test_all_that_a_checker_looks_for_first(demand_job, basis):
    payloads = demand_job(basis).payloads()
    said = rows(in_full(payloads))
    assert set(said) >= {
        "Weight, mass above the effective base", "First period in x", "First period in y",
        "Modes for the target share in x", "Modes for the target share in y", "First over approximate period",
        "Modal base shear", "Static base shear", "Design base shear", "Largest drift", "Second order", "Irregularities",
        "Torsion", "Evidence", "Cautions",
    }  # fmt: skip
    assert said["Weight, mass above the effective base"] == "2 942 kN, 300.0 t"
    assert said["First period in x"] == "T₁ = 0.3974 s, f₁ = 2.516 Hz"
    # effective mass of mode 1: 266.67 of 300 t
    assert said["Modes for the target share in x"] == "2, with 100 % (target 90.0 %); 2 used, with 100 %"
    for label in ("Modal base shear", "Design base shear", "Largest drift", "Irregularities", "Torsion"):
        assert re.match(r"x: .*; y: ", said[label]), said[label]
    assert not any("in this record" in value for value in said.values())


def test_numbers_of_an_asce_job(demand_job):
    said = rows(in_full(demand_job("7-16", ("edition =", 'combination = "SRSS"\nedition =')).payloads()))
    # T_a = 0.0466 × 7^0.9 = 0.2685 s or, in feet, 0.016 × 22.966^0.9 = 0.2686 s
    assert said["First over approximate period"].startswith("x: T₁/Ta = 1.48, Ta = 0.268")
    # 268.74 × 9.80665/8 = 329.4 kN, 2942/8 = 367.7 kN
    assert said["Modal base shear"].startswith("x: 329.4 kN (11.20 % of W); y: ")
    assert said["Static base shear"].startswith("x: 367.7 kN (12.50 % of W); y: ")
    assert said["Design base shear"].startswith("x: 367.7 kN (12.50 % of W), scale 1.116; y: ")
    # 5.5 × 137.44 × 9.80665/8/5e4 = 18.53 mm of 60 mm
    assert said["Largest drift"].startswith("x: 30.9 % of its limit, passes; y: ")
    # 2900/(1e5 × 4) and 950/(5e4 × 3), within 0.5/5.5
    assert said["Second order"].startswith("x: θ = 0.007250, passes; y: ")
    assert said["Torsion"] == "x: accidental torsion not assessed; y: accidental torsion not assessed"


def test_torsion_by_a_multiplier(demand_job):
    assert rows(in_full(demand_job("EN").payloads()))["Torsion"].startswith("x: actions × 1.600 at the edge; y: ")


def test_what_given_points_leave_open_is_said(demand_job):
    said = rows(in_full(demand_job("points").payloads()))
    assert said["First over approximate period"] == "x: no approximate period; y: no approximate period"
    assert said["Static base shear"] == "x: not assessed; y: not assessed"
    assert said["Second order"] == "x: not assessed: not in this edition; y: not assessed: not in this edition"


def test_the_cover_is_brief(demand_job):
    payloads = demand_job("EN").payloads()
    labels = [label for label, _ in brief(payloads)]
    assert "Design base shear" in labels
    assert not {"Torsion", "Irregularities", "Evidence"} & set(labels)


def test_what_has_no_step_in_the_record_is_said_to_be_missing(demand_job, chain, job_folder):
    payloads = demand_job("EN").payloads()

    def without(*kinds):
        return rows(in_full({k: p for k, p in payloads.items() if k not in kinds}))

    missing = "Drift, second order, irregularities, storey actions"
    said = without("actions", "drift", "peaks")
    assert said[missing] == "not assessed in this record"
    assert said["Torsion"] == "not assessed: x and y are planar models"
    assert without("actions")["Storey actions"] == "not assessed in this record"
    said = without("actions", "drift", "peaks", "demand", "basis")
    assert said["Design demand, drift, second order, irregularities, storey actions"] == "not assessed in this record"


def test_a_target_that_is_not_reached(demand_job):
    job = demand_job("EN", keep=1)
    job.attach("modes", ModesOptions(keep=1, share=0.95))
    assert (
        rows(in_full(job.payloads()))["Modes for the target share in x"]
        == "not reached: 88.9 % of 95.0 % with all 1 used"
    )


def test_a_second_solver_has_rows_under_its_own_name(demand_job):
    job = demand_job("EN")
    job.attach("modes", ModesOptions(stiffness="cracked"), key="soft")
    job.attach("participation", ParticipationOptions(), {"modes": "soft"}, "participation of soft")
    needs = {"modes": "soft", "participation": "participation of soft"}
    job.attach("demand", DemandOptions(), needs, "demand of participation of soft")
    said = rows(in_full(job.payloads()))
    assert said["First period in x"] == "T₁ = 0.3974 s, f₁ = 2.516 Hz"
    assert said["First period in x (soft)"].startswith("T₁ = 0.5130 s")  # 0.3974/√0.6
    assert "Modes for the target share in x (participation of soft)" in said
    assert "First over approximate period (demand of participation of soft)" in said


# ---- end to end --------------------------------------------------------------------------------------------------------

KIP, FOOT = 4.4482216152605, 0.3048
UNITS = {
    "SI": (1.0, 0.001, 0.01),
    "US": (
        1.0,
        0.01,
        KIP,
        FOOT,
        FOOT / 12,
        KIP * FOOT,
        KIP / FOOT,
        KIP / (FOOT / 12),
        FOOT**2,
        KIP / 1000 / FOOT**2,
        (FOOT / KIP) ** 0.5,
    ),
}


def assert_numbers_are_there(numbers, payloads, system):
    """Every pointer resolves, to the printed number in one of the system's units."""
    for pointer, shown in numbers:
        found = payloads
        for part in pointer.removeprefix("/").split("/"):
            found = found[int(part)] if isinstance(found, list) else found[part.replace("~1", "/").replace("~0", "~")]
        mantissa, _, power = re.sub(r"\s", "", shown).replace("\u2212", "-").partition("·10^")
        scale = 10.0 ** int(power or 0)
        half = 0.5 * 10.0 ** -len(mantissa.partition(".")[2]) * scale
        number = float(mantissa) * scale
        assert any(abs(found / one - number) <= half * (1 + 1e-9) for one in UNITS[system]), (pointer, shown, found)


@pytest.mark.parametrize(
    ("where", "system", "status"),
    [("templates/seismic", "SI", "DRAFT"), ("example_notebooks/larch-street", "US", "FOR CHECKING")],
)
def test_a_record_issued_end_to_end(quick_kernel, tmp_path, document, where, system, status):
    job = shutil.copytree(folder(where), tmp_path / "job", ignore=shutil.ignore_patterns("issued"))
    done = issue(job, to=["html"])
    html = done.files[0].read_text(encoding="utf-8")
    seen = document(html)
    data = json.loads(seen.script)
    assert done.status == data["status"] == status
    assert replay(data["payloads"]) == []
    assert_numbers_are_there(seen.numbers, data["payloads"], system)
    front = re.sub(r"\s+", " ", seen.words)
    headline = front[front.index("Headline results") :][:6000]
    for label in (
        "Weight, mass above the effective base", "First period in x", "First period in y", "Modes for the target share in x",
        "First over approximate period", "Modal base shear", "Static base shear", "Design base shear", "scale",
        "Largest drift", "Second order", "Irregularities", "Torsion",
    ):  # fmt: skip
        assert label in headline, label
    assert headline.count("% of W") >= 6  # three base shears in two directions
    assert headline.count("T₁/Ta = ") == 2
    for title in ("Design demand", "Modal peaks", "Drift, second order, irregularities", "Storey actions"):
        assert title in front
    assert sum(heading.startswith("Worked lines: ") for heading in seen.headings) >= 5
    if system == "US":
        for word in (" kN", "[m]", "[kN", " mm"):
            # the usual weight over area is said in both systems
            assert word not in seen.words.replace("3 to 15 kN/m²", ""), word
