"""The engineer's own cells in a record: source and outputs, cleaned and marked as not replayed."""

from __future__ import annotations

import re
from collections.abc import Mapping
from html import escape
from typing import Any

import bleach

from calcsheet.record.parts import Own
from calcsheet.record.tokens import without_scripts

TAGS = frozenset(
    "a abbr b br caption code col colgroup div em h3 h4 h5 h6 hr i li ol p pre s small span strong sub sup table tbody "
    "td tfoot th thead tr u ul".split()
)
IMAGES = ("image/png", "image/jpeg")
HTML = "text/html"
PLAIN = "text/plain"
COLOUR_CODES = re.compile(r"\x1b\[[0-9;]*m")
NOT_BASE64 = re.compile(r"[^A-Za-z0-9+/=]")


def printable(output: Mapping[str, Any]) -> dict[str, str]:
    """What a record keeps of an output of nbformat's: a picture with its words, HTML, or text; by MIME type."""
    if output["output_type"] == "stream":
        return {PLAIN: output["text"]}
    data = output.get("data", {})
    words = str(data.get(PLAIN, ""))
    for kind in IMAGES:
        if kind in data:
            return {kind: str(data[kind]), PLAIN: words or "figure"}
    if HTML in data:
        return {HTML: str(data[HTML])}
    return {PLAIN: words or "[an output that can\u2019t be printed]"}


def own_cell(cell: Own) -> str:
    """HTML of a cell of the engineer's own.

    Parameters
    ----------
    cell : Own
        Source and outputs.
    """
    shown = "".join(_output(output) for output in cell.outputs)
    return (
        '<div class="not-replayed"><span class="word">The engineer\u2019s own cell: not replayed</span>'
        f"<pre><code>{escape(cell.source)}</code></pre>{shown}</div>"
    )


def _output(output: Mapping[str, str]) -> str:
    for kind in IMAGES:
        if kind in output:
            data = NOT_BASE64.sub("", output[kind])
            return f'<p><img alt="{escape(output[PLAIN])}" src="data:{kind};base64,{data}"></p>'
    if HTML in output:
        return bleach.clean(
            without_scripts(output[HTML]),
            tags=TAGS,
            attributes={"td": ["colspan", "rowspan"], "th": ["colspan", "rowspan"]},
            strip=True,
        )
    return f"<pre>{escape(COLOUR_CODES.sub('', output[PLAIN]))}</pre>"
