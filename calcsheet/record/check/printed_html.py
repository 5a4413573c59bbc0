"""The print of an HTML record held against its data: made again and compared, or number by number."""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from difflib import SequenceMatcher
from html import unescape
from itertools import islice
from typing import Any

from calcsheet.job.wording import shorten
from calcsheet.record.check.finding import AGREES, DIFFERS, NOT_ASSESSED, Finding
from calcsheet.record.check.layout import same_layout, to_install, too_long
from calcsheet.record.check.numbers import active, differing
from calcsheet.record.check.places import Located, located
from calcsheet.record.files import html_of
from calcsheet.record.recordfile import Read
from calcsheet.record.tokens import name_of, tokens

PART = "print"
DRAWN = 0.02
"""Units of a drawing by which the coordinates of another machine may differ: far below what can be seen."""
NUMBER = re.compile(r"-?\d+(?:\.\d+)?(?:e-?\d+)?")
ALIGNED = 600
"""Tokens that are set side by side one by one where their number differs."""


def html_findings(read: Read, record: Mapping[str, Any]) -> Iterator[Finding]:
    """What the print of an HTML record shows.

    Parameters
    ----------
    read : Read
        The file.
    record : mapping
        Its record in the present format.
    """
    html = read.source.decode("utf-8-sig").replace("\r\n", "\n")
    beyond = too_long(record)
    if same_layout(record) and not beyond:
        yield from _made_again(html, html_of(record))
    else:
        yield from _by_numbers(html, record, units_said=read.record["format"] >= 2)
        yield Finding(PART, NOT_ASSESSED, f"words, figures, equations: {beyond or to_install(record)}")


def _made_again(found: str, made: str) -> Iterator[Finding]:
    if found == made:
        yield Finding(PART, AGREES, "the pages made again from the data are the same, character by character")
        return
    wrong, moved = compared(list(located(tokens(found))), list(located(tokens(made))))
    yield from (Finding(PART, DIFFERS, text, place) for place, text in wrong)
    if not wrong:
        drawn = f", drawings within {moved:.2g} of a unit" if moved else ""
        yield Finding(
            PART, AGREES, f"the pages made again from the data are the same, tag by tag and word by word{drawn}"
        )


def _by_numbers(html: str, record: Mapping[str, Any], *, units_said: bool) -> Iterator[Finding]:
    count, wrong = differing(html, record["payloads"], units_said=units_said)
    yield from (Finding(PART, DIFFERS, text, place) for place, text in wrong)
    yield from (Finding(PART, DIFFERS, text) for text in active(html))
    if not wrong:
        units = "" if units_said else ", each in one of the units of a record"
        verdict = AGREES if count else NOT_ASSESSED
        yield Finding(PART, verdict, f"{count} printed numbers are those of the data, to their last digit{units}")


def compared(old: Sequence[Located], new: Sequence[Located]) -> tuple[list[tuple[str, str]], float]:
    """What differs between a printed document and the one made again.

    Parameters
    ----------
    old, new : sequence of Located
        Tokens of the document in hand, and of the document as it should be.

    Returns
    -------
    list of (str, str)
        Place, and what is printed and should be, for every token that differs.
    float
        The largest difference of a drawing's coordinates that is within `DRAWN`.
    """
    start, moved = 0, 0.0
    for a, b in zip(old, new, strict=False):
        apart = _apart(a, b)
        if apart is None:
            break
        moved, start = max(moved, apart), start + 1
    end = 0
    while end < min(len(old), len(new)) - start and _apart(old[-1 - end], new[-1 - end]) is not None:
        end += 1
    old_rest, new_rest = old[start : len(old) - end], new[start : len(new) - end]
    wrong: list[tuple[Located, Sequence[Located], Sequence[Located]]] = []
    for here, there in _pairs(old_rest, new_rest):
        if len(here) == len(there):
            wrong += [(b, [a], [b]) for a, b in zip(here, there, strict=True) if _apart(a, b) is None]
        else:
            wrong.append(((there or here)[0], here, there))
    return [(at.place, _said(here, there, at)) for at, here, there in wrong], moved


def _pairs(old: Sequence[Located], new: Sequence[Located]) -> Iterator[tuple[Sequence[Located], Sequence[Located]]]:
    """Stretches that differ, side by side."""
    if len(old) == len(new) or max(len(old), len(new)) > ALIGNED:
        if old or new:
            yield old, new
        return
    matcher = SequenceMatcher(None, [at.token for at in old], [at.token for at in new], autojunk=False)
    for kind, a, b, c, d in matcher.get_opcodes():
        if kind != "equal":
            yield old[a:b], new[c:d]


def _apart(a: Located, b: Located) -> float | None:
    """By how much two tokens' coordinates differ; None where the tokens differ otherwise."""
    if a.token == b.token or (a.inside == b.inside == "script" and not name_of(a.token) and not name_of(b.token)):
        return 0.0  # the script's text is the data itself
    if b.inside != "svg" or not name_of(b.token):
        return None
    x, y = NUMBER.findall(a.token), NUMBER.findall(b.token)
    if len(x) != len(y) or NUMBER.sub("0", a.token) != NUMBER.sub("0", b.token):
        return None
    gap = max((abs(float(p) - float(q)) for p, q in zip(x, y, strict=True)), default=0.0)
    return gap if gap <= DRAWN else None


def _said(here: Sequence[Located], there: Sequence[Located], at: Located) -> str:
    if not there:
        return f"printed {_quoted(here)}, which should not stand there"
    if not here:
        return f"not printed: {_quoted(there)}"
    what = "drawn" if at.inside == "svg" and name_of(at.token) else "printed"
    return f"{what} {_quoted(here)}, should be {_quoted(there)}"


def _quoted(stretch: Sequence[Located]) -> str:
    """Words of a stretch of tokens; its tags where it has none."""
    words = "".join(unescape(at.token) for at in islice(stretch, 40) if not name_of(at.token)).strip()
    text = " ".join((words or "".join(at.token for at in islice(stretch, 5))).split())
    return f'"{shorten(text)}"'
