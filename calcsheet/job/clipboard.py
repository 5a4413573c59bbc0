"""Cells as spreadsheets copy them: rows of text between tabs, some in quotation marks."""

from __future__ import annotations

import csv
import re
from collections.abc import Sequence

from calcsheet.job.amounts import split_amount
from calcsheet.job.numbers import readings

_LINE = re.compile(r"[^\r\n]*(?:\r\n|\r|\n)|[^\r\n]+")


def read_block(text: str) -> list[list[str]]:
    """Return the cells of a pasted text, row by row; the line ending after the last row adds none.

    A cell in quotation marks may hold tabs and line endings. Where the marks don't pair, they are part of the text.
    """
    lines = _LINE.findall(re.sub(r"(?:\r\n|\r|\n)\Z", "", text))
    try:
        return [cells or [""] for cells in csv.reader(lines, delimiter="\t", strict=True)]
    except csv.Error:
        return [re.sub(r"[\r\n]+\Z", "", line).split("\t") for line in lines]


def mark_of(block: Sequence[Sequence[str]]) -> str | None:
    """Return the decimal mark of a pasted block: the one that all its numbers agree on; None where none tells it, or two do."""
    marks = [{*readings(split_amount(cell)[0])} for cells in block for cell in cells]
    told = {mark for found in marks if len(found) == 1 for mark in found}
    return told.pop() if len(told) == 1 else None
