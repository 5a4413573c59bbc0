"""The static twin of a block: what the saved notebook shows without a kernel, and what a record is made from."""

from __future__ import annotations

import base64
from collections.abc import Mapping, Sequence
from html import escape
from typing import Any

from calcsheet.render.figure import Drawing
from calcsheet.render.view import View
from calcsheet.steps.serial import fingerprint
from calcsheet.steps.step import Payload

MIME = "application/vnd.calcsheet+json"
"""Type of the data that a twin carries beside its HTML."""
FORMAT = 1
WAITS = {"waiting": "Waits", "refused": "Refused"}


def bundle(
    view: View,
    key: str,
    payload: Payload,
    options: Mapping[str, Any],
    html: str,
    *,
    covered: Any,
    source: str,
    revision: int,
    asked: str = "",
    style: str = "",
    payloads: Mapping[str, Payload] | None = None,
) -> dict[str, Any]:
    """The MIME bundle of a twin.

    Parameters
    ----------
    view : View
        The view.
    key : str
        Key of the step shown.
    payload : payload
        Its payload.
    options : mapping
        The view's options.
    html : str
        The twin's HTML: it must read without style sheet, script or SVG, as an untrusted notebook shows it.
    covered : plain JSON
        What the view shows.
    source : str
        Fingerprint of the cell's source, so that a cell changed and not run again is noticed.
    revision : int
        Revision of the job.
    asked : str
        Fingerprint of the inputs that the block asked its step for; empty where it only shows the step.
    style : str
        Style sheet for all twins of the notebook.
    payloads : mapping of str to payload, optional
        All of the job's, which one twin of a notebook carries.
    """
    data: dict[str, Any] = {
        "format": FORMAT,
        "view": view.name,
        "step": key,
        "fingerprint": fingerprint(covered),
        "options": dict(options),
        "source": source,
    }
    if asked:
        data["asked"] = asked
    if payloads is not None:
        data["payloads"] = dict(payloads)
    sheet = f"<style>{style}</style>" if style else ""
    return {
        "text/html": f'<div class="calcsheet calcsheet-twin" data-block="{escape(view.name)}" data-revision="{revision}">'
        f"{sheet}{html}</div>",
        "text/plain": f"{view.title} ({payload['state']}{': ' + payload['why'] if payload['why'] else ''})",
        MIME: data,
    }


def held_up(payload: Payload) -> str:
    """HTML that stands in place of the numbers of a step that is waiting or refused."""
    word = WAITS[payload["state"]]
    return f'<p class="calcsheet-note" data-kind="{payload["state"]}"><b>{word}:</b> {escape(payload["why"])}</p>'


def images(drawings: Sequence[Drawing]) -> str:
    """Figures as images with their data in them: an untrusted notebook shows these, but no SVG."""
    return "".join(
        f'<figure><img alt="{escape(d.alt)}" src="data:image/svg+xml;base64,{base64.b64encode(d.svg.encode()).decode()}">'
        f"<figcaption>{escape(d.caption)}</figcaption></figure>"
        for d in drawings
    )
