"""What differs between the table here and the file on disk, cell by cell."""

from __future__ import annotations

from dataclasses import dataclass
from difflib import SequenceMatcher

from calcsheet.job.table import TextTable

NO_ROW = "no such row"


@dataclass(frozen=True)
class Difference:
    """One cell, or one row, that is not the same.

    Parameters
    ----------
    row : str
        First cell of the row; its number as a spreadsheet shows it where that is blank.
    column : str
        The heading; empty for a row that only one side has.
    here, there : str
        What stands here and on disk.
    """

    row: str
    column: str
    here: str
    there: str


def differences(here: TextTable, there: TextTable) -> tuple[Difference, ...]:
    """Return what differs, roof first: headings, rows that one side lacks, then cells of rows that both have.

    Rows are paired by their first cell, as the levels of a storey table.
    """
    if here.headings != there.headings:
        return (Difference("headings", "", ", ".join(here.headings), ", ".join(there.headings)),)
    found = []
    ours, theirs = ([" ".join(cells[0].split()) for cells in table.rows] for table in (here, there))
    for tag, i, i_end, j, j_end in SequenceMatcher(None, ours, theirs, autojunk=False).get_opcodes():
        both = min(i_end - i, j_end - j) if tag in ("equal", "replace") else 0
        for k in range(both):
            found += _cells(here, i + k, there, j + k)
        found += [Difference(_name(here, k), "", ", ".join(here.rows[k]), NO_ROW) for k in range(i + both, i_end)]
        found += [Difference(_name(there, k), "", NO_ROW, ", ".join(there.rows[k])) for k in range(j + both, j_end)]
    return tuple(found)


def _cells(here: TextTable, i: int, there: TextTable, j: int) -> list[Difference]:
    return [
        Difference(_name(here, i), heading, a, b)
        for heading, a, b in zip(here.headings, here.rows[i], there.rows[j], strict=False)
        if a.strip() != b.strip()
    ]


def _name(table: TextTable, row: int) -> str:
    return table.rows[row][0].strip() or f"row {table.row_number(row)}"
