"""Ordinates of the moving mode shapes, which the page draws; records print the still ones of `calcsheet.render.plot`."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np

from calcsheet.core.modes import scaled
from calcsheet.render.numbers import decimals_for, text
from calcsheet.render.view import Rendered, View, system_of
from calcsheet.steps.step import Payload
from calcsheet.units import display

NOTICE = "Mode shapes move on screen only: the record has the mode plot, as still shapes."
SHOWN = 12
"""Modes that can be chosen in each direction, at most."""


def motion(payloads: Mapping[str, Payload], key: str) -> dict[str, Any]:
    """What the page needs to draw the modes of a key, whose state is "ok".

    Returns
    -------
    dict
        ``levels``: list of {name, elevation, label}, the effective base first, elevations in the system's ``unit``;
        ``models``: list of {name, modes: list of {period, shape}}, ``period`` as text [s], ``shape`` the ordinate of each
        level, 0 at the base, the largest ±1.
    """
    storeys = payloads[payloads[key]["needs"]["storeys"]]["inputs"]
    how = display("elevation", system_of(payloads))
    elevation = [how.of(e) for e in (storeys["base_elevation"], *storeys["elevation"])]
    places = max(2, decimals_for(elevation, how.digits))
    names = [storeys["base"] or "base", *storeys["level"]]
    return {
        "unit": how.symbol,
        "levels": [
            {"name": name, "elevation": e, "label": text(e, places)} for name, e in zip(names, elevation, strict=True)
        ],
        "models": [item for m in payloads[key]["result"]["models"] for item in _directions(m)],
    }


def _directions(model: Mapping[str, Any]) -> list[dict[str, Any]]:
    """Each direction that a model moves in, of one scale: the largest translation in any is 1."""
    modes, name = model["modes"], model["name"]
    psi = np.array(modes["psi"])
    rows = model.get("rows") or {name: list(range(len(psi)))}
    shapes = scaled(psi[[row for along in rows.values() for row in along]], "largest")
    levels = len(shapes) // len(rows)
    digits = display("period", "SI").digits
    periods = [text(t, decimals_for([t], digits)) for t in modes["period"][:SHOWN]]
    return [
        {
            "name": along,
            "modes": [
                {"period": t, "shape": [0.0, *shapes[i * levels : (i + 1) * levels, n].tolist()]}
                for n, t in enumerate(periods)
            ],
        }
        for i, along in enumerate(rows)
    ]


def _notice(payloads: Mapping[str, Payload], key: str, options: Mapping[str, Any]) -> Rendered:
    return Rendered(f"<p>{NOTICE}</p>")


MOTION = View("mode motion", "Moving mode shapes", "modes", _notice, covers=lambda payloads, key: None, printed=False)
