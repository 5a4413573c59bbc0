"""Answers to cautions from the command line: the answers as the card has them, the cautions as the saved notebook raises them.

Where the notebook is only ever run by issuing, the record issued of the folder as it is raises them.
"""

from __future__ import annotations

import datetime as dt
from pathlib import Path

from calcsheet.job.issued import issued_records
from calcsheet.record.collect import Content, collect, refuse_stale, refuse_unfinished
from calcsheet.record.errors import RecordError, StaleError
from calcsheet.record.issue import NOTEBOOK, notebook_of, with_earlier
from calcsheet.record.opened import opened
from calcsheet.render.answers import Raised, answer_to, raised, unasked_words
from calcsheet.steps.graph import Job
from calcsheet.steps.step import Payload


def asked(folder: Path) -> tuple[Raised, ...]:
    """The cautions of a job that ask for an answer.

    Parameters
    ----------
    folder : Path
        The job folder; its notebook must have been run and saved, or its record issued.

    Raises
    ------
    RecordError
        No notebook, or neither it nor an issued record shows what the folder holds, answers aside.
    """
    return tuple(one for one in raised(_payloads(folder)) if one.caution["answer"])


def unasked(folder: Path) -> tuple[str, ...]:
    """A clause for each answer of a job that none of its cautions asks for; parameters and errors as for `asked`."""
    return unasked_words(_payloads(folder))


def answer(folder: Path, key: str, text: str, by: str, date: dt.date | None = None, again: bool = False) -> Raised:
    """Answer a caution of a job in its card.

    Parameters
    ----------
    folder : Path
        The job folder; its notebook must have been run and saved, or its record issued.
    key, text, by, date, again
        As for `calcsheet.render.answers.answer_to`; today where there is no date.

    Returns
    -------
    Raised
        The caution with this answer.

    Raises
    ------
    RecordError
        No notebook, or neither it nor an issued record shows what the folder holds, answers aside.
    InputError
        The answer is refused.
    """
    table = answer_to(_payloads(folder), key, text, by, date or dt.date.today(), again)
    Job(folder.resolve()).set_value(("answers", key), table)
    return next(one for one in raised(_payloads(folder)) if one.key == key)


def _payloads(folder: Path) -> dict[str, Payload]:
    try:
        content = collect(notebook_of(folder))
        refuse_stale(content, folder, but=("answers",))
    except StaleError as error:
        issued = _issued(folder)
        if issued is None:
            raise RecordError(f"{error.found}; run all cells of {NOTEBOOK} and save it, or issue") from None
        content = issued
    card = Job(folder.resolve()).payload("card")
    return {**with_earlier(content, folder).payloads, "card": card}


def _issued(folder: Path) -> Content | None:
    """What the present revision was issued with, where the folder's inputs are still those."""
    card = Job(folder.resolve()).payload("card")
    refuse_unfinished("card", card)
    revision = card["inputs"]["job"]["revision"]
    path = next((record.path for record in issued_records(folder) if record.revision == revision), None)
    if path is None:
        return None
    content = Content((), opened(path)["payloads"])
    try:
        refuse_stale(content, folder, but=("answers", "people"))
    except StaleError:
        return None
    return content
