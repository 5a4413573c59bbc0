"""Who is told of a job's changes, and how its storey table stands to the file."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Protocol

LISTED = 3
"""Problems quoted where a step says why it can't be done; the others are counted."""


class Listener(Protocol):
    """Somebody who shows the job."""

    def show_numbers(self) -> None:
        """Show the present numbers: quick."""

    def show_figures(self) -> None:
        """Draw the present figures, and what is kept of them."""


@dataclass(frozen=True)
class Status:
    """How the storey table in memory stands to its file.

    Parameters
    ----------
    kind : str
        "saved", "conflict" (another edit is on disk) or "error" (can't be written or read).
    text : str
        The same in words.
    """

    kind: str
    text: str


def clock() -> str:
    """The time of day, for who reads when something was done."""
    return dt.datetime.now().strftime("%H:%M:%S")


def few(problems: Sequence[str]) -> str:
    """The first problems, and how many more there are."""
    more = f" (and {len(problems) - LISTED} more)" if len(problems) > LISTED else ""
    return "; ".join(problems[:LISTED]) + more
