"""Drifts against their limit, second order, irregularities, separation."""

from __future__ import annotations

import re
from dataclasses import dataclass

import numpy as np

from calcsheet.core.design import Drifts, drifts
from calcsheet.steps.relations import line_of
from calcsheet.steps.step import Caution, Done, Line, Number, Outcome, Step, plain


@dataclass(frozen=True)
class DriftOptions:
    """Nothing is asked of this step: the basis says it all."""


@dataclass(frozen=True, eq=False)
class DriftResult:
    """Drifts in each direction.

    Parameters
    ----------
    stiffness : str
        Name of the stiffness set that serves drifts.
    directions : tuple of Drifts
        x before y.
    """

    stiffness: str
    directions: tuple[Drifts, ...]


def run(options: DriftOptions, storeys: Done, basis: Done, demand: Done, peaks: Done) -> Outcome:
    building = storeys.inputs
    gravity = None if building.gravity is None else np.cumsum(building.gravity[::-1])[::-1]
    demands = {d.direction: d for d in demand.result.directions}
    found: list[Drifts] = []
    lines: list[Line] = []
    cautions: list[Caution] = []
    for item in peaks.result.directions:
        facts = demands[item.direction].facts
        result = drifts(basis.inputs.edition, facts, item.drifts, item.scaling, gravity, item.cap)
        at = f"result/directions/{len(found)}"
        found.append(result)
        lines += _lines(result, building.level, at)
        cautions += _cautions(result, building.level, at)
    return Outcome(DriftResult(peaks.result.stiffness_drifts, tuple(found)), tuple(lines), tuple(cautions))


def _lines(item: Drifts, levels: tuple[str, ...], at: str) -> list[Line]:
    worst, d = item.worst, item.direction
    design = Number(float(item.design[worst]), "displacement", f"{at}/design/{worst}")
    limit = Number(float(item.limit[worst]), "displacement", f"{at}/limit/{worst}")
    share = Number(float(item.share[worst]), "share", f"{at}/share/{worst}")
    of = f'storey below level "{levels[worst]}", {d}'
    terms = _terms(item, at)
    substitution = " × ".join(f"{{{i}}}" for i in range(len(terms)))
    relation = "design drift / limit"
    lines = [
        line_of(item.limit_relation, d, f"{at}/limit_relation"),
        Line(
            f"Design drift, {of}", " × ".join(terms), substitution, tuple(terms.values()), design, item.factor.clause
        ),
        Line(f"Largest share of the drift limit, {of}", relation, "{0} / {1}", (design, limit), share, "ratio"),
    ]  # fmt: skip
    if item.second_order is not None:
        lines.append(_stability(item, levels, at))
    return lines


def _terms(item: Drifts, at: str) -> dict[str, Number]:
    """What the worst design drift is the product of, by name."""
    worst = item.worst
    if item.capped:
        terms = {
            "drift of the elastic spectrum": Number(float(item.first[worst]), "displacement", f"{at}/first/{worst}")
        }
    else:
        terms = {
            item.factor.symbol: Number(item.factor.value, "ratio", f"{at}/factor/value"),
            "elastic drift": Number(float(item.elastic[worst]), "displacement", f"{at}/elastic/{worst}"),
        }
    terms["scale"] = Number(item.scale, "ratio", f"{at}/scale")
    if item.second_order is not None:
        factor = float(item.second_order.factor[worst])
        terms["second order"] = Number(factor, "ratio", f"{at}/second_order/factor/{worst}")
    return terms


