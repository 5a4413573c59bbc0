"""The job card as a block: where every calculation begins."""

from __future__ import annotations

import datetime as dt
from pathlib import Path

from calcsheet.blocks.block import Block, Shown, ShownCard
from calcsheet.steps.graph import Job


class JobCard(Block):
    """The job of a folder: identity, people, units, model.

    Parameters
    ----------
    folder : str or path
        The job folder, with job.toml and storeys.csv.

    Examples
    --------
    >>> job = JobCard(".")  # doctest: +SKIP
    """

    view_name = "card"

    def __init__(self, folder: str | Path = ".") -> None:
        super().__init__(Job.open(folder), "card")

    def set(self, key: str, value: str | bool | int | float | dt.date | None) -> None:
        """Set a key of job.toml, such as "job.revision" or 'answers."no-origin-storeys.csv"'; None takes it out.

        Raises
        ------
        InputError
            The card would not be valid, or was changed on disk; nothing has changed.
        """
        self.job.set_value(key, value)

    def shown(self) -> Shown:
        return ShownCard(self)
