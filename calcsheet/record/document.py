"""A record's content put in its order: front, the notebook in its own order, back."""

from __future__ import annotations

import datetime
import functools
import json
import platform
from collections.abc import Callable, Iterator, Mapping, Sequence
from html import escape
from importlib.metadata import version
from typing import Any

from calcsheet import __version__
from calcsheet.record.collect import Content
from calcsheet.record.equations import EquationError, to_mathml, to_svg
from calcsheet.record.errors import RecordError
from calcsheet.record.fingerprints import fingerprints_of, short
from calcsheet.record.headline import brief, in_full
from calcsheet.record.layout import layout_of
from calcsheet.record.markdown import to_html
from calcsheet.record.migrate import FORMAT
from calcsheet.record.own import own_cell
from calcsheet.record.page import Cover, Fact, Page, Person, Section, Target
from calcsheet.record.parts import Own, Shown, Words, from_plain, to_plain
from calcsheet.record.signature import sign_off, signature
from calcsheet.record.status import CHECKED_ROLE, DRAFT, status_of, valid
from calcsheet.render.card import assumptions, origins
from calcsheet.render.cautions import cautions
from calcsheet.render.figure import Drawing
from calcsheet.render.registry import VIEWS
from calcsheet.render.table import facts
from calcsheet.render.view import system_of
from calcsheet.render.words import evidence, worked
from calcsheet.steps.compare import EARLIER
from calcsheet.steps.fromfiles import FROM_FILES, MASSES, STIFFNESSES
from calcsheet.steps.registry import STEPS
from calcsheet.steps.step import Payload

PROGRAMME = f"calcsheet {__version__}"
ROLES = (("prepared", "Prepared"), ("checked", "Checked"), ("approved", "Approved"))
LIBRARIES = ("numpy", "scipy", "matplotlib", "nbconvert")
CHANGES = "what changed"
"""The view that holds a record against an earlier one."""
CAUTIONS = "cautions"
"""The view that lists all cautions."""

Payloads = Mapping[str, Payload]
Math = Callable[[str, bool], str]


def record_of(
    content: Content, paper: str = "a4", engine: str = "", comments: Sequence[Mapping[str, Any]] = ()
) -> dict[str, Any]:
    """The record as plain JSON: all that its pages are made from.

    Parameters
    ----------
    content : Content
        What the notebook holds.
    paper : {"a4", "letter"}
        Paper size.
    engine : str
        The program that makes the PDF, with its version; empty where none is made.
    comments : sequence of mapping
        The checkers' comments.
    """
    record = {
        "format": FORMAT,
        "programme": PROGRAMME,
        "payloads": dict(content.payloads),
        "notebook": [to_plain(part) for part in content.parts],
        "layout": layout_of(paper, engine),
        "versions": versions(),
        "signatures": [],
        "comments": [dict(comment) for comment in comments],
    }
    author = content.payloads["card"]["inputs"]["people"]["prepared"]
    if author["date"]:
        record["signatures"] = [signature(record, "prepared", **author)]
    return settled(record)


def settled(record: Mapping[str, Any]) -> dict[str, Any]:
    """The record with the status and the fingerprints that follow from the rest of it."""
    return {**record, "status": status_of(record), "fingerprints": fingerprints_of(record)}


def versions() -> dict[str, str]:
    """Versions of the program, of Python and of the libraries that calculate and draw."""
    return {"calcsheet": __version__, "Python": platform.python_version()} | {name: version(name) for name in LIBRARIES}


def page_of(record: Mapping[str, Any], target: Target) -> Page:
    """The pages of a record, from its data alone.

    Parameters
    ----------
    record : mapping
        As `record_of` makes it.
    target : {"html", "pdf"}
        Where it is shown: equations are MathML on screen, drawings on paper.

    Raises
    ------
    RecordError
        An equation of the engineer's that can't be set.
    """
    payloads = record["payloads"]
    card = payloads["card"]["inputs"]
    job = card["job"]
    signed = valid(record)
    cover = Cover(
        project=job["project"],
        title=job["title"],
        number=job["number"],
        revision=job["revision"],
        date=datetime.date.fromisoformat(job["date"]),
        status=record["status"],
        reason=job["reason"],
        purpose=job["purpose"],
        people=tuple(_person(role, card["people"][key], signed.get(key)) for key, role in ROLES),
        headline=tuple(Fact(label, html) for label, html in brief(payloads)),
        programme=record["programme"],
        pdf_engine=record["layout"]["engine"] if target == "pdf" else "",
        fingerprint=short(record["fingerprints"], ("inputs", "notebook", "results")),
        footer=short(record["fingerprints"]),
    )
    return Page(
        cover=cover,
        draft=record["status"] == DRAFT,
        headline=in_full(record),
        sections=(*_body(record, to_mathml if target == "html" else to_svg), *_back(record)),
        data=json.dumps(record, ensure_ascii=False),
    )


# ---- front -----------------------------------------------------------------------------------------------------------


def _person(role: str, named: Mapping[str, Any], signed: Mapping[str, Any] | None) -> Person:
    who = named if signed is None else signed
    held = ", ".join(who[k] for k in ("qualification", "registration") if who[k])
    day = None if signed is None else datetime.date.fromisoformat(signed["date"])
    return Person(role, who["name"], who["initials"], held, day)


