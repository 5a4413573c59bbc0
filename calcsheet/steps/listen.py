"""Who is told of a job's changes, and how its storey table stands to the file."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol


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
