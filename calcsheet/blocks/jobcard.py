"""The job card as a block: where every calculation begins."""

from __future__ import annotations

import datetime as dt
from pathlib import Path

from calcsheet.blocks.block import Block, Shown, ShownCard
from calcsheet.render.answers import answer_to
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
        """Set a key of job.toml, such as "job.revision" or "stiffness.cracked.factor_x"; None takes it out.

        Raises
        ------
        InputError
            The card would not be valid, or was changed on disk; nothing has changed.
        """
        self.job.set_value(key, value)

    def answer(self, key: str, text: str, by: str, date: dt.date | None = None, again: bool = False) -> None:
        """Answer a caution as it now stands, and keep the answer in job.toml.

        Parameters
        ----------
        key : str
            The caution's key, as the block `Cautions` names it.
        text, by : str
            The answer, and whose it is.
        date : date, optional
            Its day; today where omitted.
        again : bool
            Whether the words may be those of an answer that has lapsed.

        Raises
        ------
        InputError
            No such caution, a blank text or name, words that answered an earlier finding, or a card that was changed on
            disk; nothing has changed.

        Examples
        --------
        >>> job.answer("local-mode-x-6", "Plant room: see calculation 12.", by="A. Writer")  # doctest: +SKIP
        """
        table = answer_to(self.job.payloads(), key, text, by, date or dt.date.today(), again)
        self.job.set_value(("answers", key), table)

    def shown(self) -> Shown:
        return ShownCard(self)
