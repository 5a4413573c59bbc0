"""The cautions of a job as a block."""

from __future__ import annotations

from calcsheet.blocks.block import Block, must_be
from calcsheet.blocks.jobcard import JobCard


class Cautions(Block):
    """All cautions of the job, and how their answers stand.

    Parameters
    ----------
    job : JobCard
        The job card.

    Examples
    --------
    >>> Cautions(job)  # doctest: +SKIP
    """

    view_name = "cautions"

    def __init__(self, job: JobCard) -> None:
        must_be(self, job, JobCard)
        super().__init__(job.job, "card")
