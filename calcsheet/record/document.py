"""A record's content put in its order: front, the notebook in its own order, back."""

from __future__ import annotations

import datetime
import functools
import json
import platform
from collections.abc import Callable, Iterator, Mapping
from html import escape
from importlib.metadata import version
from typing import Any

from calcsheet import __version__
from calcsheet.record.collect import Content, Own, Shown, Words
from calcsheet.record.equations import EquationError, to_mathml, to_svg
from calcsheet.record.errors import RecordError
from calcsheet.record.headline import brief, in_full
from calcsheet.record.markdown import to_html
from calcsheet.record.own import own_cell
from calcsheet.record.page import Cover, Fact, Page, Person, Section, Target
from calcsheet.record.status import FOR_CHECKING, status_of
from calcsheet.render.card import assumptions, origins
from calcsheet.render.figure import Drawing
from calcsheet.render.registry import VIEWS
from calcsheet.render.table import facts
from calcsheet.render.view import system_of
from calcsheet.render.words import cautions, evidence, worked
from calcsheet.steps.registry import STEPS
from calcsheet.steps.serial import fingerprint
from calcsheet.steps.step import Payload

PROGRAMME = f"calcsheet {__version__}"
ROLES = (("prepared", "Prepared"), ("checked", "Checked"), ("approved", "Approved"))
LIBRARIES = ("numpy", "scipy", "matplotlib", "nbconvert")
FORMAT = 1
"""Format of the JSON record."""

Payloads = Mapping[str, Payload]


def record_of(content: Content) -> dict[str, Any]:
    """The record as plain JSON: all that its pages are made from."""
    inputs = {key: p["inputs"] for key, p in content.payloads.items()}
    results = {key: p["result"] for key, p in content.payloads.items()}
    return {
        "format": FORMAT,
        "programme": PROGRAMME,
        "status": status_of(content.payloads, content.words),
        "fingerprints": {"inputs": fingerprint(inputs), "results": fingerprint(results)},
        "payloads": dict(content.payloads),
        "notebook": [_plain(part) for part in content.parts],
        "versions": versions(),
    }


def versions() -> dict[str, str]:
    """Versions of the program, of Python and of the libraries that calculate and draw."""
    return {"calcsheet": __version__, "Python": platform.python_version()} | {name: version(name) for name in LIBRARIES}


def page_of(content: Content, target: Target, engine: str = "") -> Page:
    """The pages of a record.

    Parameters
    ----------
    content : Content
        What the notebook holds.
    target : {"html", "pdf"}
        Where it is shown: equations are MathML on screen, drawings on paper.
    engine : str
        The program that makes the PDF, with its version.

    Raises
    ------
    RecordError
        An equation of the engineer's that can't be set.
    """
    record, payloads = record_of(content), content.payloads
    card = payloads["card"]["inputs"]
    job = card["job"]
    cover = Cover(
        project=job["project"],
        title=job["title"],
        number=job["number"],
        revision=job["revision"],
        date=datetime.date.fromisoformat(job["date"]),
        status=record["status"],
        reason=job["reason"],
        purpose=job["purpose"],
        people=tuple(_person(role, card["people"][key]) for key, role in ROLES),
        headline=tuple(Fact(label, html) for label, html in brief(payloads)),
        programme=PROGRAMME,
        pdf_engine=engine,
        fingerprint=f"inputs {record['fingerprints']['inputs'][:12]}, results {record['fingerprints']['results'][:12]}",
    )
    math = to_mathml if target == "html" else to_svg
    return Page(
        cover=cover,
        draft=record["status"] != FOR_CHECKING,
        headline=in_full(payloads, content.words),
        sections=(*_body(content, math), *_back(content, record)),
        data=json.dumps(record, ensure_ascii=False),
    )


# ---- front -----------------------------------------------------------------------------------------------------------


def _person(role: str, who: Mapping[str, Any]) -> Person:
    held = ", ".join(who[k] for k in ("qualification", "registration") if who[k])
    date = datetime.date.fromisoformat(who["date"]) if who["date"] else None
    signed = date if role == ROLES[0][1] else None  # who checks and approves signs the issued record, not the job card
    return Person(role, who["name"], who["initials"], held, signed)


# ---- the notebook in its own order -----------------------------------------------------------------------------------


def _body(content: Content, math: Callable[[str, bool], str]) -> Iterator[Section]:
    payloads, told = content.payloads, set()
    for i, part in enumerate(content.parts, 1):
        if isinstance(part, Words):
            yield Section(f"part-{i}", "", _words(part, math, f"words-{i}"))
        elif isinstance(part, Own):
            yield Section(f"part-{i}", "", own_cell(part))
        else:
            html = f'<h3 id="view-{i}">{escape(VIEWS[part.view].title)}</h3>' + shown(part, payloads)
            if part.step not in told:
                told.add(part.step)
                html = _method(part.step, payloads, math, i) + html + _lines(part.step, payloads, i)
            yield Section(f"part-{i}", "", html)


