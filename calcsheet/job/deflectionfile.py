"""A lateral flexibility from deflections under one load at a time: a column a load, a row a level."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from calcsheet.core.arrays import Array
from calcsheet.job.errors import InputError
from calcsheet.job.headings import heading_unit, split_heading
from calcsheet.job.matrixfile import read_matrix
from calcsheet.job.numbers import is_ambiguous, parse_number
from calcsheet.job.table import TextTable
from calcsheet.units import UNITS, Unit, UnitError, parse_unit

LOAD = re.compile(r"([0-9][0-9.,]*(?:[eE][+-]?[0-9]+)?)\s*([^0-9.,\s].*)")
"""An amount and a unit of force."""


def holds_deflections(table: TextTable) -> bool:
    """Whether a table's first heading gives a unit of length, so that its columns are deflections."""
    try:
        return parse_unit(split_heading(table.headings[0])[1] or "", "length") in UNITS["length"]
    except UnitError:
        return False


def read_deflections(table: TextTable, levels: Sequence[str]) -> tuple[Array, list[InputError]]:
    """Read deflections, and divide each column by its load.

    Parameters
    ----------
    table : TextTable
        The first heading gives the deflections' unit, such as ``[mm]``, the others name the level that is loaded and
        the load, such as ``Roof [100 kN]``; the rows' first cells name the levels that deflect.
    levels : sequence of str
        The n levels of the model, lowest first.

    Returns
    -------
    flexibility : (n, n) array
        In m/kN, lowest level first, as unsymmetric as the deflections make it; zero where a cell is refused.
    problems : list of InputError
        Every problem.
    """
    loads: dict[str, float] = {}
    problems: list[InputError] = []
    names = [table.headings[0]]
    for heading in table.headings[1:]:
        if not heading.strip():
            names.append(heading)
            continue
        name, load = split_heading(heading)
        names.append(name)
        try:
            loads[name] = _load(table.file, heading, load)
        except InputError as error:
            problems.append(error)
    if problems:
        return np.zeros((len(levels), len(levels))), problems
    lines = list(table.lines)
    lines[table.heading] = replace(lines[table.heading], cells=tuple(names))
    matrix, problems = read_matrix(replace(table, lines=tuple(lines)), levels, "length")
    if problems:
        return matrix, problems
    return matrix / np.array([loads[level] for level in levels]), []


def _load(file: str, heading: str, load: str | None) -> float:
    """The load that a heading gives [kN]."""
    where, allowed = f'heading "{heading}"', 'must give its load in square brackets, such as "Roof [100 kN]"'
    found = LOAD.fullmatch(load or "")
    if found is None or is_ambiguous(found[1]):
        raise InputError(file, where, f'load "{load}"' if load else "no load", allowed)
    unit: Unit = heading_unit(file, heading, found[2], "weight")
    try:
        value = parse_number(found[1], "." if "." in found[1] else ",") * unit.factor
    except ValueError:
        raise InputError(file, where, f'load "{load}"', allowed) from None
    if not 0.0 < value < np.inf:
        raise InputError(file, where, f'load "{load}"', "must be finite and above 0")
    return value
