"""The files of a record, made from its data alone."""

from __future__ import annotations

import json
from collections.abc import Iterable, Mapping
from typing import Any

from calcsheet.record.document import page_of
from calcsheet.record.page import render_page
from calcsheet.record.pdf import pdf_of

KINDS = ("html", "pdf", "json")


def files_of(record: Mapping[str, Any], stem: str, kinds: Iterable[str]) -> dict[str, bytes]:
    """Content of a record's files by name, its JSON always among them.

    Parameters
    ----------
    record : mapping
        The record, settled.
    stem : str
        Name of each file without its ending.
    kinds : iterable of {"html", "pdf", "json"}
        Kinds wanted.

    Raises
    ------
    NoEngine
        A PDF is wanted and no engine can be used.
    RecordError
        An equation of the engineer's that can't be set.
    """
    data = json_of(record)
    made = {"html": lambda: html_of(record).encode(), "pdf": lambda: paged(record, f"{stem}.json", data)}
    return {f"{stem}.{kind}": made[kind]() for kind in KINDS if kind in kinds and kind in made} | {f"{stem}.json": data}


def json_of(record: Mapping[str, Any]) -> bytes:
    """The record as a JSON file."""
    return json.dumps(record, ensure_ascii=False, indent=1).encode()


def html_of(record: Mapping[str, Any]) -> str:
    """The self-contained HTML of a record."""
    return render_page(page_of(record, "html"), "html", record["layout"]["paper"])


def paged(record: Mapping[str, Any], name: str, data: bytes) -> bytes:
    """The PDF of a record by the engine that its layout names, with `data` attached under `name`."""
    html = render_page(page_of(record, "pdf"), "pdf", record["layout"]["paper"])
    return pdf_of(html, attachments=[(name, data)], engine=record["layout"]["engine"].partition(" ")[0])
