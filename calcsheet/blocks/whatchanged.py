"""What changed since an earlier revision, as a block."""

from __future__ import annotations

from collections.abc import Mapping
from html import escape
from typing import Any

from calcsheet.blocks.block import Block, Shown, must_be
from calcsheet.blocks.jobcard import JobCard
from calcsheet.job.errors import InputError
from calcsheet.render.view import Rendered
from calcsheet.steps.compare import EARLIER
from calcsheet.steps.earlier import last_issued
from calcsheet.steps.graph import Job
from calcsheet.steps.step import Payload


class WhatChanged(Block):
    """The job held against an issued revision: conclusions that flipped, headline results, inputs.

    Parameters
    ----------
    job : JobCard
        The job card.
    against : str, optional
        The revision; where omitted, the newest one issued that is not the job's own.

    Raises
    ------
    InputError
        A revision that is not issued, or an issued record that can't be read.

    Examples
    --------
    >>> WhatChanged(job, against="A")  # doctest: +SKIP
    """

    view_name = "what changed"

    def __init__(self, job: JobCard, *, against: str | None = None) -> None:
        must_be(self, job, JobCard)
        self.against = against
        self.problem = ""
        self._revision = ""
        self._hold(job.job, _revision(job.job))
        super().__init__(job.job, EARLIER, {"against": against or ""})

    def shown(self) -> Shown:
        return ShownChanges(self)

    def follow(self) -> None:
        """Hold the job against another revision where its own has changed."""
        revision = _revision(self.job)
        if revision != self._revision:
            try:
                self._hold(self.job, revision)
            except InputError as error:  # said where the numbers would stand; nobody is there to catch it
                self._revision, self.problem = revision, str(error)

    def _hold(self, job: Job, revision: str) -> None:
        earlier = last_issued(job.folder.path, revision, self.against)
        self._revision, self.problem = revision, ""
        job.attach(EARLIER, earlier)


class ShownChanges(Shown):
    """A display that follows the job's own revision."""

    block: WhatChanged

    def show_numbers(self) -> None:
        self.block.follow()
        super().show_numbers()

    def rendered(self, payloads: Mapping[str, Payload], options: Mapping[str, Any]) -> Rendered:
        if self.block.problem:
            return Rendered(f'<p class="calcsheet-note" data-kind="refused">{escape(self.block.problem)}</p>')
        return super().rendered(payloads, options)


def _revision(job: Job) -> str:
    """The job's revision; empty where its card can't be read."""
    inputs = job.payload("card")["inputs"]
    return "" if inputs is None else str(inputs["job"]["revision"])
