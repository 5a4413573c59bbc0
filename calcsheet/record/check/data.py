"""A record's data held against its fingerprints, those stored with it and those in print."""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping
from typing import Any

from calcsheet.record.check.finding import AGREES, DIFFERS, NOT_ASSESSED, Finding
from calcsheet.record.check.pdfobjects import first_page
from calcsheet.record.fingerprints import SHORT, fingerprints_of
from calcsheet.record.recordfile import Read
from calcsheet.record.tokens import name_of, tokens
from calcsheet.steps.serial import fingerprint

PART = "data"
ON_COVER = ("inputs", "notebook", "results")
COVER = re.compile(r'<span class="fingerprint">')


def data_findings(read: Read, record: Mapping[str, Any]) -> Iterator[Finding]:
    """What the fingerprints show.

    Parameters
    ----------
    read : Read
        The file.
    record : mapping
        Its record in the present format.
    """
    stored, now = read.record["fingerprints"], _of_format(read.record, record)
    wrong = [name for name in now if stored.get(name) != now[name]]
    for name in wrong:
        text = f"the fingerprint of the {name} is {now[name][:SHORT]}, the record says {str(stored.get(name))[:SHORT]}"
        yield Finding(PART, DIFFERS, text, f"/fingerprints/{name}")
    if not wrong:
        yield Finding(PART, AGREES, f"{len(now)} fingerprints stored are those of the data: {', '.join(now)}")
    if read.kind != "json":
        yield _printed(read, now)


def _of_format(given: Mapping[str, Any], record: Mapping[str, Any]) -> dict[str, str]:
    """Fingerprints of the data, as the record's own format defines them."""
    if given["format"] >= 2:
        return fingerprints_of(record)
    payloads = given["payloads"].items()
    return {
        part: fingerprint({key: p[own] for key, p in payloads})
        for part, own in (("inputs", "inputs"), ("results", "result"))
    }


def _printed(read: Read, now: Mapping[str, str]) -> Finding:
    shown = _on_cover(read.source.decode("utf-8-sig")) if read.kind == "html" else first_page(read.source)
    if shown is None:
        return Finding(PART, NOT_ASSESSED, "the text of the PDF's first page can't be read", "cover")
    squeezed = "".join(shown.split())
    missing = [name for name in ON_COVER if name in now and f"{name}{now[name][:SHORT]}" not in squeezed]
    if missing:
        asked = ", ".join(f"{name} {now[name][:SHORT]}" for name in missing)
        return Finding(PART, DIFFERS, f"the cover doesn't print the fingerprints of the data: {asked}", "cover")
    return Finding(PART, AGREES, "the fingerprints printed are those of the data", "cover")


def _on_cover(html: str) -> str:
    """Text of the cover's fingerprints."""
    inside, words = False, ""
    for token in tokens(html):
        if COVER.fullmatch(token):
            inside = True
        elif inside and name_of(token) == "/span":
            break
        elif inside:
            words += token
    return words
