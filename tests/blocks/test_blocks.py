"""What each block may be built on."""

from __future__ import annotations

import re

import pytest

from calcsheet.blocks import (
    Cautions,
    DemandSpectrum,
    DriftCheck,
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
