"""The steps whose inputs are the job's files, and those inputs."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from calcsheet.job.folder import JobFiles
from calcsheet.job.memberfile import FILE as MEMBERS
from calcsheet.steps.listen import Status, few

MASSES, STIFFNESSES = "masses", "stiffness take-off"
"""The take-offs, which may feed the storeys."""
FROM_FILES = ("card", MASSES, STIFFNESSES, "storeys", "basis")
"""Steps whose inputs are the job's files."""


class RefusedError(Exception):
    """The files hold no such inputs, for the reason given."""


class WaitsError(Exception):
    """The inputs wait for another file."""


def inputs_from_files(key: str, files: JobFiles | None, problem: str, status: Status) -> Any:
    """Inputs of a step that takes them from the job's files.

    Parameters
    ----------
    key : str
        One of `FROM_FILES`.
    files : JobFiles or None
        The files as last read; None where they never could be.
    problem : str
        Why they can't be read now; empty where they can.
    status : Status
        Whether the storey table here is the one on disk.

    Raises
    ------
    RefusedError, WaitsError
        There are none, for the reason given.
    """
    if problem or files is None:
        raise RefusedError(problem) if key == "card" else WaitsError(f"waits for job card: {problem}")
    if key == "card":
        return files.card
    if key == "basis":
        if files.basis is None:
            raise RefusedError(files.basis_problem)
        return files.basis
    if status.kind != "saved":
        raise RefusedError(status.text)
    if key == MASSES:
        if files.floors is None:
            raise RefusedError("no floors.csv and loads.csv in the job folder; the mass take-off needs both")
        _refuse_any(files.floors.messages)
        return files.floors.floors
    if key == STIFFNESSES:
        if files.members is None:
            raise RefusedError(f"no {MEMBERS} in the job folder; the stiffness take-off needs it")
        _refuse_any(files.members.messages)
        return files.members.takeoff
    _refuse_any(files.problems)
    return files.reading.storeys


def _refuse_any(problems: Sequence[str]) -> None:
    """Refuse what has problems, the first of them quoted."""
    if problems:
        raise RefusedError(few(problems))
