"""The engineer's own cells in a record: source and outputs, cleaned and marked as not replayed."""

from __future__ import annotations

import re
from collections.abc import Mapping
from html import escape
from typing import Any

import bleach

from calcsheet.record.collect import Own

TAGS = frozenset(
    "a abbr b br caption code col colgroup div em h3 h4 h5 h6 hr i li ol p pre s small span strong sub sup table tbody "
    "td tfoot th thead tr u ul".split()
)
IMAGES = ("image/png", "image/jpeg")
COLOUR_CODES = re.compile(r"\x1b\[[0-9;]*m")
NOT_WORDS = re.compile(r"<(script|style)\b.*?</\1\s*>", re.DOTALL | re.IGNORECASE)


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


def _output(output: Mapping[str, Any]) -> str:
    if output["output_type"] == "stream":
        return _text(output["text"])
    data = output.get("data", {})
    for kind in IMAGES:
        if kind in data:
            words = escape(str(data.get("text/plain", "figure")))
            return f'<p><img alt="{words}" src="data:{kind};base64,{"".join(str(data[kind]).split())}"></p>'
    if "text/html" in data:
        return bleach.clean(
            NOT_WORDS.sub("", data["text/html"]),
            tags=TAGS,
            attributes={"td": ["colspan", "rowspan"], "th": ["colspan", "rowspan"]},
            strip=True,
        )
    return _text(str(data.get("text/plain", "[an output that can\u2019t be printed]")))


def _text(text: str) -> str:
    return f"<pre>{escape(COLOUR_CODES.sub('', text))}</pre>"
