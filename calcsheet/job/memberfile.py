"""The members of a stiffness take-off, members.csv: rows of equal members in the storeys they serve."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from calcsheet.core.arrays import Array
from calcsheet.core.chain import Chain
from calcsheet.core.errors import ModelError
from calcsheet.core.sections import AXES, Material, Section, properties_of
from calcsheet.core.stiffnesstakeoff import BEAMS, DIAGONAL, KINDS, PINNED_BASE, Member, SetFactor, Takeoff, take_off
from calcsheet.job.card import Card
from calcsheet.job.errors import InputError
from calcsheet.job.listfile import ListColumn, ListRow, read_list
from calcsheet.job.numbers import readings
from calcsheet.job.sectionfile import MATERIALS, SECTIONS, read_materials, read_sections
from calcsheet.job.storeycells import FILE as STOREYS
from calcsheet.job.storeycells import Frame
from calcsheet.job.table import TextTable

FILE = "members.csv"
"""Where members stand unless the card names another file."""
YES_NO = ("yes", "no")
COLUMNS = (
    ListColumn("member", needed=True),
    ListColumn("storeys", needed=True),
    ListColumn("kind", needed=True, choices=tuple(KINDS)),
    ListColumn("section", needed=True),
    ListColumn("direction", needed=True),
    ListColumn("count", "", needed=True),
    ListColumn("acts as", choices=tuple(dict.fromkeys(how for ways in KINDS.values() for how in ways))),
    ListColumn("axis", choices=AXES),
    ListColumn("height", "length"),
    ListColumn("run", "length"),
    ListColumn("stiffness factor", ""),
    ListColumn("shear", choices=YES_NO),
    ListColumn("shear factor", ""),
    ListColumn("beam"),
    ListColumn("beam below"),
    ListColumn("spans", "length", several=True),
    ListColumn("beam factor", ""),
    ListColumn("ground"),
)
OF_BEAMS = ("beam", "beam below", "spans", "beam factor")
OF_BENDING = ("axis", "shear", "shear factor", *OF_BEAMS)


@dataclass(frozen=True, eq=False)
class MemberReading:
    """What the tables of the stiffness take-off hold: every problem with them, or the take-off.

    Parameters
    ----------
    problems : tuple of InputError
        All that is wrong.
    takeoff : Takeoff or None
        In core units; None where there is any problem.
    """

    problems: tuple[InputError, ...]
    takeoff: Takeoff | None

    @property
    def messages(self) -> tuple[str, ...]:
        """All that is wrong, a sentence each."""
        return tuple(map(str, self.problems))


def member_files(card: Card) -> tuple[str, str, str]:
    """Names of the three files: members, sections, materials."""
    return card.model.members or FILE, SECTIONS, MATERIALS


def read_members(tables: Mapping[str, TextTable | InputError], card: Card, frame: Frame | None) -> MemberReading:
    """Read the tables of the stiffness take-off.

    Parameters
    ----------
    tables : mapping of str to TextTable or InputError
        By file, those of `member_files` that there are, or why one is no table; others are left alone.
    card : Card
        The job card: directions, stiffness sets, origins.
    frame : Frame or None
        Levels and storey heights; None where the storey table doesn't give them.

    Returns
    -------
    MemberReading
        With every problem; nothing is raised for one.
    """
    problems: list[InputError] = []
    given: list[TextTable] = []
    for name in member_files(card):
        match tables.get(name):
            case None:
                problems.append(InputError("", "", f"no {name} in the job folder", "the stiffness take-off needs it"))
            case InputError() as error:
                problems.append(error)
            case TextTable() as table:
                given.append(table)
    if frame is None:
        found = "its levels and storey heights can't be read"
        problems.append(InputError(STOREYS, "", found, "the stiffness take-off needs them"))
    if problems or frame is None:
        return MemberReading(tuple(problems), None)
    takeoff, problems = _takeoff(given, card, frame)
    return MemberReading(tuple(problems), takeoff)


def _takeoff(tables: Sequence[TextTable], card: Card, frame: Frame) -> tuple[Takeoff | None, list[InputError]]:
    """The take-off of the tables of members, sections and materials, or every problem with them."""
    members, sections, materials = tables
    rows, problems = read_list(members, COLUMNS)
    made_of, wrong = read_materials(materials)
    problems += wrong
    if problems:  # what follows would only repeat that a name isn't there
        return None, problems
    shapes, problems = read_sections(sections, {m.name: m for m in made_of})
    if problems:
        return None, problems
    levels = frame.level[frame.below :]
    reader = _Reader(levels, shapes, made_of)
    found = []
    for row in rows:
        try:
            found.append(reader.member(row))
        except InputError as error:
            problems.append(error)
    if problems:
        return None, problems
    factors = tuple(
        SetFactor(name, d, basis.factor_of(d) or 1.0)
        for name, basis in card.stiffness.items()
        if not basis.own and card.model.lateral is Chain
        for d in card.directions.analysed
    )
    unstated = tuple(
        name for name in member_files(card) if name not in card.origins or not card.origins[name].source.strip()
    )
    takeoff = Takeoff(
        level=levels,
        storey_height=frame.storey_height[frame.below :],
        direction=card.directions.analysed,
        materials=made_of,
        sections=shapes,
        members=tuple(found),
        factors=factors,
        no_origin=unstated,
    )
    return takeoff, []


def taken_off(takeoff: Takeoff, file: str) -> dict[str, Array]:
    """Storey stiffnesses by direction [kN/m], refusing (InputError) by `file` what can't be calculated."""
    try:
        with np.errstate(all="ignore"):  # what isn't finite is refused by who takes it
            return {found.direction: found.storey for found in take_off(takeoff).directions}
    except ModelError as error:
        raise InputError(file, error.where, error.found, error.allowed) from None
    except ArithmeticError as error:
        raise InputError(file, "", f"can't be calculated ({error})", "check the sizes and their units") from None


