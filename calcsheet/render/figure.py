"""Figures as SVG: drawn for the printed width, text kept as text, the same bytes on every run."""

from __future__ import annotations

import io
import re
import threading
import warnings
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass
from html import escape

import matplotlib
from matplotlib.axes import Axes
from matplotlib.backends.backend_svg import FigureCanvasSVG
from matplotlib.figure import Figure

INK = "#1f3a5f"
RUST = "#9c3d1e"
GREY = "#6b6b6b"
WIDTH = 6.7
"""Printed width of a figure [in]: the text width of an A4 page."""
LINES: Sequence[tuple[str, str | tuple[int, tuple[float, ...]]]] = (
    ("#1f3a5f", "-"),
    ("#b3541e", (0, (6, 2))),
    ("#2f7d6b", (0, (2, 1.5))),
    ("#7a4a86", (0, (7, 2, 1.5, 2))),
    ("#8a6d00", (0, (4, 1.5, 1, 1.5, 1, 1.5))),
    ("#4d4d4d", (0, (1, 1))),
)
"""Colour and dash of the first, second … line: told apart by either alone."""
STYLE = {
    "svg.fonttype": "none",
    "svg.hashsalt": "calcsheet",
    "font.size": 8.5,
    "font.family": "DejaVu Sans",
    "axes.edgecolor": GREY,
    "axes.linewidth": 0.6,
    "axes.labelsize": 8.5,
    "axes.titlesize": 8.5,
    "axes.unicode_minus": True,
    "xtick.labelsize": 8,
    "ytick.labelsize": 8,
    "xtick.color": GREY,
    "ytick.color": GREY,
    "xtick.labelcolor": "black",
    "ytick.labelcolor": "black",
    "xtick.major.width": 0.6,
    "ytick.major.width": 0.6,
    "path.simplify": False,
    "text.parse_math": False,  # a level's name may hold dollar signs
}

_DRAWING = threading.RLock()


@dataclass(frozen=True)
class Drawing:
    """A drawn figure.

    Parameters
    ----------
    name : str
        Short name, one in its view.
    caption : str
        Caption, as text.
    alt : str
        What it shows, in words, for who can't see it.
    svg : str
        The drawing.
    """

    name: str
    caption: str
    alt: str
    svg: str


@contextmanager
def styled() -> Iterator[None]:
    """Context in which figures are built: the style holds for them, and nothing outside is touched.

    matplotlib keeps its style for the whole process, so one thread draws at a time.
    """
    with _DRAWING, matplotlib.rc_context(STYLE):
        yield


def blank(height: float) -> Figure:
    """A figure of the printed width and a height [in]."""
    return Figure(figsize=(WIDTH, height))


def svg(figure: Figure, title: str) -> str:
    """SVG of a figure, with `title` as its alternative text."""
    buffer = io.StringIO()
    with styled(), warnings.catch_warnings():
        warnings.filterwarnings("ignore", message="Glyph")  # text stays text: the reader's fonts draw it
        FigureCanvasSVG(figure).print_svg(buffer, metadata={"Date": None, "Creator": None})
    drawn = buffer.getvalue()
    drawn = drawn[drawn.index("<svg") :]
    drawn = re.sub(r"<metadata>.*?</metadata>", "", drawn, flags=re.DOTALL)
    drawn = drawn.replace("'DejaVu Sans'", "'DejaVu Sans', sans-serif")
    return re.sub(r"<svg ", '<svg role="img" ', drawn, count=1).replace(">", f"><title>{escape(title)}</title>", 1)


def quiet(axes: Axes) -> None:
    """Take away the frame's top and right sides."""
    axes.spines[["top", "right"]].set_visible(False)
