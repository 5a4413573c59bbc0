"""Vertical irregularities of ASCE/SEI 7 (12.3.2.2, Table 12.3-2). Clauses from memory."""

from __future__ import annotations

import numpy as np

from calcsheet.core.arrays import Array
from calcsheet.core.codes.common import heavier, listed, softer
from calcsheet.core.codes.edition import Facts, Screen

CLAUSE = "12.3.2.2, Table 12.3-2"


def vertical(
    facts: Facts, stiffness: Array, drift_ratio: Array, category: str, mass_irregularity: bool
) -> tuple[Screen, ...]:
    """Soft storeys, heavy levels, and what cannot be looked at.

    Parameters
    ----------
    facts : Facts
        The building, n levels.
    stiffness : (n,) array
        Storey stiffnesses [kN/m].
    drift_ratio : (n,) array
        Drift over height of each storey.
    category : str
        Seismic design category, "A" to "F".
    mass_irregularity : bool
        Whether the edition has an irregularity of weight.

    Returns
    -------
    tuple of Screen

    Notes
    -----
    Drift ratios are those of the modal analysis, for those of the design seismic force. The exception by drift ratios leaves
    out the pair of the two top storeys alone, the stricter reading.
    """
    why = _exception(drift_ratio, category)
    modal = "the static method alone is not permitted (Table 12.6-1); this modal analysis is"
    consequence = modal if category in "DEF" else f"none in category {category}"
    screens = [
        _screen("soft storey", softer(stiffness, 0.7, 0.8), "storey", why, consequence),
        _screen(
            "extreme soft storey",
            softer(stiffness, 0.6, 0.7),
            "storey",
            why,
            "not permitted in categories E and F (12.3.3.1)" if category in "EF" else consequence,
        ),
    ]
    if mass_irregularity:
        screens.append(_screen("weight", heavier(facts.weight, 1.5), "level", why, consequence))
    missing = (
        ("vertical geometry", "plan dimensions of the lateral system at each level"),
        ("in-plane discontinuity", "the layout of the lateral system"),
        ("weak storey", "storey strengths"),
        ("horizontal irregularities", "a model with rotation and the plan")
        if facts.plan is None
        else (
            "horizontal irregularities beside torsion",
            "the layout of floors and lines; torsion stands with the edges",
        ),
    )
    screens += [Screen(name, "not assessed", f"missing: {what}", "", "Tables 12.3-1, 12.3-2") for name, what in missing]
    return tuple(screens)


def _exception(drift_ratio: Array, category: str) -> str:
    """Why soft storeys and heavy levels do not count; empty where they do."""
    n = drift_ratio.size
    if n == 1:
        return "one storey"
    if n == 2 and category in "ABCD":
        return f"two storeys in category {category}"
    if n > 2 and np.all(drift_ratio[:-2] <= 1.3 * drift_ratio[1:-1]):
        return "no drift ratio is above 1.3 times that of the storey above"
    return ""


def _screen(name: str, found: list[int], what: str, why: str, consequence: str) -> Screen:
    text = listed(found, what) + (f"; excepted: {why}" if found and why else "")
    return Screen(name, "exceeds" if found and not why else "passes", text, consequence if found else "", CLAUSE)
