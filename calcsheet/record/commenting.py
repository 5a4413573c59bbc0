"""Where comments on a record are kept, and who may do what with them."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from pathlib import Path

from calcsheet.job import card as job_card
from calcsheet.job import textfile
from calcsheet.job.card import parse_card
from calcsheet.job.comment import Comment, Named, brought, closed, raised, replied
from calcsheet.job.comments import edited, file_of, read_comments
from calcsheet.job.issued import issued_records
from calcsheet.record.errors import RecordError
from calcsheet.record.opened import opened
from calcsheet.record.register import printable
from calcsheet.steps.serial import from_json, to_json

LARGEST = 8 * 1024 * 1024
"""Bytes of the largest file that is brought in."""


@dataclass(frozen=True)
class Place:
    """A job or a record that is commented on.

    Parameters
    ----------
    file : Path
        Where its comments are.
    revision : str
        The revision commented on.
    named : Named
        Who is named in it.
    printed : tuple of Comment
        Those that a record away from its job holds: its file, where there is none yet, begins with them.
    """

    file: Path
    revision: str
    named: Named
    printed: tuple[Comment, ...] = ()

    def comments(self) -> tuple[Comment, ...]:
        """All comments."""
        return read_comments(self.file, self.named.originator) if self.file.is_file() else self.printed

    def comment(self, text: str, by: str, date: str, where: str = "") -> tuple[Comment, ...]:
        """Raise a comment; all comments, the new one last. Arguments and errors are those of `raised`."""
        return edited(self.file, lambda now: raised(now, self.revision, text, by, date, where), self.printed)

    def reply(self, number: int, text: str, by: str, date: str) -> tuple[Comment, ...]:
        """Reply to a comment; arguments and errors are those of `replied`."""
        return edited(self.file, lambda now: replied(now, number, text, by, date), self.printed)

    def close(self, number: int, by: str, date: str) -> tuple[Comment, ...]:
        """Close a comment; arguments and errors are those of `closed`."""
        return edited(self.file, lambda now: closed(now, number, by, date, self.named), self.printed)

    def bring(self, file: Path) -> tuple[tuple[int, ...], tuple[int, ...]]:
        """Bring in the comments of another file: the numbers of those added, and of those completed."""
        if not file.is_file():
            raise RecordError(f"no file {file}; name the comments.csv that came with the record")
        if file.stat().st_size > LARGEST:
            raise RecordError(f"{file.name}: more than {LARGEST // 2**20} MB; no file of comments is as large")
        others = read_comments(file)
        counts: tuple[tuple[int, ...], tuple[int, ...]] = ((), ())

        def change(now: tuple[Comment, ...]) -> tuple[Comment, ...]:
            nonlocal counts
            after, *found = brought(now, others, self.named)
            counts = (found[0], found[1])
            return after

        edited(self.file, change, self.printed)
        return counts


def place_of(path: Path) -> Place:
    """The comments' place for a job folder or a record's file.

    Parameters
    ----------
    path : Path
        A job folder: its newest issued revision is commented on, or the job card's where none is issued. A record in
        a job's issued folder: the job's comments. A record alone: those beside it.

    Raises
    ------
    RecordError
        Neither of these.
    InputError
        The job card can't be read.
    """
    if not path.is_dir():
        return _of_record(path)
    card_file = path / job_card.FILE
    if not card_file.is_file():
        raise RecordError(f"no {job_card.FILE} in {path}; name a job folder or a record's file")
    card = parse_card(textfile.read(card_file).text)
    issued = issued_records(path)
    revision = issued[-1].revision if issued else card.job.revision
    return Place(file_of(path), revision, Named.of(to_json(card.people)))


def _of_record(path: Path) -> Place:
    record = opened(path)
    card = record["payloads"]["card"]["inputs"]
    named = Named.of(card["people"], record["signatures"])
    file = file_of(path)
    in_job = file.parent != path.parent
    printed = () if in_job else tuple(from_json(Comment, comment) for comment in record["comments"])
    return Place(file, card["job"]["revision"], named, printed)


def done(
    path: Path,
    text: str = "",
    *,
    by: str = "",
    where: str = "",
    reply: int | None = None,
    close: int | None = None,
    bring: Path | None = None,
    date: str = "",
) -> list[str]:
    """What was asked for on the command line, done; the comments concerned in words, all of them where nothing was.

    Parameters
    ----------
    path : Path
        A job folder or a record's file.
    text : str
        A comment, or the reply to one.
    by, date : str
        Who, and the day.
    where : str
        Place in the record.
    reply, close : int, optional
        Number of the comment that is replied to, or closed.
    bring : Path, optional
        A file of comments to bring in.

    Raises
    ------
    RecordError
        More than one thing is asked for, or nobody is named.
    InputError
        It is refused.
    """
    asked = [name for name, value in (("--reply", reply), ("--close", close), ("--bring", bring)) if value is not None]
    if len(asked) > 1:
        raise RecordError(f"{' and '.join(asked)}: one thing at a time")
    if text.strip() and asked in (["--close"], ["--bring"]):
        raise RecordError(f"{asked[0]} takes no text; raise a comment or reply to one first")
    if not by.strip() and (text.strip() or asked in (["--reply"], ["--close"])):
        raise RecordError('nobody is named; say --by "NAME"')
    place = place_of(path)
    if bring is not None:
        added, completed = place.bring(bring)
        return [
            f"Brought in: {len(added)} new, {len(completed)} completed.",
            *_of(place.comments(), (*added, *completed)),
        ]
    if close is not None:
        return _of(place.close(close, by, date), (close,))
    if reply is not None:
        return _of(place.reply(reply, text, by, date), (reply,))
    if text.strip():
        after = place.comment(text, by, date, where)
        return _of(after, (after[-1].number,))
    return lines(place.comments()) or [f"No comments on revision {place.revision} or before."]


def _of(comments: Iterable[Comment], numbers: tuple[int, ...]) -> list[str]:
    return lines(c for c in comments if c.number in numbers)


def lines(comments: Iterable[Comment]) -> list[str]:
    """Comments in words, a line for each thing said."""
    said = []
    for c in comments:
        place = f", {c.where}" if c.where else ""
        said.append(f"{c.number}  revision {c.revision}{place}, {c.by}, {c.date}: {c.comment}")
        if c.reply:
            said.append(f"    reply, {c.replied_by}, {c.replied_on}: {c.reply}")
        said.append(f"    closed by {c.closed_by}, {c.closed_on}" if c.closed_by else "    open")
    return [printable(line) for line in said]
