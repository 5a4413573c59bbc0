"""HTML cut into tags and text, in time that grows with its length alone, whatever it holds.

The tokens put together are the document again: two documents with the same tokens are the same bytes to a browser.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping
from html import unescape

RAW = {name: re.compile(rf"</{name}(?=[\s/>])", re.IGNORECASE | re.ASCII) for name in ("script", "style")}
"""Elements whose content holds no tags."""
NAME = re.compile(r"</?[A-Za-z][^\s/>]*|<!--|<[!?]")
ATTRIBUTE = re.compile(r"([^\s=/>\"'<]+)(?:\s*=\s*(?:\"([^\"]*)\"|'([^']*)'|([^\s>]+)))?")
LONGEST_TAG = 20_000
"""Characters of a tag whose attributes are read; longer ones are drawings."""


def tokens(html: str) -> Iterator[str]:
    """Tags, comments and the text between them.

    Parameters
    ----------
    html : str
        The document.
    """
    at, raw = 0, None
    while at < len(html):
        if raw is not None:
            found = raw.search(html, at)
            end, raw = (found.start() if found else len(html)), None
            if end == at:
                continue
        elif NAME.match(html, at):
            closing = "-->" if html.startswith("<!--", at) else ">"
            end = html.find(closing, at) + len(closing)
            end = end if end >= at + len(closing) else len(html)
            raw = RAW.get(name_of(html[at : at + 12]))
        else:
            end = html.find("<", at + 1)
            end = len(html) if end < 0 else end
        yield html[at:end]
        at = end


def name_of(token: str) -> str:
    """Name of a tag in small letters, with "/" before it where it closes; "" where the token is text or a comment."""
    found = NAME.match(token)
    return found[0][1:].lower() if found and token[1:2] not in ("!", "?") else ""


def attributes(tag: str) -> Mapping[str, str]:
    """Attributes of a tag by name in small letters; the first counts where one stands twice, as in a browser."""
    found: dict[str, str] = {}
    start = NAME.match(tag)
    if start and len(tag) <= LONGEST_TAG:
        for name, *values in ATTRIBUTE.findall(tag, start.end()):
            found.setdefault(name.lower(), unescape("".join(values)))
    return found


def without_scripts(html: str) -> str:
    """HTML without its scripts and styles, content and all: what they hold is no words."""
    kept, left_out = [], ""
    for token in tokens(html):
        name = name_of(token)
        if not left_out and name not in RAW:
            kept.append(token)
        elif not left_out:
            left_out = name
        elif name == f"/{left_out}":
            left_out = ""
    return "".join(kept)
