"""A comment of who checks: what it asks, the reply, and who may close it."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from typing import Any

from calcsheet.job.errors import InputError

ANSWERED = ("reply", "replied_by", "replied_on")
CLOSED = ("closed_by", "closed_on")
"""Fields that are filled in together."""


@dataclass(frozen=True)
class Comment:
    """A comment; each field is a column of the file.

    Parameters
    ----------
    number : int
        From 1; it stays with the comment.
    revision : str
        The revision commented on.
    by, date : str
        Who and when, as ISO 8601 has it.
    where : str
        Place in the record; may be blank.
    comment : str
        What is asked.
    reply, replied_by, replied_on : str
        The answer, who gave it and when; all blank, or none.
    closed_by, closed_on : str
        Who was content, and when; both blank while the comment is open.
    """

    number: int
    revision: str
    by: str
    date: str
    where: str
    comment: str
    reply: str = ""
    replied_by: str = ""
    replied_on: str = ""
    closed_by: str = ""
    closed_on: str = ""


@dataclass(frozen=True)
class Named:
    """Who is named in a job: its originator, and those who check and approve."""

    originator: str
    checkers: tuple[str, ...] = ()

    @classmethod
    def of(cls, people: Mapping[str, Any], signatures: Iterable[Mapping[str, Any]] = ()) -> Named:
        """Those of a job card's people, as plain JSON, and of a record's signatures."""
        named = [people.get(role, {}).get("name", "") for role in ("checked", "approved")]
        named += [s["name"] for s in signatures if s["role"] in ("checked", "approved")]
        return cls(people["prepared"]["name"], tuple(dict.fromkeys(filter(str.strip, named))))


def open_ones(comments: Iterable[Comment]) -> tuple[Comment, ...]:
    """The comments that nobody has closed."""
    return tuple(c for c in comments if not c.closed_by)


def raised(
    comments: tuple[Comment, ...], revision: str, text: str, by: str, date: str, where: str = ""
) -> tuple[Comment, ...]:
    """The comments and a new one, under the next number; a blank text or name is refused (InputError)."""
    number = max((c.number for c in comments), default=0) + 1
    return (*comments, Comment(number, revision, _said(by, "name"), date, where.strip(), _said(text, "comment")))


def replied(comments: tuple[Comment, ...], number: int, text: str, by: str, date: str) -> tuple[Comment, ...]:
    """The comments, one with a reply; refused (InputError) where it is closed or has a reply of somebody else's."""
    comment = _numbered(comments, number)
    if comment.closed_by:
        raise InputError("", f"comment {number}", f"is closed by {comment.closed_by}", "raise a new one")
    if comment.reply and not _same(comment.replied_by, by):
        raise InputError("", f"comment {number}", f"has a reply by {comment.replied_by}", "raise a new one")
    answer = replace(comment, reply=_said(text, "reply"), replied_by=_said(by, "name"), replied_on=date)
    return _with(comments, answer)


def closed(comments: tuple[Comment, ...], number: int, by: str, date: str, named: Named) -> tuple[Comment, ...]:
    """The comments, one of them closed.

    Parameters
    ----------
    comments : tuple of Comment
        All of them.
    number : int
        Of the one to close.
    by, date : str
        Who closes it, and when.
    named : Named
        Who is named in the job.

    Raises
    ------
    InputError
        It is closed already, or `by` may not close it: that is for who raised it, or a named checker who did not
        reply.
    """
    comment, by = _numbered(comments, number), _said(by, "name")
    if comment.closed_by:
        raise InputError("", f"comment {number}", f"is closed by {comment.closed_by}", "there is nothing to close")
    reason = conflict(comment, by, named.originator)
    if not reason and not any(_same(by, name) for name in (comment.by, *named.checkers)):
        reason = f"{by} neither raised it nor is named as a checker"
    if reason:
        able = [
            name
            for name in dict.fromkeys((comment.by, *named.checkers))
            if not conflict(comment, name, named.originator)
        ]
        raise InputError("", f"comment {number}", reason, f"must be closed by {' or '.join(able)}")
    return _with(comments, replace(comment, closed_by=by, closed_on=date))


def brought(
    comments: tuple[Comment, ...], others: Iterable[Comment], named: Named
) -> tuple[tuple[Comment, ...], tuple[int, ...], tuple[int, ...]]:
    """Comments from another file brought in.

    Parameters
    ----------
    comments : tuple of Comment
        Those that are here.
    others : iterable of Comment
        Those of the other file. One that is here already (same revision, author, day, place and text) is not
        doubled: its reply and closing are taken over where there is none here. The others keep their number where it is
        free, and get the next one else.
    named : Named
        Who is named in the job.

    Returns
    -------
    tuple
        All comments; the numbers of those added; the numbers of those that a reply or a closing was taken over for.

    Raises
    ------
    InputError
        One of them was closed by its job's originator, who did not raise it, or by who replied to it.
    """
    added, completed = [], []
    for other in others:
        reason = conflict(other, other.closed_by, named.originator) if other.closed_by else ""
        if reason:
            raise InputError(
                "", f"comment {other.number} of the file brought in", reason, f"must be closed by {other.by}"
            )
        here = next((c for c in comments if identity(c) == identity(other)), None)
        if here is None:
            taken = {c.number for c in comments}
            number = other.number if other.number not in taken else max(taken) + 1
            comments = (*comments, replace(other, number=number))
            added.append(number)
            continue
        lacking = {n: getattr(other, n) for group in (ANSWERED, CLOSED) if not getattr(here, group[0]) for n in group}
        complete = replace(here, **lacking)
        if complete != here:
            comments = _with(comments, complete)
            completed.append(here.number)
    return comments, tuple(added), tuple(completed)


def conflict(comment: Comment, by: str, originator: str) -> str:
    """Why `by` may not close `comment` of a job that `originator` prepared, whoever else is named; empty where they may."""
    if _same(by, comment.by):
        return ""
    if _same(by, originator):
        return f"{by}, who prepared the calculation, may not close a comment raised by {comment.by}"
    if _same(by, comment.replied_by):
        return f"{by}, who replied to it, may not close a comment raised by {comment.by}"
    return ""


def _numbered(comments: tuple[Comment, ...], number: int) -> Comment:
    for comment in comments:
        if comment.number == number:
            return comment
    there = ", ".join(str(c.number) for c in comments)
    raise InputError("", "", f"no comment {number}", f"must be one of {there}" if there else "there are none yet")


def _with(comments: tuple[Comment, ...], changed: Comment) -> tuple[Comment, ...]:
    return tuple(changed if c.number == changed.number else c for c in comments)


def _said(text: str, what: str) -> str:
    text = re.sub(r"\r\n?", "\n", text).strip()
    if not text:
        raise InputError("", what, "is blank", "must be filled in")
    return text


def _same(name: str, other: str) -> bool:
    return " ".join(name.split()).casefold() == " ".join(other.split()).casefold()


def identity(comment: Comment) -> tuple[str, ...]:
    """What makes two comments of two files the same one."""
    parts = (comment.revision, comment.by, comment.date, comment.where, comment.comment)
    return tuple(" ".join(part.split()).casefold() for part in parts)
