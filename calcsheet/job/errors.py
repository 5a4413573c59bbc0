"""The errors of a job folder: one sentence each: file, place, what was found, what is allowed."""

from __future__ import annotations

from dataclasses import dataclass


class InputError(Exception):
    """A file of the job can't be used as it stands.

    Parameters
    ----------
    file : str
        Name of the file; may be empty.
    where : str
        The row, column or key; may be empty.
    found : str
        What was found.
    allowed : str
        What is allowed, or what to do.
    """

    def __init__(self, file: str, where: str, found: str, allowed: str) -> None:
        self.file = file
        self.where = where
        self.found = found
        self.allowed = allowed
        place = ", ".join(part for part in (file, where) if part)
        super().__init__(f"{place}: {found}; {allowed}" if place else f"{found}; {allowed}")

    def __reduce__(self) -> tuple[type[InputError], tuple[str, str, str, str]]:
        return type(self), (self.file, self.where, self.found, self.allowed)


class NotSavedError(InputError):
    """A file could not be written; what was on disk is untouched."""


class ConflictError(NotSavedError):
    """A file was changed on disk since it was read; what was on disk is untouched."""


@dataclass(frozen=True)
class CellProblem:
    """One thing that is wrong.

    Parameters
    ----------
    row : int or None
        Index of the table's row, roof first; None for a heading, a whole column or another file.
    column : str or None
        Key of the column; None for a row or a file as a whole.
    message : str
        The sentence.
    """

    row: int | None
    column: str | None
    message: str
