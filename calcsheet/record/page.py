"""One page template for screen and paper: what a record holds, and its HTML."""

from __future__ import annotations

import base64
import datetime
import re
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cache
from html.parser import HTMLParser
from importlib.resources import files
from typing import Literal

from jinja2 import Environment, StrictUndefined, Template
from markupsafe import Markup

from calcsheet.record.figures import settle_figures
from calcsheet.record.fonts import font_faces

Target = Literal["html", "pdf"]
Paper = Literal["a4", "letter"]

PARTS = ("front", "body", "back")
PAPERS = ("a4", "letter")
LISTED = (2, 3)
HEAD, FOOT = 60, 50
"""Characters of the project and of the title that fit one line of the running head and foot."""
WORDS = 60
"""Words of the purpose on the cover: more would push the sign-off off the first sheet."""
HEADING = re.compile(r"h[2-6]")
MONTHS = [
    "January", "February", "March", "April", "May", "June", "July", "August", "September", "October",
    "November", "December",
]  # fmt: skip


@dataclass(frozen=True)
class Person:
    """A row of the sign-off table.

    Parameters
    ----------
    role : str
        What the person answers for, such as "Prepared".
    name, initials : str
        Empty until someone takes the role.
    qualification : str
        Qualification and registration or licence number.
    date : datetime.date, optional
        Day of signing.
    """

    role: str
    name: str = ""
    initials: str = ""
    qualification: str = ""
    date: datetime.date | None = None


@dataclass(frozen=True)
class Fact:
    """A label and its value; the value is HTML, made by our own renderers."""

    label: str
    html: str


@dataclass(frozen=True)
class Cover:
    """The first page.

    Parameters
    ----------
    project, title, number, revision : str
        Identity of the calculation.
    date : datetime.date
        Date of the revision.
    status : str
        DRAFT, FOR CHECKING, CHECKED or APPROVED; printed here only.
    reason, purpose : str
        Why this revision is issued; what the calculation is for.
    people : tuple of Person
        Sign-off rows in order; the first two (prepared, checked) give the initials at the foot of every page.
    headline : tuple of Fact
        The results, summarised.
    programme : str
        Name and version of the program that calculated.
    pdf_engine : str
        Name and version of the program that made the pages; empty on screen.
    fingerprint : str
        Fingerprints in short, on the cover.
    footer : str
        Fingerprints in short, at the foot of every page.
    """

    project: str
    title: str
    number: str
    revision: str
    date: datetime.date
    status: str
    reason: str
    purpose: str
    people: tuple[Person, ...]
    headline: tuple[Fact, ...]
    programme: str
    pdf_engine: str
    fingerprint: str
    footer: str = ""


@dataclass(frozen=True)
class Section:
    """A stretch of the record.

    Parameters
    ----------
    id : str
        Unique in the document: the contents link to it.
    title : str
        Heading, as plain text; empty for a section whose HTML brings its own headings.
    html : str
        Content, made by our own renderers or sanitised.
    level : int
        Level of the heading, 2 to 4.
    part : str
        "front", "body" or "back".
    landscape : bool
        On pages of its own, turned.
    """

    id: str
    title: str
    html: str
    level: int = 2
    part: Literal["front", "body", "back"] = "body"
    landscape: bool = False


@dataclass(frozen=True)
class Page:
    """A record, ready to be printed.

    Parameters
    ----------
    cover : Cover
        First page, and the running head and foot of every page.
    draft : bool
        Watermark on every page.
    headline : str
        Headline results in full, HTML.
    sections : tuple of Section
        In order within each part.
    data : str
        JSON text of the payloads, embedded in the HTML.
    language : str
        Language tag of the text.
    """

    cover: Cover
    draft: bool
    headline: str
    sections: tuple[Section, ...]
    data: str = ""
    language: str = "en-GB"


@dataclass(frozen=True)
class Entry:
    """A line of the contents."""

    id: str
    title: str
    level: int


def render_page(page: Page, target: Target, paper: Paper) -> str:
    """The record as one self-contained HTML document without script.

    Parameters
    ----------
    page : Page
        What to print.
    target : {"html", "pdf"}
        For a browser (on screen and on its printer), or for a PDF engine.
    paper : {"a4", "letter"}
        Paper size.

    Raises
    ------
    ValueError
        When a section names a part that doesn't exist, two sections share an id, or the paper is unknown.
    """
    _validate(page, paper)
    parts = {part: [section for section in page.sections if section.part == part] for part in PARTS}
    html = _template().render(
        page=page,
        cover=page.cover,
        parts=parts,
        contents=list(_contents(page)),
        data=Markup(escape_json(page.data)) if target == "html" else "",
    )
    html = settle_figures(html)
    fonts = font_faces(html, packed=target == "html")
    html = html.replace("/*all*/", fonts + _text("record.css"), 1)
    return html.replace("/*print*/", _text("print.css") + _sheets(page, paper), 1)


