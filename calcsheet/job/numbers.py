"""Numbers as people write them: decimal point or comma, thousands separated or not, or ambiguous."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Iterable

MARKS = (".", ",")
"""The two decimal marks."""

_GROUP = r"[{other}\u0020\u00a0\u2009\u202f'’]"
_GROUPED = rf"[+-]?[1-9][0-9]{{{{0,2}}}}(?P<t>{_GROUP})[0-9]{{{{3}}}}(?:(?P=t)[0-9]{{{{3}}}})*(?:{{mark}}[0-9]*)?"
_PLAIN = r"[+-]?(?:[0-9]+(?:{mark}[0-9]*)?|{mark}[0-9]+)(?:[eE][+-]?[0-9]+)?"
_PATTERN = {
    mark: re.compile(f"{_PLAIN}|{_GROUPED}".format(mark=re.escape(mark), other=other))
    for mark, other in (MARKS, MARKS[::-1])
}


def parse_number(text: str, mark: str) -> float:
    """Return the number that a text is, where `mark` is the decimal mark.

    Thousands may be separated by the other mark, a space or an apostrophe. A number too large for double
    precision comes back as infinite.

    Raises
    ------
    ValueError
        The text is no number.
    """
    text = text.strip().replace("\u2212", "-")
    if not _PATTERN[mark].fullmatch(text):
        raise ValueError(f'"{text}" is no number with the decimal mark "{mark}"')
    return float("".join("." if c == mark else c for c in text if c == mark or c in "0123456789+-eE"))


def readings(text: str) -> dict[str, float]:
    """Return what a text can be read as, by decimal mark: empty where it is no number."""
    found = {}
    for mark in MARKS:
        try:
            found[mark] = parse_number(text, mark)
        except ValueError:
            continue
    return found


def is_ambiguous(text: str) -> bool:
    """Whether a text is two different numbers, by the decimal mark chosen: "1,250", "12.500"."""
    return len(set(readings(text).values())) > 1


def decimal_mark(cells: Iterable[str], delimiter: str) -> str | None:
    """Return the decimal mark of a column, or None where it can't be told.

    Cells that can be read in one way only decide, the majority of them where they differ. Where they are
    even, or there are none, a file delimited by commas writes a decimal point.

    Parameters
    ----------
    cells : iterable of str
        The column's cells.
    delimiter : str
        The file's delimiter.
    """
    cells = list(cells)
    votes = Counter(next(iter(found)) for cell in cells if len(found := readings(cell)) == 1)
    if votes:
        usual = "." if delimiter == "," else ","
        return max(votes, key=lambda mark: (votes[mark], mark == usual))
    ambiguous = [cell for cell in cells if is_ambiguous(cell)]
    if ambiguous and delimiter == "," and not any("," in cell for cell in ambiguous):
        return "."
    return None


def format_number(value: float, mark: str) -> str:
    """Return the shortest text that reads back as exactly this finite number, and in one way only."""
    text = repr(float(value)).removesuffix(".0").replace(".", mark)
    # three decimals look like a group of thousands: a fourth settles it
    return text + "0" if is_ambiguous(text) else text