def _stability(item: Drifts, levels: tuple[str, ...], at: str) -> Line:
    second = item.second_order
    assert second is not None
    worst = int(np.argmax(second.theta))
    load = Number(float(item.gravity[worst]), "force", f"{at}/gravity/{worst}")
    drift = Number(float(second.drift[worst]), "length", f"{at}/second_order/drift/{worst}")
    shear = Number(float(item.shear[worst]), "force", f"{at}/shear/{worst}")
    height = Number(float(item.storey_height[worst]), "length", f"{at}/storey_height/{worst}")
    theta = Number(float(second.theta[worst]), "ratio", f"{at}/second_order/theta/{worst}")
    of = f'storey below level "{levels[worst]}", {item.direction}'
    numbers = (load, drift, shear, height)
    return Line(
        f"Largest stability coefficient, {of}",
        "θ = P Δ / (V h)",
        "{0} × {1} / ({2} × {3})",
        numbers,
        theta,
        second.clause,
    )


def _cautions(item: Drifts, levels: tuple[str, ...], at: str) -> list[Caution]:
    cautions, d = [], item.direction
    if item.share[item.worst] > 1.0:
        number = Number(float(item.share[item.worst]), "share", f"{at}/share/{item.worst}")
        text = f'The drift in {d} exceeds its limit: {{0}} of it, in the storey below "{plain(levels[item.worst])}".'
        cautions.append(Caution("drift-exceeds", text, (number,), answer=True, subject=d))
    if item.second_order is None:
        if item.second_order_note != "not in this edition":
            cautions.append(
                Caution(
                    "no-second-order",
                    f"Second-order effects in {d} are not assessed: {item.second_order_note}.",
                    answer=True,
                    subject=d,
                )
            )
    else:
        worst = int(np.argmax(item.second_order.theta))
        theta = float(item.second_order.theta[worst])
        if theta > item.second_order.ignore_up_to:
            number = Number(theta, "ratio", f"{at}/second_order/theta/{worst}")
            text = f"Second order in {d}: θ reaches {{0}}; {item.second_order.text} ({item.second_order.clause})."
            asked = item.second_order.verdict != "passes"
            cautions.append(Caution("second-order", text, (number,), answer=asked, subject=d))
    for i, screen in enumerate(item.screens):
        if screen.verdict == "exceeds":
            found, follows = _named(screen.text, levels), screen.consequence[:1].upper() + screen.consequence[1:]
            text = f"Irregularity in {d}, {screen.name}: {found}. {follows} ({screen.clause})."
            cautions.append(Caution("screen", plain(text), answer=True, subject=f"{d}-{i + 1}"))
    return cautions + _open_screens(item)


def _named(text: str, levels: tuple[str, ...]) -> str:
    """A screen's text with storeys and levels by their names in the place of their numbers from the base."""

    def names(match: re.Match[str]) -> str:
        named = ", ".join(f'"{levels[int(i) - 1]}"' for i in match[2].split(", "))
        return f"{match[1]} below {named}" if match[1].startswith("storey") else f"{match[1]} {named}"

    return re.sub(r"((?:storey|level)s?) (\d+(?:, \d+)*) from the base", names, text)


def _open_screens(item: Drifts) -> list[Caution]:
    """Irregularities that the numbers do not decide, in one caution a direction."""
    groups = (("judgement", "Left to judgement"), ("not assessed", "Not assessed"))
    told = []
    for verdict, words in groups:
        named = [f"{s.name} ({s.text})" for s in item.screens if s.verdict == verdict]
        if named:
            told.append(f"{words}: {', '.join(named)}.")
    if not told:
        return []
    text = f"Irregularities in {item.direction} that the numbers do not decide. {' '.join(told)}"
    return [Caution("screens-open", plain(text), subject=item.direction)]


METHOD = r"""
Drifts are taken with the stiffness set that serves drifts, each combined from its own modal values, and brought to the
design drift by the edition's factor. The stability coefficient of a storey,

$$\theta = \frac{P\,\Delta}{V\,h} ,$$

takes the gravity load $P$ at and above it, its shear $V$ and its drift $\Delta$ from one and the same unscaled set.
"""

DRIFT = Step(
    "drift",
    1,
    "Drift and second order",
    DriftOptions,
    DriftResult,
    ("storeys", "basis", "demand", "peaks"),
    run,
    METHOD,
)
