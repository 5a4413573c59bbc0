"""Cautions of a job under their keys, each with its answer and whether that counts.

An answer counts where it has a text, a name and a date, and was given to the finding as it now prints.
"""

from __future__ import annotations

import datetime as dt
import difflib
import hashlib
import re
from collections.abc import Mapping
from dataclasses import dataclass
from html import unescape
from typing import Any, Literal

from calcsheet.job.card import FILE
from calcsheet.job.errors import InputError
from calcsheet.job.wording import dotted
from calcsheet.render.view import system_of
from calcsheet.render.words import filled
from calcsheet.steps.step import Payload, key_of

State = Literal["open", "incomplete", "lapsed", "answered"]
SHORT = 8
"""Characters of a finding."""
PARTS = ("text", "by", "date", "finding")


@dataclass(frozen=True)
class Raised:
    """A caution of a job.

    Parameters
    ----------
    key : str
        Key under which the job answers it.
    at : str
        JSON pointer of its step.
    caution : mapping
        Plain JSON of the caution.
    plain : str
        What was found, as the record prints it, without markup.
    answer : mapping
        The job's answer; empty where there is none.
    lacks : tuple of str
        What that answer still lacks.
    """

    key: str
    at: str
    caution: Mapping[str, Any]
    plain: str
    answer: Mapping[str, Any]
    lacks: tuple[str, ...]

    @property
    def finding(self) -> str:
        """Identity of what was found: another one as soon as the printed words or digits change."""
        return _identity(self.plain)

    @property
    def state(self) -> State:
        """How its answer stands to it."""
        if self.lacks == PARTS:
            return "open"
        if self.lacks:
            return "incomplete"
        return "answered" if self.answer["finding"] == self.finding else "lapsed"

    @property
    def waits(self) -> bool:
        """Whether an answer is asked for and none that counts is there."""
        return bool(self.caution["answer"]) and self.state != "answered"

    @property
    def said(self) -> str:
        """Its state in words."""
        return f"incomplete: no {', no '.join(self.lacks)}" if self.state == "incomplete" else self.state


def finding(caution: Mapping[str, Any], system: str) -> str:
    """Identity of what a caution found: 8 hexadecimal digits of the SHA-256 of its words as printed.

    Parameters
    ----------
    caution : mapping
        Plain JSON of the caution.
    system : {"SI", "US"}
        System of units it is printed in.
    """
    return _identity(_plain(caution, system))


def raised(payloads: Mapping[str, Payload]) -> tuple[Raised, ...]:
    """All cautions of a job, in the order of its steps.

    Parameters
    ----------
    payloads : mapping of str to payload
        The job's steps by key, the job card among them. The key of a caution names its step too where that is not the
        only one of its kind, or has a name of its own.
    """
    system, answers = system_of(payloads), payloads["card"]["inputs"]["answers"]
    found = []
    for step, payload in payloads.items():
        of = "" if step == payload["kind"] else f" of {step}"
        for caution in payload["cautions"]:
            key = key_of(caution["kind"], caution["subject"]) + of
            answer = answers.get(key, {})
            lacks = tuple(part for part in PARTS if not str(answer.get(part) or "").strip())
            found.append(Raised(key, f"/{step}", caution, _plain(caution, system), answer, lacks))
    return tuple(found)


def unasked(payloads: Mapping[str, Payload]) -> tuple[str, ...]:
    """Keys of the job's answers that none of its cautions has."""
    keys = {one.key for one in raised(payloads)}
    return tuple(key for key in payloads["card"]["inputs"]["answers"] if key not in keys)


def unasked_words(payloads: Mapping[str, Payload]) -> tuple[str, ...]:
    """A clause for each answer that no caution asks for, with the most like key of a caution that has no answer."""
    answers = payloads["card"]["inputs"]["answers"]
    free = [one.key for one in raised(payloads) if one.key not in answers]
    said = []
    for key in unasked(payloads):
        nearest = "".join(f"; the nearest that has no answer is {dotted([k])}" for k in _nearest(key, free))
        said.append(f"{FILE}, {dotted(['answers', key])}: no caution has this key{nearest}")
    return tuple(said)


def _nearest(key: str, keys: list[str]) -> list[str]:
    return difflib.get_close_matches(key, keys, n=1)


def answer_to(
    payloads: Mapping[str, Payload], key: str, text: str, by: str, date: dt.date, again: bool = False
) -> dict[str, str | dt.date]:
    """The table that answers a caution as it now stands, for the job card.

    Parameters
    ----------
    payloads : mapping of str to payload
        The job's steps by key.
    key : str
        The caution's key.
    text, by : str
        The answer, and whose it is.
    date : date
        Its day; one that says the same of the same finding keeps the day it was given.
    again : bool
        Whether the text may be one that was given to an earlier finding.

    Raises
    ------
    InputError
        No such caution, a blank text or name, or words that were given to an earlier finding: a cell that is run again
        must not answer what nobody has read.
    """
    where = dotted(["answers", key])
    found = {one.key: one for one in raised(payloads)}
    if key not in found:
        asked = [one.key for one in found.values() if one.caution["answer"]]
        allowed = f"must be one of {', '.join(asked)}" if asked else "no caution of this job asks for an answer"
        raise InputError(FILE, where, "no caution has this key", allowed)
    for name, value in (("text", text), ("by", by)):
        if not value.strip():
            raise InputError(FILE, f"{where}.{name}", "got a blank", "must be a text that is not blank")
    now = found[key]
    same = (now.answer.get("text"), now.answer.get("by")) == (text, by)
    if same and now.state == "answered":
        date = dt.date.fromisoformat(now.answer["date"])
    if same and now.state == "lapsed" and not again:
        allowed = "read the present one, then answer it in other words or say that these are meant again"
        raise InputError(FILE, where, "these words answer an earlier finding", allowed)
    return {"text": text, "by": by, "date": date, "finding": now.finding}


def _plain(caution: Mapping[str, Any], system: str) -> str:
    html = filled(caution["text"], caution["numbers"], system, "")
    return " ".join(unescape(re.sub(r"<[^>]*>", "", html)).split())


def _identity(plain: str) -> str:
    return hashlib.sha256(plain.encode()).hexdigest()[:SHORT]
