"""What each block may be built on."""

from __future__ import annotations

import re

import pytest

from calcsheet.blocks import (
    Cautions,
    DemandSpectrum,
    DriftCheck,
    EdgeDrifts,
    FloorLines,
    JobCard,
    MassTakeoff,
    ModalTable,
    ModePlot,
    ModeSolver,
    ParticipationSummary,
    StaticComparison,
    StiffnessTakeoff,
    StoreyActions,
    StoreyTable,
)

WANTED = {
    StoreyTable: JobCard,
    MassTakeoff: JobCard,
    StiffnessTakeoff: JobCard,
    ModeSolver: StoreyTable,
    ModePlot: ModeSolver,
    ParticipationSummary: ModeSolver,
    DemandSpectrum: ParticipationSummary,
    ModalTable: DemandSpectrum,
    DriftCheck: ModalTable,
    StoreyActions: DriftCheck,
    FloorLines: ModeSolver,
    EdgeDrifts: DriftCheck,
    StaticComparison: StoreyActions,
    Cautions: JobCard,
}


@pytest.mark.parametrize(("block", "wanted"), WANTED.items(), ids=lambda kind: kind.__name__)
@pytest.mark.parametrize(("given", "got"), [("x", "a str"), (3, "an int")])
def test_a_block_built_on_something_else_is_refused(block, wanted, given, got):
    message = f"{block.__name__}: got {got}; must be a {wanted.__name__}"
    with pytest.raises(TypeError, match=f"^{re.escape(message)}$"):
        block(given)


def test_a_block_built_on_the_wrong_block_is_refused_before_anything_changes(job_folder):
    job = JobCard(job_folder())
    storeys = StoreyTable(job)
    modes = ModeSolver(storeys)
    before = set(job.job.payloads())
    with pytest.raises(TypeError, match=r"^DriftCheck: got a ModeSolver; must be a ModalTable$"):
        DriftCheck(modes)
    with pytest.raises(TypeError, match=r"^ModePlot: got a StoreyTable; must be a ModeSolver$"):
        ModePlot(storeys)
    assert set(job.job.payloads()) == before


def test_blocks_of_rigid_floors_show_a_planar_job_what_they_ask_for(job_folder):
    plan = FloorLines(ModeSolver(StoreyTable(JobCard(job_folder()))))
    assert plan.payload["state"] == "refused"
    assert "must be of model.kind" in plan.payload["why"]


@pytest.mark.parametrize("accidental", [-0.1, 0.5, "5 %"])
def test_an_accidental_eccentricity_that_cannot_be(demand_job, accidental):
    job = JobCard(demand_job("EN").folder.path)
    drift = DriftCheck(ModalTable(DemandSpectrum(ParticipationSummary(ModeSolver(StoreyTable(job))))))
    with pytest.raises(ValueError, match=r"^accidental: got .*; must be a number from 0 and below 0\.5$"):
        EdgeDrifts(drift, accidental=accidental)
    assert EdgeDrifts(drift, accidental=0.1).payload["inputs"] == {"accidental": 0.1}