# ---- the notebook in its own order -----------------------------------------------------------------------------------


def _body(record: Mapping[str, Any], math: Math) -> Iterator[Section]:
    payloads, told = record["payloads"], set()
    for i, part in enumerate(map(from_plain, record["notebook"]), 1):
        if isinstance(part, Words):
            yield Section(f"part-{i}", "", _words(part, math, f"words-{i}"))
        elif isinstance(part, Own):
            yield Section(f"part-{i}", "", own_cell(part))
        elif part.view == CAUTIONS:  # a section of its own at the back, whether the notebook shows them or not
            yield Section(f"part-{i}", "", '<p>All cautions are listed under <a href="#cautions">Cautions</a>.</p>')
        else:
            html = f'<h3 id="view-{i}">{escape(VIEWS[part.view].title)}</h3>' + shown(part, payloads)
            if part.step not in told:
                told.add(part.step)
                html = _method(part.step, payloads, math, i) + html + _lines(part.step, payloads, i)
            yield Section(f"part-{i}", "", html)


def _words(part: Words, math: Math, prefix: str) -> str:
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


def _method(key: str, payloads: Payloads, math: Math, i: int) -> str:
    step = STEPS[payloads[key]["kind"]]
    if not step.method:
        return ""
    words = to_html(step.method, math, top=4, prefix=f"method-{i}")
    return f'<h3 id="method-{i}">Method: {escape(step.title.lower())}</h3>{words}'


def _lines(key: str, payloads: Payloads, i: int) -> str:
    lines = payloads[key]["lines"]
    if not lines:
        return ""
    named = STEPS[payloads[key]["kind"]].title.lower() + ("" if key == payloads[key]["kind"] else f" ({key})")
    heading = f'<h3 id="lines-{i}">Worked lines: {escape(named)}</h3>'
    return heading + worked([(f"/{key}", line) for line in lines], system_of(payloads))


# ---- back ------------------------------------------------------------------------------------------------------------


def _back(record: Mapping[str, Any]) -> Iterator[Section]:
    payloads = record["payloads"]
    card = payloads["card"]["inputs"]
    figures = [(f"/{key}/evidence/{i}", e) for key, p in payloads.items() for i, e in enumerate(p["evidence"])]
    agreed = valid(record).get(CHECKED_ROLE, {}).get("agreed", ())
    yield Section("evidence", "Evidence", _EVIDENCE + evidence(figures), part="back")
    yield Section("assumptions", "Assumptions", assumptions(card), part="back")
    yield Section("cautions", "Cautions", cautions(payloads, agreed), part="back")
    if EARLIER in payloads and not any(part.get("view") == CHANGES for part in record["notebook"]):
        yield Section("changes", "What changed", shown(Shown(CHANGES, EARLIER, {}), payloads), part="back")
    yield Section("sign-off", "Sign-off and comments", sign_off(record), part="back")
    yield Section("inputs", "Complete inputs", _inputs(payloads), part="back")
    yield Section("versions", "Versions and fingerprints", _versions(record), part="back")


_EVIDENCE = (
    "<p>Each figure measures an error, 0 where all is exact, and stands beside the largest accepted. The second route and "
    "the Sturm count use nothing of the first solution but the frequencies that they are held against.</p>"
)


def _inputs(payloads: Payloads) -> str:
    parts = [f"<h3>Storeys</h3>{shown(Shown('storeys', 'storeys', {}), payloads)}"]
    if MASSES in payloads:
        parts.append(f"<h3>Mass take-off</h3>{shown(Shown('mass take-off', MASSES, {}), payloads)}")
    if STIFFNESSES in payloads:
        parts.append(f"<h3>Stiffness take-off</h3>{shown(Shown('members', STIFFNESSES, {}), payloads)}")
    parts.append(f"<h3>Origin of the tables</h3>{origins(payloads['card']['inputs'])}")
    rows = []
    for key, payload in payloads.items():
        if payload["inputs"] and key not in (*FROM_FILES, EARLIER):
            chosen = ", ".join(f"{k} {'as the job' if v is None else v}" for k, v in payload["inputs"].items())
            rows.append((f"{STEPS[payload['kind']].title}, step \u201c{key}\u201d", escape(chosen)))
    parts.append(f"<h3>Options of the steps</h3>{facts(rows)}")
    return "".join(parts)


def _versions(record: Mapping[str, Any]) -> str:
    rows = [(name, escape(v)) for name, v in record["versions"].items()]
    rows += [(f"fingerprint of {what}", f"<code>{value}</code>") for what, value in record["fingerprints"].items()]
    return facts(rows) + _FINGERPRINTS


_FINGERPRINTS = (
    "<p>Fingerprints are SHA-256 of canonical JSON (RFC 8785). Inputs are those of all steps, people and empty entries left "
    "out; results hold worked lines, cautions and evidence too; the notebook is its words and the order of what it shows. A "
    "signature covers these three. Layout, versions and people have their own, so that neither an upgrade nor a remark reads "
    "as a change of the calculation.</p>"
)
