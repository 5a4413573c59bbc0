"""The record as PDF, by the engine this machine has."""

from __future__ import annotations

import contextlib
import datetime
import hashlib
import importlib
import importlib.metadata
import io
import logging
import os
import re
from collections.abc import Callable, Sequence
from dataclasses import dataclass

from pypdf import PdfReader, PdfWriter
from pypdf.generic import NameObject

FULL = "WeasyPrint"
ENGINES = (FULL, "PlutoPrint")
"""Engines, the preferred one first: it alone gives bookmarks, tags, contents with page numbers, and the same bytes again."""
CHOICE = "CALCSHEET_PDF_ENGINE"
# Relative references lead here: links within the document work, anything else is refused.
BASE = "file:///record"
CREATED = re.compile(r'<meta name="dcterms\.created" content="(\d{4}-\d\d-\d\d)">')
REMEDY = (
    "no PDF engine loads here; install Pango (Debian, Ubuntu: apt install libpango-1.0-0 libpangoft2-1.0-0; "
    "macOS: brew install pango) or, where it has a wheel, run `python -m pip install plutoprint`"
)

Attachments = Sequence[tuple[str, bytes]]


class NoEngine(RuntimeError):  # noqa: N818
    """No engine that makes PDFs can be used; the message is the remedy, in one sentence."""


class OutsideReferenceError(ValueError):
    """The document asks for something outside itself."""


@dataclass(frozen=True)
class EngineInfo:
    """The program that makes the pages."""

    name: str
    version: str

    def __str__(self) -> str:
        return f"{self.name} {self.version}"


def engines() -> tuple[EngineInfo, ...]:
    """Engines that load on this machine, the preferred one first."""
    return tuple(EngineInfo(name, importlib.metadata.version(name)) for name in ENGINES if _loads(name))


def choose_engine(name: str | None = None) -> EngineInfo:
    """The engine to use.

    Parameters
    ----------
    name : str, optional
        Force this one; else the environment's CALCSHEET_PDF_ENGINE; else the first that loads.

    Raises
    ------
    NoEngine
        When none loads, or the forced one doesn't or isn't known.
    """
    forced = name or os.environ.get(CHOICE)
    available = engines()
    if forced:
        known = [engine for engine in ENGINES if engine.lower() == forced.lower()]
        if not known:
            raise NoEngine(f'PDF engine: got "{forced}"; must be one of {", ".join(ENGINES)}')
        available = tuple(engine for engine in available if engine.name == known[0])
        if not available:
            raise NoEngine(f"PDF engine {known[0]} doesn't load here; {REMEDY}")
    if not available:
        raise NoEngine(REMEDY)
    return available[0]


def pdf_of(html: str, *, attachments: Attachments = (), engine: str | None = None) -> bytes:
    """A page of `page.render_page` as PDF.

    WeasyPrint gives PDF/A-3 with tags, bookmarks, contents with page numbers, and the same bytes for the same
    input. PlutoPrint gives a reading copy without these.

    Parameters
    ----------
    html : str
        The document; only data URIs are followed.
    attachments : sequence of (str, bytes)
        Files to attach: name and content.
    engine : str, optional
        As for `choose_engine`.

    Raises
    ------
    NoEngine
        When no engine can be used.
    OutsideReferenceError
        When the document refers to anything but data URIs.
    """
    chosen = choose_engine(engine)
    found = CREATED.search(html)
    day = datetime.date.fromisoformat(found[1]) if found else datetime.date(2000, 1, 1)
    moment = datetime.datetime.combine(day, datetime.time(), datetime.UTC)
    return WRITERS[chosen.name](html, attachments, moment)


def _loads(name: str) -> bool:
    try:
        # WeasyPrint without Pango prints a long notice and then raises OSError
        with contextlib.redirect_stdout(io.StringIO()), contextlib.redirect_stderr(io.StringIO()):
            importlib.import_module(name.lower())
    except (ImportError, OSError):
        return False
    return True


def _weasyprint(html: str, attachments: Attachments, moment: datetime.datetime) -> bytes:
    from weasyprint import HTML, Attachment
    from weasyprint.urls import FatalURLFetchingError, URLFetcher, URLFetcherResponse

    class DataOnly(URLFetcher):
        def fetch(self, url: str, headers: dict[str, str] | None = None) -> URLFetcherResponse:
            if not url.startswith("data:"):
                raise FatalURLFetchingError(_refusal(url))
            return super().fetch(url, headers)

    files = [
        Attachment(string=content, name=name, relationship="Data", created=moment, modified=moment)
        for name, content in attachments
    ]
    identifier = hashlib.sha256(html.encode()).digest()[:16]
    # It warns of every SVG property in a figure's style, as unknown CSS, and then draws it rightly.
    logger = logging.getLogger("weasyprint")
    level = logger.level
    logger.setLevel(logging.ERROR)
    try:
        document = HTML(string=html, base_url=BASE, url_fetcher=DataOnly(allowed_protocols=("data",)))
        data = document.write_pdf(pdf_variant="pdf/a-3u", pdf_tags=True, attachments=files, pdf_identifier=identifier)
    except FatalURLFetchingError as error:
        raise OutsideReferenceError(str(error)) from error
    finally:
        logger.setLevel(level)
    return bytes(data)


def _plutoprint(html: str, attachments: Attachments, moment: datetime.datetime) -> bytes:
    import plutoprint

    refused: list[str] = []

    class DataOnly(plutoprint.ResourceFetcher):
        def fetch_url(self, url: str) -> plutoprint.ResourceData:
            if not url.startswith("data:"):
                refused.append(url)
                raise OutsideReferenceError(_refusal(url))
            return plutoprint.default_resource_fetcher.fetch_url(url)

    book = plutoprint.Book()
    book.custom_resource_fetcher = DataOnly()
    book.load_html(html, base_url=BASE)
    stream = io.BytesIO()
    book.write_to_pdf_stream(stream)
    if refused:
        raise OutsideReferenceError(_refusal(refused[0]))
    writer = PdfWriter(clone_from=PdfReader(stream))
    stamp = moment.strftime("D:%Y%m%d%H%M%SZ")
    writer.add_metadata({"/CreationDate": stamp, "/ModDate": stamp})
    for name, content in attachments:
        writer.add_attachment(name, content).associated_file_relationship = NameObject("/Data")
    out = io.BytesIO()
    writer.write(out)
    return out.getvalue()


def _refusal(url: str) -> str:
    return f"the document refers to {url}; a record may hold embedded data only"


WRITERS: dict[str, Callable[[str, Attachments, datetime.datetime], bytes]] = {
    "WeasyPrint": _weasyprint,
    "PlutoPrint": _plutoprint,
}
