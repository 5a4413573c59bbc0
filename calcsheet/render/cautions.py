"""The cautions of a job with their answers, as block and record print them."""

from __future__ import annotations

from collections.abc import Collection, Iterator, Mapping, Sequence
from html import escape
from typing import Any

from calcsheet.job.wording import dotted
from calcsheet.render.answers import Raised, raised, unasked
from calcsheet.render.view import Rendered, View, system_of
from calcsheet.render.words import filled
from calcsheet.steps.card import GENERAL
from calcsheet.steps.cautions import CAUTIONS
from calcsheet.steps.step import Payload

ALWAYS = {caution.kind for caution in GENERAL}
HEADS = {
    "open": "Needs an answer.",
    "incomplete": "Needs an answer; the one given is {}.",
    "lapsed": "Needs an answer; the one given has lapsed, as the finding has changed.",
}
BLANK = "\u2013"


def cautions(payloads: Mapping[str, Payload], agreed: Collection[str] | None = None) -> str:
    """HTML of all cautions of a job: those that wait for an answer first, the general ones last.

    Parameters
    ----------
    payloads : mapping of str to payload
        The job's steps by key.
    agreed : collection of str, optional
        Keys of the cautions to whose answers the checker agrees; nothing is said of a checker where omitted.
    """
    found, system = raised(payloads), system_of(payloads)
    general = [one for one in found if one.caution["kind"] in ALWAYS]
    others = [one for one in found if one.caution["kind"] not in ALWAYS]
    html = f"<h3>Raised by the numbers</h3>{_listed(_in_order(others), system, agreed)}"
    strange = unasked(payloads)
    if strange:
        keys = ", ".join(f"<code>{escape(key)}</code>" for key in strange)
        html += f'<p class="below">Answers that no caution asks for: {keys}.</p>'
    return html + f"<h3>General</h3>{_listed(general, system, agreed)}"


def _in_order(found: Sequence[Raised]) -> list[Raised]:
    """Kinds that wait for an answer first, then those that have one; cautions of a kind together."""
    by_kind: dict[str, list[Raised]] = {}
    for one in found:
        by_kind.setdefault(one.caution["kind"], []).append(one)
    for group in by_kind.values():
        group.sort(key=_rank)
    return [one for group in sorted(by_kind.values(), key=lambda group: _rank(group[0])) for one in group]


def _rank(one: Raised) -> int:
    return 0 if one.waits else 1 if one.caution["answer"] else 2


def _listed(found: Sequence[Raised], system: str, agreed: Collection[str] | None) -> str:
    if not found:
        return "<p>None.</p>"
    kinds = [one.caution["kind"] for one in found]
    items = (_item(one, system, agreed, i > 0 and kinds[i] == kinds[i - 1]) for i, one in enumerate(found))
    return f'<ul class="cautions">{"".join(items)}</ul>'


def _item(one: Raised, system: str, agreed: Collection[str] | None, told: bool) -> str:
    """One caution; why it matters is said once where several of a kind follow each other."""
    words = filled(one.caution["text"], one.caution["numbers"], system, one.at)
    head = ""
    if one.waits:
        head = f'<b class="word">{escape(HEADS[one.state].format(one.said))}</b> '
    lines = [] if told else list(_reasons(one.caution["kind"]))
    lines += _answer(one, agreed)
    rows = "".join(f'<p class="below"><b>{label}</b> {html}</p>' for label, html in lines)
    return f'<li class="caution{" needs-answer" if one.waits else ""}"><p>{head}{words}</p>{rows}</li>'


def _reasons(kind: str) -> Iterator[tuple[str, str]]:
    said = CAUTIONS[kind]
    yield "Why it matters:", escape(said.why)
    yield "Usually done:", escape(said.usual)


def _answer(one: Raised, agreed: Collection[str] | None) -> Iterator[tuple[str, str]]:
    answer = one.answer
    if one.state != "open":
        given = (answer["by"].strip() or "nobody named", answer["date"] or "no date")
        to = "" if one.state == "answered" else f", to finding <code>{escape(answer['finding'] or BLANK)}</code>"
        yield "Answer:", f"{escape(answer['text'].strip() or BLANK)} ({escape(', '.join(given))}{to})"
    if one.waits:
        key = escape(dotted(["answers", one.key]))
        yield "To be answered", f"under <code>{key}</code>, finding <code>{one.finding}</code>"
    if agreed is not None and (one.caution["answer"] or one.state != "open"):
        yield "Checker:", "agrees" if one.key in agreed else BLANK


def render(payloads: Mapping[str, Payload], key: str, options: Mapping[str, Any]) -> Rendered:
    silent = [f"\u201c{step}\u201d" for step, payload in payloads.items() if payload["state"] != "ok"]
    note = ""
    if silent:
        raises = "raises" if len(silent) == 1 else "raise"
        note = f'<p class="below">Not calculated at present, so {raises} none: {escape(", ".join(silent))}.</p>'
    return Rendered(note + cautions(payloads))


def covers(payloads: Mapping[str, Payload], key: str) -> Any:
    """What the view shows: answers in the card, and the cautions of all steps."""
    raises = {step: payload["cautions"] for step, payload in payloads.items()}
    return {"card": payloads[key], "cautions": raises}


VIEW = View("cautions", "Cautions", "card", render, covers=covers)
