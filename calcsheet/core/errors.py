"""The one error of the core: a model that cannot be calculated."""

from __future__ import annotations


class ModelError(ValueError):
    """A model is refused.

    Parameters
    ----------
    where : str
        The quantity and its place, such as ``'mass of level "3"'``.
    found : str
        What was given.
    allowed : str
        What may be given.
    """

    def __init__(self, where: str, found: str, allowed: str) -> None:
        super().__init__(f"{where}: {found}; {allowed}")
        self.where = where
        self.found = found
        self.allowed = allowed
