"""Storey quantities drawn over the height: stepped where constant in a storey, straight between levels where not."""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from calcsheet.render.figure import LINES


def stepped(ax: Any, elevation: ArrayLike, value: ArrayLike, name: str, line: int) -> None:
    """Draw a quantity that is constant in each storey, named where it is largest.

    Parameters
    ----------
    ax : Axes
        Where to draw; the larger of two quantities first, so that the other finds its room.
    elevation : array_like
        Elevation of the base and of each level, n + 1.
    value : array_like
        Value of each storey, lowest first, n.
    name : str
        Label.
    line : int
        Number of the line's colour and dash.
    """
    heights, values = np.asarray(elevation, dtype=float), np.asarray(value, dtype=float)
    x, y = np.repeat(values, 2), np.repeat(heights, 2)[1:-1]
    largest = int(np.argmax(values))
    _drawn(ax, np.append(x, 0.0), np.append(y, y[-1]), line)
    _named(ax, values[largest], 0.5 * (heights[largest] + heights[largest + 1]), name, line)


def straight(ax: Any, elevation: ArrayLike, value: ArrayLike, name: str, line: int) -> None:
    """Draw a quantity given at the base and at each level, straight between them; arguments as in `stepped`."""
    heights, values = np.asarray(elevation, dtype=float), np.asarray(value, dtype=float)
    _drawn(ax, values, heights, line)
    _named(ax, values[1], heights[1], name, line)


def _drawn(ax: Any, x: np.ndarray, y: np.ndarray, line: int) -> None:
    colour, dash = LINES[line % len(LINES)]
    ax.plot(x, y, color=colour, linestyle=dash, linewidth=1.3)


def _named(ax: Any, x: float, y: float, name: str, line: int) -> None:
    """Put the name beside the line, on the side that has room."""
    widest = max(float(np.max(drawn.get_xdata())) for drawn in ax.lines)
    inside = x > 0.4 * widest
    ax.annotate(
        name,
        (x, y),
        xytext=(-5 if inside else 5, -11 * line),
        textcoords="offset points",
        ha="right" if inside else "left",
        va="center",
        fontsize=8,
        color=LINES[line % len(LINES)][0],
    )
