"""Factors on the whole model put into the job's files: columns of storeys.csv, a stiffness set of job.toml."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from calcsheet.job import card as job_card
from calcsheet.job import storeycells
from calcsheet.job import table as text_table
from calcsheet.job.errors import InputError
from calcsheet.job.folder import JobFiles
from calcsheet.job.headings import GRAVITY, stiffness_key
from calcsheet.job.numbers import decimal_mark, format_number, parse_number
from calcsheet.job.storeyreading import StoreyReading
from calcsheet.job.table import TextTable
from calcsheet.job.wording import dotted

MASSES = ("mass", "weight")
"""Columns that give the masses: a table has one of them."""
DIGITS = 10
"""Significant digits that a multiplied number is written to: 402 × 1.1 is 442.2, not 442.20000000000005."""


@dataclass(frozen=True)
class Adoption:
    """What adopting factors changes.

    Parameters
    ----------
    columns : mapping of str to float
        By key, the factor on a column of storeys.csv.
    values : mapping of tuple of str to float or None
        By its parts, the new value of a key of job.toml; None takes it out.
    changes : str
        The same in words, with files and factors; empty where nothing changes.
    """

    columns: Mapping[str, float]
    values: Mapping[tuple[str, ...], float | None]
    changes: str


def adoption(files: JobFiles, stiffness: str, mass: float, along: Mapping[str, float]) -> Adoption:
    """What adopting factors on the whole model changes.

    Parameters
    ----------
    files : JobFiles
        The job's files, their storey table without problems.
    stiffness : str
        Name of the stiffness set.
    mass : float
        Factor on the masses.
    along : mapping of str to float
        Factor on the stiffnesses by direction.

    Raises
    ------
    InputError
        A factor on masses that come from the mass take-off: no column holds them.
    """
    source = files.card.masses
    if source is not None and mass != 1.0:
        found = f"the masses come from {source.source}"
        raise InputError(job_card.FILE, "masses.source", found, "must be changed there: a mass factor can't be adopted")
    columns = {c.key: mass for c in files.reading.columns if c.used and c.key in MASSES and mass != 1.0}
    changed = {d: factor for d, factor in along.items() if factor != 1.0}
    values: dict[tuple[str, ...], float | None] = {}
    basis = files.card.stiffness[stiffness]
    if basis.own:
        keys = {c.key for c in files.reading.columns if c.used}
        own = (
            (stiffness_key(given, d, stiffness), f)
            for d, f in changed.items()
            for given in files.reading.ways[d].columns
        )
        columns |= {key: factor for key, factor in own if key in keys}
    elif changed and basis.factor is not None and len({*along.values()}) > 1:
        values[("stiffness", stiffness, "factor")] = None
        values |= {("stiffness", stiffness, f"factor_{d}"): rounded(basis.factor * f) for d, f in along.items()}
    elif changed and basis.factor is not None:
        values[("stiffness", stiffness, "factor")] = rounded(basis.factor * next(iter(changed.values())))
    else:
        for d, factor in changed.items():
            values[("stiffness", stiffness, f"factor_{d}")] = rounded((basis.factor_of(d) or 1.0) * factor)
    return Adoption(columns, values, _changes(files, stiffness, columns, values))


def multiplied_columns(reading: StoreyReading, columns: Mapping[str, float]) -> TextTable:
    """The storey table with every number of some columns multiplied; blank cells stay blank.

    Parameters
    ----------
    reading : StoreyReading
        The table as read, without problems.
    columns : mapping of str to float
        Factor by key of the column.
    """
    table = reading.table
    cells = list(zip(*reading.rows, strict=True))
    for place, column in enumerate(reading.columns):
        if column.key not in columns:
            continue
        own = decimal_mark(cells[place], table.delimiter)
        mark = own or next((m for other in cells if (m := decimal_mark(other, table.delimiter))), ".")
        for row, cell in enumerate(cells[place]):
            if cell.strip():
                value = rounded(parse_number(cell, own or ".") * columns[column.key])
                table = text_table.set_cell(table, row, place, format_number(value, mark))
    return table


def rounded(value: float) -> float:
    """A number to `DIGITS` significant digits."""
    return float(f"{value:.{DIGITS}g}")


def _changes(
    files: JobFiles,
    stiffness: str,
    columns: Mapping[str, float],
    values: Mapping[tuple[str, ...], float | None],
) -> str:
    headings = {c.key: c.heading.strip() for c in files.reading.columns}
    said = [f'column "{headings[key]}" of {storeycells.FILE} by a factor of {f:g}' for key, f in columns.items()]
    basis = files.card.stiffness[stiffness]
    before = {"factor": basis.factor, "factor_x": basis.factor_x, "factor_y": basis.factor_y}
    for (*_, name), value in values.items():
        key, old = dotted(["stiffness", stiffness, name]), before[name]
        was, now = ("none" if number is None else f"{number:.{DIGITS}g}" for number in (old, value))
        said.append(f"{key} of {job_card.FILE} from {was} to {now}")
    kept = (
        f'; column "{headings[GRAVITY]}" stays as it is'
        if GRAVITY in headings and not columns.keys().isdisjoint(MASSES)
        else ""
    )
    return _listed(said) + kept if said else ""


def _listed(said: Sequence[str]) -> str:
    *most, last = said
    return f"{', '.join(most)} and {last}" if most else last
