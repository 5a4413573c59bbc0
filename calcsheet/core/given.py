"""What a lateral model takes from the storey table."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Given:
    """A column of the storey table that a lateral model is made of.

    Parameters
    ----------
    field : str
        The model's field.
    heading : str
        The column's heading but for direction and set; its quantity in the unit table has the same name.
    optional : bool
        Whether it may be left out.
    """

    field: str
    heading: str
    optional: bool = False
