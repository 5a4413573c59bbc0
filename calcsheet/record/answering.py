"""Answers to cautions from the command line: the cautions as the saved notebook raises them, the answers as the card has them."""

from __future__ import annotations

import datetime as dt
from pathlib import Path

from calcsheet.record.collect import collect, refuse_stale
from calcsheet.record.issue import notebook_of, with_earlier
from calcsheet.render.answers import Raised, answer_to, raised
from calcsheet.steps.graph import Job
from calcsheet.steps.step import Payload


def asked(folder: Path) -> tuple[Raised, ...]:
    """The cautions of a job that ask for an answer.

    Parameters
    ----------
    folder : Path
        The job folder; its notebook must have been run and saved.

    Raises
    ------
    RecordError
        No notebook, or one that does not show what the folder holds, answers aside.
    """
    return tuple(one for one in raised(_payloads(folder)) if one.caution["answer"])


def answer(folder: Path, key: str, text: str, by: str, date: dt.date | None = None, again: bool = False) -> Raised:
    """Answer a caution of a job in its card.

    Parameters
    ----------
    folder : Path
        The job folder; its notebook must have been run and saved.
    key, text, by, date, again
        As for `calcsheet.render.answers.answer_to`; today where there is no date.

    Returns
    -------
    Raised
        The caution with this answer.

    Raises
    ------
    RecordError
        No notebook, or one that does not show what the folder holds, answers aside.
    InputError
        The answer is refused.
    """
    table = answer_to(_payloads(folder), key, text, by, date or dt.date.today(), again)
    Job(folder.resolve()).set_value(("answers", key), table)
    return next(one for one in raised(_payloads(folder)) if one.key == key)


def _payloads(folder: Path) -> dict[str, Payload]:
    content = collect(notebook_of(folder))
    refuse_stale(content, folder, but=("answers",))
    card = Job(folder.resolve()).payload("card")
    return {**with_earlier(content, folder).payloads, "card": card}
