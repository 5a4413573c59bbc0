"""What can be undone: tables as they were before each edit, and what the edit was."""

from __future__ import annotations

from collections import deque

from calcsheet.job.errors import InputError
from calcsheet.job.table import TextTable

KEPT = 200
"""Edits that can be undone; tables share the lines that they have in common, so each costs little."""


class History:
    """Edits of one table, the last one first to be undone."""

    def __init__(self) -> None:
        self._past: deque[tuple[str, TextTable]] = deque(maxlen=KEPT)
        self._future: deque[tuple[str, TextTable]] = deque(maxlen=KEPT)

    def did(self, what: str, before: TextTable) -> None:
        """Keep the table as it was before an edit; what was undone can't be done again after it."""
        self._past.append((what, before))
        self._future.clear()

    @property
    def undoes(self) -> str:
        """The edit that is undone next; empty where there is none."""
        return self._past[-1][0] if self._past else ""

    @property
    def redoes(self) -> str:
        """The edit that is done again next; empty where there is none."""
        return self._future[-1][0] if self._future else ""

    def back(self, now: TextTable) -> TextTable:
        """The table before the last edit; `now` is kept to be had again by `forth` (InputError where there is none)."""
        return _moved(self._past, self._future, now, "undo")

    def forth(self, now: TextTable) -> TextTable:
        """The table after the edit that was undone last (InputError where there is none)."""
        return _moved(self._future, self._past, now, "redo")


def _moved(
    source: deque[tuple[str, TextTable]], target: deque[tuple[str, TextTable]], now: TextTable, word: str
) -> TextTable:
    if not source:
        raise InputError("", "", f"nothing to {word}", "no further edit is remembered")
    what, table = source.pop()
    target.append((what, now))
    return table
