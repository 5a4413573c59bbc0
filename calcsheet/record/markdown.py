"""The engineer's words: a markdown cell as HTML that is safe to stand in a record."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator, Mapping
from typing import Any

from bleach.html5lib_shim import Filter
from bleach.sanitizer import Cleaner
from mistune import HTMLRenderer, Markdown, import_plugin
from nbconvert.filters.markdown_mistune import MathBlockParser, MathInlineParser

from calcsheet.record.tokens import without_scripts

Attachments = Mapping[str, Mapping[str, str]]

TAGS = [
    "a", "abbr", "b", "blockquote", "br", "caption", "code", "dd", "del", "div", "dl", "dt", "em",
    "figcaption", "figure", "h1", "h2", "h3", "h4", "h5", "h6", "hr", "i", "img", "ins", "kbd", "li",
    "ol", "p", "pre", "q", "s", "small", "span", "strong", "sub", "sup", "table", "tbody", "td", "tfoot",
    "th", "thead", "tr", "u", "ul",
]  # fmt: skip
EQUATION = "calcsheet-equation"
PLACED = re.compile(rf'<{EQUATION} n="(\d+)"></{EQUATION}>')
HEADING = re.compile(r"<(/?)h([1-6])>")
DATA_IMAGE = re.compile(r"data:image/(png|jpeg|gif|svg\+xml|webp)[;,]")
ALIGNED = re.compile(r' style="text-align:(left|right|center)"')


def to_html(
    text: str,
    math: Callable[[str, bool], str],
    *,
    attachments: Attachments | None = None,
    top: int = 3,
    prefix: str = "words",
) -> str:
    """A markdown cell as HTML.

    Equations are set by `math`. Headings are shifted, so that a first-level one becomes ``<h{top}>``, and get
    ids ``{prefix}-1``, ``{prefix}-2`` … for the contents. Script, event handlers and styles are dropped.
    Images stay when their data are in the cell (a data URI or an attachment); a visible note replaces others.

    Parameters
    ----------
    text : str
        The cell's source.
    math : callable
        LaTeX and "on a line of its own" to HTML: `equations.to_mathml` or `equations.to_svg`.
    attachments : mapping, optional
        The cell's attachments: name to MIME type to base64 data.
    top : int
        Level that a first-level heading gets; the deepest is 6.
    prefix : str
        Start of the headings' ids: unique to the cell in the document.

    Raises
    ------
    EquationError
        From `math`, for an equation that can't be set.
    """
    equations: list[str] = []

    def place(latex: str, display: bool) -> str:
        equations.append(math(latex, display))
        return f'<{EQUATION} n="{len(equations) - 1}"></{EQUATION}>'

    html = _parser(place)(text)
    assert isinstance(html, str)
    html = ALIGNED.sub(r' align="\1"', without_scripts(html))
    html = _cleaner(attachments or {}).clean(html)
    html = _number_headings(html, top, prefix)
    # The tag itself can't be typed into an attribute or text: those are escaped by now.
    return PLACED.sub(lambda found: equations[int(found[1])] if int(found[1]) < len(equations) else "", html)


class _Renderer(HTMLRenderer):
    """Markdown to HTML with every equation handed to `place`; cleaning comes afterwards."""

    def __init__(self, place: Callable[[str, bool], str]) -> None:
        super().__init__(escape=False, allow_harmful_protocols=True)
        self.place = place

    def block_math(self, body: str) -> str:
        return self.place(body, True)

    def inline_math(self, body: str) -> str:
        return self.place(body, False)

    def latex_environment(self, name: str, body: str) -> str:
        return self.place(rf"\begin{{{name}}}{body}\end{{{name}}}", True)


def _parser(place: Callable[[str, bool], str]) -> Markdown:
    plugins = [import_plugin(name) for name in ("table", "strikethrough", "def_list")]
    return Markdown(_Renderer(place), block=MathBlockParser(), inline=MathInlineParser(), plugins=plugins)


class _Images(Filter):
    """Keeps the images whose data are at hand; a note takes the place of any other."""

    attachments: Attachments = {}

    def __iter__(self) -> Iterator[dict[str, Any]]:
        for token in super().__iter__():
            if token["type"] != "EmptyTag" or token["name"] != "img":
                yield token
                continue
            source = str(token["data"].get((None, "src"), ""))
            data = self._data(source)
            if data:
                token["data"][(None, "src")] = data
                yield token
            else:
                words = str(token["data"].get((None, "alt"), "")) or "no description"
                note = f"[image “{words}” is not part of this document: {source or 'no source'}]"
                yield {"type": "StartTag", "name": "span", "namespace": token["namespace"],
                       "data": {(None, "class"): "missing-image"}}  # fmt: skip
                yield {"type": "Characters", "data": note}
                yield {"type": "EndTag", "name": "span", "namespace": token["namespace"], "data": {}}

    def _data(self, source: str) -> str:
        if source.startswith("attachment:"):
            for mime, data in self.attachments.get(source.removeprefix("attachment:"), {}).items():
                source = f"data:{mime};base64,{''.join(data.split())}"
        return source if DATA_IMAGE.match(source) else ""


def _cleaner(attachments: Attachments) -> Cleaner:
    images = type("Images", (_Images,), {"attachments": attachments})
    return Cleaner(
        tags=[*TAGS, EQUATION],
        attributes=_allowed,
        protocols=["http", "https", "mailto", "data", "attachment"],
        strip=True,
        filters=[images],
    )


def _allowed(tag: str, name: str, value: str) -> bool:
    if tag == "a":
        return name == "title" or (name == "href" and not value.lower().startswith(("data:", "attachment:")))
    if tag == "img":
        return name in ("src", "alt", "title", "width", "height")
    if tag == EQUATION:
        return name == "n"
    if tag == "ol":
        return name == "start"
    return tag in ("td", "th") and name in ("align", "colspan", "rowspan")


def _number_headings(html: str, top: int, prefix: str) -> str:
    count = 0

    def shift(found: re.Match[str]) -> str:
        nonlocal count
        level = min(int(found[2]) + top - 1, 6)
        if found[1]:
            return f"</h{level}>"
        count += 1
        return f'<h{level} id="{prefix}-{count}">'

    return HEADING.sub(shift, html)
