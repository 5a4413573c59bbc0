"""Cautions of the stiffness take-off: where a storey's stiffness is a poor idea, and what wants a second look."""

from __future__ import annotations

import numpy as np

from calcsheet.core.stiffnesstakeoff import DIAGONAL, PINNED_BASE, StoreyStiffness, Takeoff
from calcsheet.steps.step import Caution, Number, plain

WALLS, TALL, SLENDER = 0.5, 3, 3.0
"""Walls that carry this share of a storey's stiffness bend over the whole height of a building of more storeys than this, or
where they are this many times as high as long (common practice)."""
FLEXIBLE = 0.1
"""Joint rotation index below which a frame moves like a cantilever more than like a shear beam (Blume, from memory)."""
COUPLED = 0.01
"""Coupling of x and y, over the root of both stiffnesses, from which it is worth a word."""
CRACKS = ("concrete", "masonry")


def cautions_of(given: Takeoff, result: StoreyStiffness) -> tuple[Caution, ...]:
    """All cautions that a take-off raises."""
    origins = (
        Caution("no-origin", f"{plain(name)}: the origin of its values is not stated.", answer=True, subject=name)
        for name in given.no_origin
    )
    return (
        *_walls(given, result),
        *_flexible(given, result),
        *_rigid_beams(given),
        *_one_storey(given),
        *_cracking(given),
        *_skew(given, result),
        *origins,
    )


def _walls(given: Takeoff, result: StoreyStiffness) -> list[Caution]:
    cautions, n = [], len(given.level)
    for d, item in enumerate(result.directions):
        if "wall" not in item.kind:
            continue
        j = item.kind.index("wall")
        i = int(np.argmax(item.share[j]))
        share = float(item.share[j, i])
        if share < WALLS or (n <= TALL and item.wall_slenderness <= SLENDER):
            continue
        numbers = (
            Number(share, "share", f"result/directions/{d}/share/{j}/{i}"),
            Number(item.wall_slenderness, "ratio", f"result/directions/{d}/wall_slenderness"),
        )
        text = (
            f'Walls give {{0}} of the stiffness {item.direction} of the storey below level "{plain(given.level[i])}", over '
            f"{n} storey{'s' if n > 1 else ''}, {{1}} times as high as the longest is long: they bend over the whole height, so "
            "that the stiffness of a storey depends on the loads above it; a cantilever stick or a stiffness matrix tells more."
        )
        cautions.append(Caution("walls-by-storey", text, numbers, answer=True, subject=item.direction))
    return cautions


def _flexible(given: Takeoff, result: StoreyStiffness) -> list[Caution]:
    cautions = []
    for d, item in enumerate(result.directions):
        held = [i for i, index in enumerate(item.joint_rotation) if index > 0.0]
        if not held:
            continue
        i = min(held, key=lambda i: float(item.joint_rotation[i]))
        if item.joint_rotation[i] < FLEXIBLE:
            number = Number(float(item.joint_rotation[i]), "ratio", f"result/directions/{d}/joint_rotation/{i}")
            text = (
                f"Flexible beams in {item.direction}: the joint rotation index falls to {{0}} in the storey below level "
                f'"{plain(given.level[i])}", below {FLEXIBLE:g}; such a frame moves more like cantilevers than like a shear '
                "beam, and D-values overstate the lowest storey; a stiffness matrix tells more."
            )
            cautions.append(Caution("flexible-beams", text, (number,), answer=True, subject=item.direction))
    return cautions


def _rigid_beams(given: Takeoff) -> list[Caution]:
    rows = [m.name for m in given.members if m.kind == "column" and m.acts_as == "fixed-fixed"]
    if not rows:
        return []
    text = f"Columns taken as held against rotation at both ends, as if beams were rigid: {_named(rows)}; this is an upper bound."
    return [Caution("rigid-beams", text)]


def _one_storey(given: Takeoff) -> list[Caution]:
    rows = [m.name for m in given.members if m.beam and m.acts_as != PINNED_BASE]
    if len(given.level) > 1 or not rows:
        return []
    text = (
        f"D-values in a building of one storey: {_named(rows)}; they count on columns above that turn the joints too, so that "
        "they understate the stiffness by up to 30 %."
    )
    return [Caution("d-values-one-storey", text)]


def _cracking(given: Takeoff) -> list[Caution]:
    """Stiffness factors: none where sections crack, twice, or without a ground."""
    kinds = {m.name: m.kind for m in given.materials}
    cracks = {s.name for s in given.sections if kinds[s.material] in CRACKS}
    whole, reduced, groundless = [], [], []
    for member in given.members:
        factors = [(member.section, member.factor)]
        factors += [(member.section, member.shear_factor)] * member.shear
        factors += [(beam, member.beam_factor) for beam in {member.beam, member.beam_below} if beam]
        bends = member.kind not in DIAGONAL
        if bends and any(section in cracks and factor >= 1.0 for section, factor in factors):
            whole.append(member.name)
        if any(factor < 1.0 for _, factor in factors):
            reduced.append(member.name)
        if any(factor != 1.0 for _, factor in factors) and not member.ground.strip():
            groundless.append(member.name)
    cautions = []
    full = list(dict.fromkeys(f.name for f in given.factors if f.factor >= 1.0))
    cut = list(dict.fromkeys(f.name for f in given.factors if f.factor < 1.0))
    if whole and (full or not given.factors):
        sets = f"; stiffness sets that reduce nothing: {_named(full)}" if full else ""
        text = f"Concrete or masonry taken as uncracked, with stiffness factors of 1 or above: {_named(whole)}{sets}."
        cautions.append(Caution("uncracked", text, answer=True, subject="members"))
    if reduced and cut:
        text = (
            f"Reduced twice: the stiffness factors of members ({_named(reduced)}) and of stiffness sets ({_named(cut)}) "
            "multiply."
        )
        cautions.append(Caution("reduced-twice", text, answer=True))
    if groundless:
        text = f"Stiffness factors without a ground: {_named(groundless)}."
        cautions.append(Caution("no-ground-of-members", text, answer=True))
    return cautions


def _skew(given: Takeoff, result: StoreyStiffness) -> list[Caution]:
    i = int(np.argmax(np.abs(result.coupling)))
    if abs(float(result.coupling[i])) < COUPLED:
        return []
    number = Number(float(result.coupling[i]), "ratio", f"result/coupling/{i}")
    text = (
        f'Skew members couple x and y: {{0}} of the root of k_x k_y in the storey below level "{plain(given.level[i])}"; '
        "analysed apart, x and y leave this out."
    )
    return [Caution("skew-members", text, (number,))]


def _named(names: list[str]) -> str:
    """Names of rows, the first few and how many more."""
    few = 6
    more = f" and {len(names) - few} more" if len(names) > few else ""
    return plain(", ".join(names[:few])) + more
