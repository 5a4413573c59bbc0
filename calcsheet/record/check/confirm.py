"""A second route, from the stored numbers alone: frequencies, shapes, the first mode's demand, storey forces.

Nothing of the core is used. Lateral flexibilities are found by statics; frequencies are eigenvalues of FM by
the unsymmetric QR algorithm; the rest is statics.

Sources
-------
A. K. Chopra, Dynamics of Structures, sections 10.2, 12.8 and 13.2 (from memory).
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from calcsheet.record.check.finding import AGREES, DIFFERS, NOT_ASSESSED, Finding
from calcsheet.record.check.flexible import base_flexibility, counted_load, heights, standing_flexibility

PART = "second route"
CLOSE = 1e-6
"""Relative difference up to which the second route confirms the first."""
SOLVED = 400
"""Levels up to which all frequencies are found again; above it the first one is, by iteration."""
ITERATIONS = 2000

Payloads = Mapping[str, Mapping[str, Any]]
Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Sheet:
    """What the second route takes from the stored steps, for one direction.

    Parameters
    ----------
    mass : (n,) array
        Mass of each level, lowest first [t].
    height : (n,) array
        Height of the storey below each level [m].
    flexibility : (n, n) array
        Displacement of a level under a unit force at another [m/kN].
    load : (n,) array
        Gravity load at and above each storey that is in the stiffness [kN].
    moved : float
        Movement of the base under a unit force [m/kN].
    omega : (m,) array
        Stored circular frequencies [rad/s].
    psi : (n, m) array
        Stored shapes, mass-normalised [t^-1/2].
    """

    mass: Array
    height: Array
    flexibility: Array
    load: Array
    moved: float
    omega: Array
    psi: Array

    @property
    def gamma(self) -> Array:
        """Γ = ψᵀMι, (m,) [t^1/2]."""
        return self.psi.T @ self.mass


def second_route(payloads: Payloads) -> Iterator[Finding]:
    """What the second route confirms.

    Parameters
    ----------
    payloads : mapping of str to payload
        The steps of a record.
    """
    solved = False
    for key, payload in payloads.items():
        if payload["kind"] == "modes":
            solved = True
            for i, model in enumerate(payload["result"]["models"]):
                yield from _modes(payloads, key, i, model["name"])
        elif payload["kind"] == "participation":
            yield from _participation(payloads, key)
        elif payload["kind"] == "peaks":
            yield from _peaks(payloads, key)
    if not solved:
        yield Finding(PART, NOT_ASSESSED, "the record holds no modes")


def sheet_of(payloads: Payloads, key: str, direction: str) -> Sheet | None:
    """What the modes step `key` and its storeys hold of a direction; None where it is no planar model."""
    step = payloads[key]
    given = payloads[step["needs"]["storeys"]]["inputs"]
    model = next((m for m in step["result"]["models"] if m["name"] == direction), None)
    used = next((s for s in given["stiffness"] if s["name"] == step["result"]["stiffness"]), None)
    if model is None or used is None or direction not in used["lateral"]:
        return None
    return Sheet(
        mass=np.array(given["mass"], dtype=float),
        height=heights(given),
        flexibility=standing_flexibility(given, used["lateral"][direction], direction),
        load=counted_load(given),
        moved=base_flexibility(given, direction)[0],
        omega=np.array(model["modes"]["omega"], dtype=float),
        psi=np.array(model["modes"]["psi"], dtype=float),
    )


# ---- modes -----------------------------------------------------------------------------------------------------------


def _modes(payloads: Payloads, key: str, i: int, name: str) -> Iterator[Finding]:
    place = f"/{key}/result/models/{i}/modes"
    sheet = sheet_of(payloads, key, name)
    if sheet is None:
        yield Finding(PART, NOT_ASSESSED, f"modes in {name}: no planar model of the stiffness set", place)
        return
    found = _frequencies(sheet)
    count = min(found.size, sheet.omega.size)
    apart = np.abs(found[:count] / sheet.omega[:count] - 1.0)
    residual = _residuals(sheet)
    scale = np.abs(sheet.psi.T @ (sheet.mass[:, None] * sheet.psi) - np.eye(sheet.omega.size)).max()
    wrong = [
        (f"{place}/omega/{n}", f"ω stored {sheet.omega[n]:.9g} rad/s, second route {found[n]:.9g} rad/s")
        for n in np.flatnonzero(~(apart <= CLOSE))
    ]
    wrong += [
        (
            f"{place}/psi",
            f"shape of mode {n + 1} in {name} is no natural mode: residual {residual[n]:.2g}, at most {CLOSE:g}",
        )
        for n in np.flatnonzero(~(residual <= CLOSE))
    ]
    if not scale <= CLOSE:
        wrong.append((f"{place}/psi", f"shapes in {name} are not orthonormal through the mass: off by {scale:.2g}"))
    yield from (Finding(PART, DIFFERS, text, at) for at, text in wrong)
    if not wrong:
        which = f"all {count}" if count == sheet.mass.size else f"the first {count} of {sheet.mass.size}"
        text = (
            f"{name}: {which} frequencies found again from the flexibility, off by {apart.max():.1e} at most; "
            f"residual of the {sheet.omega.size} shapes {residual.max():.1e}, orthonormal within {scale:.1e}"
        )
        yield Finding(PART, AGREES, text)


def _frequencies(sheet: Sheet) -> Array:
    """Circular frequencies, ascending [rad/s]: ω⁻² are the eigenvalues of FM."""
    product = sheet.flexibility * sheet.mass
    if sheet.mass.size <= SOLVED:
        values = np.linalg.eigvals(product)
        return 1.0 / np.sqrt(np.sort(np.abs(values))[::-1])
    shape = np.linspace(0.0, 1.0, sheet.mass.size + 1)[1:]
    for _ in range(ITERATIONS):
        shape = product @ shape
        shape /= np.linalg.norm(shape)
    weighted = sheet.mass * shape
    return np.array([1.0 / np.sqrt(weighted @ (product @ shape) / (weighted @ shape))])


def _residuals(sheet: Sheet) -> Array:
    """For each mode the smaller of ‖ω²FMψ − ψ‖ and ‖Kψ/ω² − Mψ‖ in the norms of M and of its inverse, (m,).

    Either bounds the relative distance of the stored ω² from a natural one; the first is sharp for low modes, the
    second for high ones.
    """
    root = np.sqrt(sheet.mass)[:, None]
    squares = sheet.omega**2
    low = np.linalg.norm(root * (squares * (sheet.flexibility @ (root**2 * sheet.psi)) - sheet.psi), axis=0)
    force = np.linalg.solve(sheet.flexibility, sheet.psi)
    high = np.linalg.norm((force / squares - root**2 * sheet.psi) / root, axis=0)
    return np.fmin(low, high)


# ---- participation and peaks -----------------------------------------------------------------------------------------


def _participation(payloads: Payloads, key: str) -> Iterator[Finding]:
    step = payloads[key]
    for i, part in enumerate(step["result"]["directions"]):
        place = f"/{key}/result/directions/{i}"
        sheet = sheet_of(payloads, step["needs"]["modes"], part["direction"])
        if sheet is None:
            yield Finding(PART, NOT_ASSESSED, f"participation in {part['direction']}: no planar model", place)
            continue
        total = sheet.mass.sum()
        pairs = (
            ("gamma", sheet.gamma, np.sqrt(total)),
            ("effective_mass", sheet.gamma**2, total),
            ("cumulative", np.cumsum(sheet.gamma**2) / total, 1.0),
        )
        wrong = [(name, n) for name, again, scale in pairs for n in _off(part[name], again, scale)]
        for name, n in wrong:
            again = dict((p[0], p[1]) for p in pairs)[name]
            text = f"{name.replace('_', ' ')} stored {_at(part[name], n)}, second route {_at(again, n)}"
            yield Finding(PART, DIFFERS, text, f"{place}/{name}/{n}")
        if not wrong:
            first = sheet.gamma[0]
            text = f"Γ₁ = {first:.6g} √t, effective mass of mode 1 {first**2:.6g} t of {total:.6g} t"
            yield Finding(PART, AGREES, f"{part['direction']}: {text}, and those of all {sheet.omega.size} modes")


def _peaks(payloads: Payloads, key: str) -> Iterator[Finding]:
    step = payloads[key]
    for i, item in enumerate(step["result"]["directions"]):
        place, direction = f"/{key}/result/directions/{i}", item["direction"]
        sheet = sheet_of(payloads, step["needs"]["modes"], direction)
        demand = next(
            (d for d in payloads[step["needs"]["demand"]]["result"]["directions"] if d["direction"] == direction), None
        )
        if sheet is None or demand is None:
            yield Finding(PART, NOT_ASSESSED, f"peaks in {direction}: no planar model or no demand", place)
            continue
        yield from _first_mode(sheet, item, demand, place)
        if step["result"]["stiffness_drifts"] == step["result"]["stiffness_forces"]:
            yield from _displacements(sheet, item, place)


def _first_mode(sheet: Sheet, item: Mapping[str, Any], demand: Mapping[str, Any], place: str) -> Iterator[Finding]:
    """Γ, M*, Sa at T₁ as the demand stores it, f = ΓmψSa; its sums are the stored shears and moments.

    Gravity loads that are in the stiffness add their own moment, load at and above a storey times its drift.
    """
    ordinate = float(demand["ordinate"][0])
    force = sheet.gamma[0] * sheet.mass * sheet.psi[:, 0] * ordinate
    base = sheet.gamma[0] ** 2 * ordinate
    shear = np.cumsum(force[::-1])[::-1]
    moved = sheet.gamma[0] * sheet.psi[:, 0] * ordinate / sheet.omega[0] ** 2
    drift = np.diff(moved, prepend=sheet.moved * shear[0])
    moment = np.cumsum((shear * sheet.height + sheet.load * drift)[::-1])[::-1]
    wrong = []
    checks = (
        ("ordinate", np.array(item["ordinate"], dtype=float)[:1], np.array([ordinate]), ordinate, "m/s²"),
        ("shear", _column(item["shear"]), shear, base, "kN"),
        ("moment", _column(item["moment"]), moment, abs(moment[0]), "kN·m"),
    )
    for name, stored, again, scale, unit in checks:
        for n in _off(stored, again, scale):
            at = f"{place}/{name}/{n}" + ("" if name == "ordinate" else "/0")
            wrong.append((at, f"mode 1, {name} stored {_at(stored, n)}, second route {_at(again, n)} {unit}"))
    if not abs(force.sum() - base) <= CLOSE * abs(base):
        wrong.append((place, f"mode 1: storey forces add up to {force.sum():.9g} kN, M₁* S_a is {base:.9g} kN"))
    yield from (Finding(PART, DIFFERS, text, at) for at, text in wrong)
    if not wrong:
        text = (
            f"{item['direction']}: first mode from first principles, M₁* = {sheet.gamma[0] ** 2:.6g} t times S_a = "
            f"{ordinate:.6g} m/s² gives V₁ = {base:.6g} kN, which its storey forces add up to within "
            f"{abs(force.sum() / base - 1.0) if base else 0.0:.1e}; roof displacement {1000.0 * moved[-1]:.6g} mm; "
            "stored storey shears and moments are these"
        )
        yield Finding(PART, AGREES, text)


def _displacements(sheet: Sheet, item: Mapping[str, Any], place: str) -> Iterator[Finding]:
    """Combined displacements from the modal ones, Γψ Sa/ω², and the stored correlation."""
    ordinate, related = np.array(item["ordinate"], dtype=float), np.array(item["related"], dtype=float)
    if item["rule"] not in ("SRSS", "CQC"):
        return
    m = sheet.omega.size
    shapes = sheet.gamma * sheet.psi
    modal = shapes * ordinate[:m] / sheet.omega**2
    if item["residual"]:
        rest = sheet.mass * (1.0 - shapes.sum(axis=1)) * ordinate[m]
        modal = np.column_stack([modal, sheet.flexibility @ rest])
    again = np.sqrt(np.maximum(np.einsum("ni,ij,nj->n", modal, related, modal), 0.0))
    stored = np.array(item["forces"]["displacement"], dtype=float)
    wrong = _off(stored, again, float(again.max()))
    for n in wrong:
        text = f"combined displacement stored {_at(1000.0 * stored, n)} mm, second route {_at(1000.0 * again, n)} mm"
        yield Finding(PART, DIFFERS, text, f"{place}/forces/displacement/{n}")
    if not wrong:
        text = f"{item['rule']} of the modal displacements gives {1000.0 * again[-1]:.6g} mm at the roof, as stored"
        yield Finding(PART, AGREES, f"{item['direction']}: {text}")


def _column(rows: list[list[float]]) -> Array:
    return np.array([row[0] for row in rows], dtype=float)


def _off(stored: Any, again: Array, scale: float) -> list[int]:
    """Entries that are not confirmed: further apart than `CLOSE` of their scale, or missing."""
    held = np.array(stored, dtype=float)
    if held.shape != again.shape:
        return [min(held.size, again.size)]
    return [int(n) for n in np.flatnonzero(~(np.abs(held - again) <= CLOSE * abs(scale)))]


def _at(values: Any, n: int) -> str:
    return f"{values[n]:.9g}" if n < len(values) else "nothing"
