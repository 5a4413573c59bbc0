"""Worked lines of the stiffness take-off."""

from __future__ import annotations

import math
from collections.abc import Sequence

from calcsheet.core.memberstiffness import RESTRAINT
from calcsheet.core.stiffnesstakeoff import (
    DIAGONAL,
    PAIR,
    PINNED_BASE,
    DirectionStiffness,
    Member,
    StoreyStiffness,
    Takeoff,
)
from calcsheet.steps.step import Line, Number

MECHANICS = "beams with bending and shear"
MUTO = "Muto, Aseismic Design Analysis of Buildings, 1974 (from memory)"
GEOMETRY = "geometry"
STATICS = "pin-ended diagonal"


def along_words(along: Sequence[float]) -> str:
    """The direction of a unit vector in words: x, y, or degrees from x."""
    named = {(1.0, 0.0): "x", (0.0, 1.0): "y"}.get((along[0], along[1]))
    return named or f"{math.degrees(math.atan2(along[1], along[0])):.6g}° from x"


def lines_of_row(given: Takeoff, result: StoreyStiffness, i: int) -> list[Line]:
    """The lines of a row: at its lowest storey, and at the next where that of the base is worked out otherwise."""
    member = given.members[i]
    storeys = [member.first]
    if member.beam and member.first == 0 and member.last > 0:
        storeys.append(1)
    work = _Work(given, result, i)
    return [line for storey in storeys for line in work.lines(storey)]


class _Work:
    """Worked lines of one row of members."""

    def __init__(self, given: Takeoff, result: StoreyStiffness, i: int) -> None:
        self.given, self.member, self.found, self.i = given, given.members[i], result.members[i], i
        self.sections = [s.name for s in given.sections]
        self.properties = result.sections

    def lines(self, storey: int) -> list[Line]:
        of = f'{self.member.name}, storey below level "{self.given.level[storey]}"'
        if self.member.kind in DIAGONAL:
            return self.diagonal(storey, of)
        return [*self.beams(storey, of), self.bending(storey, of)]

    def field(self, name: str, quantity: str) -> Number:
        return Number(float(getattr(self.member, name)), quantity, f"inputs/members/{self.i}/{name}")

    def value(self, name: str, quantity: str, storey: int) -> Number:
        array = getattr(self.found, name)
        return Number(float(array[storey]), quantity, f"result/members/{self.i}/{name}/{storey}")

    def modulus(self, section: str, name: str = "modulus") -> Number:
        material = self.given.sections[self.sections.index(section)].material
        j = next(j for j, m in enumerate(self.given.materials) if m.name == material)
        return Number(getattr(self.given.materials[j], name), "modulus", f"inputs/materials/{j}/{name}")

    def property(self, section: str, name: str, quantity: str) -> Number:
        j = self.sections.index(section)
        return Number(getattr(self.properties[j], name), quantity, f"result/sections/{j}/{name}")

    def diagonal(self, storey: int, of: str) -> list[Line]:
        run, height = self.field("run", "member length"), self.value("height", "member length", storey)
        length, alone = self.value("length", "member length", storey), self.value("alone", "stiffness", storey)
        section = self.member.section
        axial = (self.field("factor", "ratio"), self.modulus(section), self.property(section, "area", "section area"))
        twice = "2 " if self.member.acts_as == PAIR else ""
        substitution = ("2 × " if twice else "") + "{0} × {1} × {2} × ({3})² / ({4})³"
        return [
            Line(f"Diagonal, {of}", "L = √(b² + h²)", "√(({0})² + ({1})²)", (run, height), length, GEOMETRY),
            Line(f"Stiffness, {of}", f"k = {twice}c E A b²/L³", substitution, (*axial, run, length), alone, STATICS),
        ]

    def bending(self, storey: int, of: str) -> Line:
        member, alone = self.member, self.value("alone", "stiffness", storey)
        numbers = [self.field("factor", "ratio"), self.modulus(member.section)]
        numbers += [
            self.property(member.section, member.axis, "second moment"),
            self.value("height", "member length", storey),
        ]
        relation, substitution, reference = f"{RESTRAINT.get(member.acts_as, 12.0):g} c E I/h³", "", MECHANICS
        substitution = f"{RESTRAINT.get(member.acts_as, 12.0):g} × {{0}} × {{1}} × {{2}} / ({{3}})³"
        if member.beam:
            restraint, values = _restraint(member, storey)
            relation, reference = f"{relation} × {restraint}", MUTO
            substitution += f" × {values.replace('k̄', f'{{{len(numbers)}}}')}"
            numbers.append(self.value("ratio", "ratio", storey))
        if not member.shear:
            return Line(f"Stiffness, {of}", f"k = {relation}", substitution, tuple(numbers), alone, reference)
        n = len(numbers)
        numbers += [self.field("shear_factor", "ratio"), self.modulus(member.section, "shear_modulus")]
        numbers.append(self.property(member.section, f"shear_{member.axis}", "section area"))
        return Line(
            f"Stiffness, {of}",
            f"k = 1/(1/({relation}) + h/(c_s G A_s))",
            f"1/(1/({substitution}) + {{3}} / ({{{n}}} × {{{n + 1}}} × {{{n + 2}}}))",
            tuple(numbers),
            alone,
            reference,
        )

    def beams(self, storey: int, of: str) -> list[Line]:
        """Stiffness of the beams at a column's ends, and its ratio to that of the column."""
        member = self.member
        if not member.beam:
            return []
        both = storey > 0 and member.beam_below != member.beam
        lines = [self.end(member.beam, "beams_above", storey, of)] if storey == member.first else []
        ends = [self.value("beams_above", "joint stiffness", storey)]
        if both:
            lines.append(self.end(member.beam_below, "beams_below", storey, of))
            ends.append(self.value("beams_below", "joint stiffness", storey))
        column = (
            self.field("factor", "ratio"),
            self.modulus(member.section),
            self.property(member.section, member.axis, "second moment"),
            self.value("height", "member length", storey),
        )
        relation = "k̄ = (B_a + B_b)/(2 c E I/h)" if both else "k̄ = B_a/(c E I/h)"
        substitution = "({0} + {1}) / (2 × {2} × {3} × {4} / {5})" if both else "{0} / ({1} × {2} × {3} / {4})"
        ratio = self.value("ratio", "ratio", storey)
        return [*lines, Line(f"Beams over column, {of}", relation, substitution, (*ends, *column), ratio, MUTO)]

    def end(self, beam: str, name: str, storey: int, of: str) -> Line:
        spans = self.member.spans
        numbers = [
            self.field("beam_factor", "ratio"),
            self.modulus(beam),
            self.property(beam, "major", "second moment"),
            *(Number(span, "member length", f"inputs/members/{self.i}/spans/{j}") for j, span in enumerate(spans)),
        ]
        symbol, where = ("B_a", "above") if name == "beams_above" else ("B_b", "below")
        two = len(spans) > 1
        return Line(
            f"Beams {where}, {of}",
            f"{symbol} = c_b E I_b {'(1/L_1 + 1/L_2)' if two else '/L_1'}",
            "{0} × {1} × {2} " + ("× (1/{3} + 1/{4})" if two else "/ {3}"),
            tuple(numbers),
            self.value(name, "joint stiffness", storey),
            "definition",
        )


