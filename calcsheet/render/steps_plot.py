"""Storey quantities drawn over the height: stepped where constant in a storey, straight between levels where not."""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from calcsheet.render.figure import LINES


def stepped(ax: Any, elevation: ArrayLike, value: ArrayLike, name: str, line: int) -> None:
    """Draw a quantity that is constant in each storey, named at its foot.

    Parameters
    ----------
    ax : Axes
        Where to draw.
    elevation : array_like
        Elevation of the base and of each level, n + 1.
    value : array_like
        Value of each storey, lowest first, n.
    name : str
        Label.
    line : int
        Number of the line's colour and dash.
    """
    colour, dash = LINES[line % len(LINES)]
    x = np.repeat(np.asarray(value, dtype=float), 2)
    y = np.repeat(np.asarray(elevation, dtype=float), 2)[1:-1]
    ax.plot(np.append(x, 0.0), np.append(y, y[-1]), color=colour, linestyle=dash, linewidth=1.3)
    ax.annotate(
        name,
        (x[0], y[0]),
        xytext=(-5, 4 + 10 * line),
        textcoords="offset points",
        ha="right",
        fontsize=8,
        color=colour,
    )


def straight(ax: Any, elevation: ArrayLike, value: ArrayLike, name: str, line: int) -> None:
    """Draw a quantity given at the base and at each level, straight between them; arguments as in `stepped`."""
    colour, dash = LINES[line % len(LINES)]
    ax.plot(value, elevation, color=colour, linestyle=dash, linewidth=1.3)
    ax.annotate(
        name,
        (np.asarray(value)[0], np.asarray(elevation)[0]),
        xytext=(-34, 10 + 10 * line),
        textcoords="offset points",
        ha="right",
        fontsize=8,
        color=colour,
    )
