"""The error of a record that can't be made."""

from __future__ import annotations


class RecordError(Exception):
    """No record is made; the message is one sentence that says why."""


class StaleError(RecordError):
    """The notebook was not run, or not since the folder's files changed.

    Parameters
    ----------
    found : str
        What is so.
    remedy : str
        What puts it right.
    """

    def __init__(self, found: str, remedy: str) -> None:
        super().__init__(f"{found}; {remedy}")
        self.found = found