def _words(part: Words, math: Callable[[str, bool], str], prefix: str) -> str:
    try:
        return to_html(part.source, math, attachments=part.attachments, top=2, prefix=prefix)
    except EquationError as error:
        first = part.source.strip().splitlines()[0]
        raise RecordError(f'{error}; in the markdown cell that begins "{first[:60]}"') from None


def shown(part: Shown, payloads: Payloads) -> str:
    """HTML of a view with its figures."""
    html, drawings = _rendered(part.view, part.step, json.dumps(part.options, sort_keys=True), _Held(payloads))
    figures = "".join(f"<figure>{d.svg}<figcaption>{escape(d.caption)}</figcaption></figure>" for d in drawings)
    return html + figures


class _Held:
    """Payloads as a key of the cache below: drawn once for screen and paper."""

    def __init__(self, payloads: Payloads) -> None:
        self.payloads = payloads

    def __hash__(self) -> int:
        return id(self.payloads)

    def __eq__(self, other: object) -> bool:
        return isinstance(other, _Held) and other.payloads is self.payloads


@functools.lru_cache(maxsize=64)
def _rendered(view: str, step: str, options: str, held: _Held) -> tuple[str, tuple[Drawing, ...]]:
    rendered = VIEWS[view].render(held.payloads, step, json.loads(options))
    return rendered.html, rendered.draw()


def _method(key: str, payloads: Payloads, math: Callable[[str, bool], str], i: int) -> str:
    method = STEPS[payloads[key]["kind"]].method
    return f'<h3 id="method-{i}">Method</h3>{to_html(method, math, top=4, prefix=f"method-{i}")}' if method else ""


def _lines(key: str, payloads: Payloads, i: int) -> str:
    lines = payloads[key]["lines"]
    if not lines:
        return ""
    return f'<h3 id="lines-{i}">Worked lines</h3>' + worked([(f"/{key}", line) for line in lines], system_of(payloads))


# ---- back ------------------------------------------------------------------------------------------------------------


def _back(content: Content, record: Mapping[str, Any]) -> Iterator[Section]:
    payloads = content.payloads
    system, card = system_of(payloads), payloads["card"]["inputs"]
    figures = [(f"/{key}/evidence/{i}", e) for key, p in payloads.items() for i, e in enumerate(p["evidence"])]
    raised = [(f"/{key}", c) for key, p in payloads.items() for c in p["cautions"]]
    yield Section("evidence", "Evidence", _EVIDENCE + evidence(figures), part="back")
    yield Section("assumptions", "Assumptions", assumptions(card), part="back")
    yield Section("cautions", "Cautions", cautions(raised, card["answers"], system), part="back")
    yield Section("inputs", "Complete inputs", _inputs(payloads), part="back")
    yield Section("versions", "Versions and fingerprints", _versions(record), part="back")


_EVIDENCE = (
    "<p>Each figure measures an error, 0 where all is exact, and stands beside the largest accepted. The second route and "
    "the Sturm count use nothing of the first solution but the frequencies that they are held against.</p>"
)


def _inputs(payloads: Payloads) -> str:
    parts = [f"<h3>Storeys</h3>{shown(Shown('storeys', 'storeys', {}), payloads)}"]
    if "masses" in payloads:
        parts.append(f"<h3>Mass take-off</h3>{shown(Shown('mass take-off', 'masses', {}), payloads)}")
    parts.append(f"<h3>Origin of the tables</h3>{origins(payloads['card']['inputs'])}")
    rows = []
    for key, payload in payloads.items():
        if payload["inputs"] and key not in ("card", "masses", "storeys", "basis"):
            chosen = ", ".join(f"{k} {'as the job' if v is None else v}" for k, v in payload["inputs"].items())
            rows.append((f"{STEPS[payload['kind']].title}, step \u201c{key}\u201d", escape(chosen)))
    parts.append(f"<h3>Options of the steps</h3>{facts(rows)}")
    return "".join(parts)


def _versions(record: Mapping[str, Any]) -> str:
    rows = [(name, escape(v)) for name, v in record["versions"].items()]
    rows += [(f"fingerprint of {what}", f"<code>{value}</code>") for what, value in record["fingerprints"].items()]
    words = "<p>Fingerprints are SHA-256 of the canonical JSON (RFC 8785) of all steps\u2019 inputs and of all their results.</p>"
    return facts(rows) + words


def _plain(part: Words | Shown | Own) -> dict[str, Any]:
    if isinstance(part, Words):
        return {"words": part.source}
    if isinstance(part, Shown):
        return {"view": part.view, "step": part.step, "options": dict(part.options)}
    return {"own": part.source}
