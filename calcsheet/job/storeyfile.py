"""The storey table as storeys: its cells with the masses and stiffnesses of the take-offs, from the base up."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping, Sequence

import numpy as np

from calcsheet.core.arrays import Array
from calcsheet.core.chain import Chain
from calcsheet.core.errors import ModelError
from calcsheet.core.masstakeoff import take_off
from calcsheet.core.springs import BaseSprings
from calcsheet.core.storeys import LevelBelow, Storeys
from calcsheet.job import card as job_card
from calcsheet.job.card import Card
from calcsheet.job.errors import CellProblem, InputError
from calcsheet.job.floorfile import FloorReading, read_floors
from calcsheet.job.headings import AREA, GRAVITY, Ways, optional_stiffness, read_headings, stiffness_key
from calcsheet.job.memberfile import MemberReading, read_members, taken_off
from calcsheet.job.planfile import LINES, PLAN, LineRow, laterals_of, read_lines, read_plan
from calcsheet.job.resisting import Resisting
from calcsheet.job.storeycells import StoreyCells
from calcsheet.job.storeyreading import StoreyReading, TakenOff
from calcsheet.job.table import TextTable
from calcsheet.units import display

TAKE_OFF = "take-off"
"""How the masses are said to be given where they come from the mass take-off."""


def read_storeys(
    table: TextTable,
    card: Card,
    matrices: Mapping[str, TextTable] | None = None,
    floors: FloorReading | None = None,
    members: MemberReading | None = None,
) -> StoreyReading:
    """Read a storey table.

    Parameters
    ----------
    table : TextTable
        The table of storeys.csv.
    card : Card
        The job card: base, directions, kind of model and stiffness sets.
    matrices : mapping of str to TextTable, optional
        The tables beside it: of the matrices that the card names, by direction; of rigid floors by file.
    floors : FloorReading, optional
        The mass take-off, needed where the card takes the masses from it.
    members : MemberReading, optional
        The stiffness take-off, needed where the card takes the stiffnesses from it.

    Returns
    -------
    StoreyReading
        With every problem; nothing is raised for one.
    """
    beside = matrices or {}
    ways, lines, wrong = _ways(table, card, beside)
    headings = read_headings(table, card, ways)
    cells = StoreyCells(table, card, headings.columns, optional_stiffness(card, ways), lines_end=bool(lines))
    messages = [str(error) for error in wrong]
    with np.errstate(over="ignore"):  # what overflows is refused as infinite
        taken, found = _taken(cells, card, floors, members)
    messages += found
    messages += [str(error) for error in _gravity_missing(cells)]
    problems = [
        *(CellProblem(None, key, str(error)) for key, error in headings.problems),
        *cells.problems,
        *(CellProblem(None, None, message) for message in messages),
    ]
    storeys = None
    if not problems:
        with np.errstate(over="ignore"):  # as above
            builder = _Builder(cells, card, ways, lines, taken)
            storeys = builder.storeys(beside)
            problems = builder.problems
    return StoreyReading(
        table,
        headings.columns,
        cells.names,
        tuple(problems),
        (*headings.notices, *cells.notices),
        None if problems else storeys,
        tuple(cells.rows),
        len(cells.rows) - cells.below,
        cells.foot,
        cells.numbers(),
        ways,
        taken,
    )


def _taken(
    cells: StoreyCells, card: Card, floors: FloorReading | None, members: MemberReading | None
) -> tuple[dict[str, TakenOff], list[str]]:
    """What the card takes from take-offs, by column key, also beside cells that are wrong; and what is wrong with it."""
    taken: dict[str, TakenOff] = {}
    messages: list[str] = []
    unknown = np.full(len(cells.rows), np.nan)
    if card.masses is not None:
        floors = floors or read_floors({}, card, None)
        messages += floors.messages
        mass = area = unknown
        if floors.floors is not None:
            area = floors.floors.area
            try:
                mass = take_off(floors.floors).mass
            except ModelError as error:
                messages.append(f"mass take-off, {error}")
        taken["mass"] = TakenOff(card.masses.source, mass[::-1])
        if AREA not in cells.values:
            taken[AREA] = TakenOff(card.masses.source, area[::-1])
    if card.model.members is not None:
        members = members or read_members({}, card, None)
        messages += members.messages
        storey: Mapping[str, Array] = {}
        if members.takeoff is not None:
            try:
                storey = taken_off(members.takeoff, card.model.members)
            except InputError as error:
                messages.append(str(error))
        for d in card.directions.analysed:
            given = np.concatenate((unknown[: cells.below], storey[d])) if d in storey else unknown
            taken[stiffness_key(Chain.columns[0], d, None)] = TakenOff(card.model.members, given[::-1])
    return taken, messages


class _Builder:
    """Puts the storeys together, with the last problems that only the whole shows."""

    def __init__(
        self,
        cells: StoreyCells,
        card: Card,
        ways: Ways,
        lines: Sequence[LineRow],
        taken: Mapping[str, TakenOff],
    ) -> None:
        self.cells = cells
        self.card = card
        self.ways = ways
        self.lines = lines
        self.taken = {key: found.numbers[::-1] for key, found in taken.items()}
        self.problems: list[CellProblem] = []

    def refuse(self, message: str, column: str | None = None) -> None:
        self.problems.append(CellProblem(None, column, message))

    def storeys(self, matrices: Mapping[str, TextTable]) -> Storeys | None:
        cells, n, levels = self.cells, self.cells.below, self.cells.levels
        elevation, height = cells.heights()
        mass = self.taken["mass"] if "mass" in self.taken else cells.mass()
        plan = None
        if self.lines:
            plan, wrong = read_plan(matrices[PLAN], self.lines, levels[n:])
            for problem in wrong:
                self.refuse(str(problem))

        def column(key: str) -> Array | None:
            if key in self.taken:
                return self.taken[key][n:]
            return cells.from_base(key)[n:] if key in cells.values else None

        resisting = Resisting(
            self.card, self.ways, self.lines, levels[n:], height[n:], column, cells.table.file, matrices
        )
        stiffness, found = resisting.sets()
        for key, text in found:
            self.refuse(text, key)
        if self.problems:
            return None
        return Storeys(
            base=levels[n - 1] if n else "base",
            base_elevation=float(elevation[n - 1]) if n else cells.foot,
            level=levels[n:],
            elevation=elevation[n:],
            storey_height=height[n:],
            mass=mass[n:],
            below=tuple(LevelBelow(levels[i], float(elevation[i]), float(mass[i])) for i in range(n)),
            stiffness=stiffness,
            forces=self.card.serves.forces,
            drifts=self.card.serves.drifts,
            given=TAKE_OFF if "mass" in self.taken else "mass" if "mass" in cells.values else "weight",
            gravity=cells.if_given(GRAVITY, n),
            area=self.taken[AREA][n:] if AREA in self.taken else cells.if_given(AREA, n),
            springs=_springs(self.card),
            second_order=_second_order(self.card),
            plan=plan,
        )


def _ways(
    table: TextTable, card: Card, beside: Mapping[str, TextTable]
) -> tuple[Ways, Sequence[LineRow], list[InputError]]:
    """What resists along each direction or line, the lines of resistance, and all that is wrong with them."""
    if card.model.lateral is not None:
        return dict.fromkeys(card.directions.analysed, card.model.lateral), (), []
    lines, wrong = read_lines(beside[LINES])
    found, missing = laterals_of(table, lines, [name for name, basis in card.stiffness.items() if basis.own])
    return found, lines, [*wrong, *missing]


def _second_order(card: Card) -> bool:
    """Whether the gravity loads are to be in the stiffness."""
    return (card.basis or {}).get("second_order_in_stiffness") is True


def _gravity_missing(cells: StoreyCells) -> Iterator[InputError]:
    """Gravity loads are given where they are to be in the stiffness."""
    numbers = cells.values.get(GRAVITY, {})
    if _second_order(cells.card) and all(math.isnan(numbers.get(row, math.nan)) for row in cells.rows_above):
        allowed = f'must be false, or {cells.table.file} must have a column "{GRAVITY}"'
        what = "got true without gravity loads"
        yield InputError(job_card.FILE, "basis.second_order_in_stiffness", what, allowed)


def _springs(card: Card) -> dict[str, BaseSprings]:
    """The springs at the base of each direction that has any."""
    units = [display(quantity, card.units.system).factor for quantity in ("stiffness", "rotational stiffness", "ratio")]
    found = {}
    for d in card.directions.analysed:
        given = [None if v is None else v * unit for v, unit in zip(card.base.of(d), units, strict=True)]
        if any(v is not None for v in given):
            found[d] = BaseSprings(*given)
    return found