def _restraint(member: Member, storey: int) -> tuple[str, str]:
    """Factor a of the D-value in symbols, and the same as a substitution."""
    if storey > 0:
        return "k̄/(2 + k̄)", "k̄ / (2 + k̄)"
    if member.acts_as == PINNED_BASE:
        return "0.5 k̄/(1 + 2 k̄)", "0.5 × k̄ / (1 + 2 × k̄)"
    return "(0.5 + k̄)/(2 + k̄)", "(0.5 + k̄) / (2 + k̄)"


def line_of_sum(given: Takeoff, result: StoreyStiffness, d: int, item: DirectionStiffness) -> Line:
    """How the lowest storey's stiffness adds up from the members that act there."""
    axis, terms = "xy".index(item.direction), []
    numbers: list[Number] = []
    for i, (member, row) in enumerate(zip(given.members, result.members, strict=True)):
        if row.lateral[d, 0] > 0.0:
            terms.append(f"{member.count} × {{{len(numbers)}}}")
            numbers.append(Number(float(row.alone[0]), "stiffness", f"result/members/{i}/alone/0"))
            if abs(member.along[axis]) < 1.0:
                terms[-1] += f" × ({{{len(numbers)}}})²"
                numbers.append(Number(member.along[axis], "ratio", f"inputs/members/{i}/along/{axis}"))
    total = Number(float(item.storey[0]), "stiffness", f"result/directions/{d}/storey/0")
    of, cosine = f'{item.direction}, storey below level "{given.level[0]}"', "cos" if axis == 0 else "sin"
    return Line(f"Storey stiffness {of}", f"Σ n k {cosine}²γ", " + ".join(terms), tuple(numbers), total, "definition")