class _Reader:
    """Rows of members.csv as members, or the first thing wrong with each."""

    def __init__(self, levels: Sequence[str], sections: Sequence[Section], materials: Sequence[Material]) -> None:
        self.levels = list(levels)
        self.properties = {s.name: properties_of(s) for s in sections}
        shear = {m.name: m.shear_modulus for m in materials}
        self.shear_modulus = {s.name: shear[s.material] for s in sections}

    def member(self, row: ListRow) -> Member:
        texts, numbers = row.texts, row.numbers
        kind = texts["kind"]
        acts_as = self.acts_as(row, kind)
        first, last = self.storeys(row)
        member = Member(
            name=texts["member"],
            kind=kind,
            acts_as=acts_as,
            first=first,
            last=last,
            section=self.section(row, "section"),
            along=along(row),
            count=_whole(row, "count"),
            axis=texts.get("axis", AXES[0]),
            factor=numbers.get("stiffness factor", 1.0),
            shear=texts.get("shear", "yes" if kind == "wall" else "no") == "yes",
            shear_factor=numbers.get("shear factor", 1.0),
            height=numbers.get("height"),
            run=numbers.get("run"),
            beam=self.section(row, "beam"),
            beam_below=self.section(row, "beam below") or self.section(row, "beam"),
            spans=row.several.get("spans", ()),
            beam_factor=numbers.get("beam factor", 1.0),
            ground=texts.get("ground", ""),
        )
        self.check_given(row, member)
        self.check_properties(row, member)
        return member

    def acts_as(self, row: ListRow, kind: str) -> str:
        ways = KINDS[kind]
        given = row.texts.get("acts as", ways[0] if len(ways) == 1 else "")
        if given not in ways:
            found = f'acts as "{given}"' if given else "acts as is blank"
            raise row.refused(found, f"must be {' or '.join(ways)} for a {kind}")
        return given

    def storeys(self, row: ListRow) -> tuple[int, int]:
        """The run of storeys that a cell names by their levels: "3", "2 to 5" or "all"."""
        text = row.texts["storeys"]
        if text in self.levels:
            return self.levels.index(text), self.levels.index(text)
        if text.casefold() == "all":
            return 0, len(self.levels) - 1
        for i in range(len(text)):
            if text[i : i + 4].casefold() == " to " and {text[:i], text[i + 4 :]} <= {*self.levels}:
                first, last = sorted((self.levels.index(text[:i]), self.levels.index(text[i + 4 :])))
                return first, last
        names = ", ".join(f'"{name}"' for name in self.levels)
        raise row.refused(
            f'storeys "{text}"', f'must be a level above the effective base, a run such as "2 to 5", or all: {names}'
        )

    def section(self, row: ListRow, key: str) -> str:
        name = row.texts.get(key, "")
        if name and name not in self.properties:
            names = ", ".join(f'"{other}"' for other in self.properties)
            raise row.refused(f'{key} "{name}"', f"must be in {SECTIONS}: {names}")
        return name

    def check_given(self, row: ListRow, member: Member) -> None:
        """What is given is what the member takes: nothing stands in the table that doesn't count."""
        given = {*row.texts, *row.numbers, *row.several}
        held = member.acts_as in (BEAMS, PINNED_BASE)
        diagonal = member.kind in DIAGONAL
        needed = ("run",) if diagonal else ("beam", "spans") if held else ()
        not_taken = OF_BENDING if diagonal else ("run",) if held else ("run", *OF_BEAMS)
        if member.kind == "wall":
            not_taken = (*not_taken, "axis")
        if not member.shear:
            not_taken = (*not_taken, "shear factor")
        what = f"a {member.kind} that acts as {member.acts_as}" if len(KINDS[member.kind]) > 1 else f"an {member.kind}"
        for key in needed:
            if key not in given:
                raise row.refused(f"{key} is blank", f"must be given for {what}")
        for key in not_taken:
            if key in given:
                why = " without shear" if key == "shear factor" and not diagonal else ""
                raise row.refused(f"{key} is given", f"must be blank for {what}{why}")
        if len(member.spans) > 2:
            raise row.refused(f"{len(member.spans)} spans", "must be one or two, those of the beams beside the column")

    def check_properties(self, row: ListRow, member: Member) -> None:
        """Sections of their own shape and materials give what the member takes of them."""
        found = self.properties[member.section]
        second, shear = found.about(member.axis)
        needs = [(member.section, "area", found.area)] if member.kind not in ("column",) else []
        if member.kind not in DIAGONAL:
            needs.append((member.section, f"second moment {member.axis}", second))
        if member.shear:
            needs.append((member.section, "shear area" + " about the minor axis" * (member.axis == "minor"), shear))
        for beam in dict.fromkeys(filter(None, (member.beam, member.beam_below))):
            needs.append((beam, "second moment major", self.properties[beam].major))
        for section, what, value in needs:
            if value == 0.0:
                raise row.refused(f'section "{section}" has no {what}', f"must have one in {SECTIONS} for this member")
        if member.shear and self.shear_modulus[member.section] == 0.0:
            found_none = f'the material of section "{member.section}" has no shear modulus'
            raise row.refused(found_none, f"must have one, or a Poisson ratio, in {MATERIALS} for this member")


def along(row: ListRow) -> tuple[float, float]:
    """The unit vector of a row's direction: x, y, or degrees from x towards y."""
    text = row.texts["direction"]
    exact: Mapping[str, tuple[float, float]] = {"x": (1.0, 0.0), "y": (0.0, 1.0)}
    if text.casefold() in exact:
        return exact[text.casefold()]
    angles = {*readings(text.removesuffix("°")).values()}
    if len(angles) != 1 or abs(angle := angles.pop()) > 180.0:
        raise row.refused(f'direction "{text}"', "must be x, y, or degrees from x towards y, from -180 to 180")
    quarters, rest = divmod(angle, 90.0)
    if rest == 0.0:
        return exact["y" if quarters % 2 else "x"]
    return math.cos(math.radians(angle)), math.sin(math.radians(angle))


def _whole(row: ListRow, key: str) -> int:
    number = row.numbers[key]
    if number != int(number):
        raise row.refused(f"{key} {number:g}", "must be a whole number")
    return int(number)
