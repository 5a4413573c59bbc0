"""Drawn figures, many to a document: their ids kept apart, their text in the record's fonts."""

from __future__ import annotations

import re

SVG = re.compile(r"<svg\b.*?</svg>", re.DOTALL)
ID = re.compile(r'\s+id="([^"]*)"')
REFERENCE = re.compile(r'(url\(#|href="#)([^")]+)')
LABEL = re.compile(r'(aria-(?:labelledby|describedby)=")([^"]+)')
DRAWN_WITH = re.compile(r"(font(?:-family)?:[^;\"]*?)'DejaVu Sans'")


def settle_figures(html: str) -> str:
    """Make the inline SVG figures of a document fit to stand together.

    Parameters
    ----------
    html : str
        A document with inline SVG as matplotlib writes it: the same ids in every figure, text in DejaVu Sans.

    Returns
    -------
    str
        The document with unused ids dropped and the others made unique, and the figures' text in the record's
        sans, which is the narrower, so that it stays within the room it was given.
    """
    count = 0

    def settle(found: re.Match[str]) -> str:
        nonlocal count
        svg = found[0]
        if ID.search(svg):
            count += 1
            svg = _scope(svg, f"drawing-{count}-")
        return DRAWN_WITH.sub(r"\1'Calcsheet Sans', 'DejaVu Sans'", svg)

    return SVG.sub(settle, html)


def _scope(svg: str, prefix: str) -> str:
    used = {name for _, name in REFERENCE.findall(svg)}
    used.update(name for _, names in LABEL.findall(svg) for name in names.split())
    svg = ID.sub(lambda found: f' id="{prefix}{found[1]}"' if found[1] in used else "", svg)
    svg = REFERENCE.sub(rf"\1{prefix}\2", svg)
    return LABEL.sub(lambda found: found[1] + " ".join(prefix + name for name in found[2].split()), svg)