def escape_json(text: str) -> str:
    """JSON text that can stand in a script element: no character that HTML reads."""
    return text.replace("&", r"\u0026").replace("<", r"\u003c").replace(">", r"\u003e")


def spoken(date: datetime.date | None) -> str:
    """A date in words, the same on every machine: 4 March 2026."""
    return f"{date.day} {MONTHS[date.month - 1]} {date.year}" if date else ""


def _validate(page: Page, paper: str) -> None:
    if paper not in PAPERS:
        raise ValueError(f'paper: got "{paper}"; must be "a4" or "letter"')
    seen: set[str] = set()
    for section in page.sections:
        if section.part not in PARTS:
            raise ValueError(f'section "{section.id}": part "{section.part}"; must be one of {", ".join(PARTS)}')
        if section.id in seen:
            raise ValueError(f'section "{section.id}": the id is used twice; each section needs its own')
        seen.add(section.id)


def _contents(page: Page) -> Iterator[Entry]:
    for part in PARTS:
        for section in page.sections:
            if section.part != part:
                continue
            if section.title and section.level in LISTED:
                yield Entry(section.id, section.title, section.level)
            headings = _Headings()
            headings.feed(section.html)
            yield from (entry for entry in headings.entries if entry.level in LISTED)


class _Headings(HTMLParser):
    """Headings with an id, in the order of the text."""

    def __init__(self) -> None:
        super().__init__()
        self.entries: list[Entry] = []
        self.open: tuple[str, str] | None = None
        self.hidden = ""
        self.words: list[str] = []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        if HEADING.fullmatch(tag) and (id := dict(attrs).get("id")):
            self.open, self.words = (tag, id), []
        elif tag in ("svg", "math") and not self.hidden:
            self.hidden = tag

    def handle_endtag(self, tag: str) -> None:
        if tag == self.hidden:
            self.hidden = ""
        elif self.open and tag == self.open[0]:
            title = " ".join("".join(self.words).split())
            self.entries.append(Entry(self.open[1], title, int(tag[1])))
            self.open = None

    def handle_data(self, data: str) -> None:
        if self.open and not self.hidden:
            self.words.append(data)


def _sheets(page: Page, paper: Paper) -> str:
    """What print.css can't know: paper, running head and foot, watermark."""
    cover = page.cover
    running = {
        "top-left": css_string(shortened(cover.project, HEAD)),
        "top-right": css_string(f"{cover.number} · revision {cover.revision} · {spoken(cover.date)}"),
        "bottom-left": css_string(" · ".join(_signed(person) for person in cover.people[:2])),
        "bottom-center": rf"{css_string(shortened(cover.title, FOOT))} '\A' {css_string(cover.footer)}",
    }
    boxes = "".join(f"  @{place} {{ content: {content}; }}\n" for place, content in running.items())
    sheets = f"@page {{ size: {paper};\n{boxes}}}\n@page wide {{ size: {paper} landscape; }}\n"
    if page.draft:
        image = base64.b64encode(_text("draft.svg").encode()).decode("ascii")
        sheets += f'.watermark {{ background-image: url("data:image/svg+xml;base64,{image}"); }}\n'
    return sheets


def _signed(person: Person) -> str:
    """Role and initials of a person, and whether they have yet to sign; it breaks over no line."""
    initials = person.initials or "–"
    if person.date:
        return f"{person.role}\u00a0{initials}"
    open_role = person.role.removesuffix("ed") + "er"  # "Checked DI" would read as done
    return f"{open_role}\u00a0{initials}" + ("\u00a0(not\u00a0signed)" if person.name else "")


def shortened(text: str, length: int) -> str:
    """A text in one line of at most `length` characters, with an ellipsis where it is cut."""
    line = " ".join(text.split())
    return line if len(line) <= length else f"{line[: length - 1].rstrip()}…"


def first_words(text: str) -> str:
    """A text as the cover has room for it."""
    words = text.split()
    return text if len(words) <= WORDS else f"{' '.join(words[:WORDS])} … (in full in the job card)"


def css_string(text: str) -> str:
    """Text as a CSS string that can't close its quotes, its rule or its style element."""
    return '"' + re.sub(r'["\\<>&\n\r\f]', lambda found: f"\\{ord(found[0]):x} ", text) + '"'


@cache
def _text(name: str) -> str:
    return (files("calcsheet.record") / "page" / name).read_text(encoding="utf-8")


@cache
def _template() -> Template:
    environment = Environment(autoescape=True, undefined=StrictUndefined, trim_blocks=True, lstrip_blocks=True)
    environment.filters |= {"spoken": spoken, "first_words": first_words}
    return environment.from_string(_text("record.html.j2"))
