"""The storey table as storeys: its cells with the masses and stiffnesses of the take-offs, from the base up."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from calcsheet.core.arrays import Array
from calcsheet.core.chain import Chain
from calcsheet.core.errors import ModelError
from calcsheet.core.masstakeoff import take_off
from calcsheet.core.matrix import FlexibilityMatrix, StiffnessMatrix
from calcsheet.core.storeys import Lateral, LevelBelow, StiffnessSet, Storeys
from calcsheet.job.card import CHAIN, Card
from calcsheet.job.errors import CellProblem, InputError
from calcsheet.job.floorfile import FloorReading, read_floors
from calcsheet.job.headings import AREA, GRAVITY, read_headings, stiffness_key
from calcsheet.job.matrixfile import read_matrix
from calcsheet.job.memberfile import MemberReading, read_members, taken_off
from calcsheet.job.storeycells import StoreyCells
from calcsheet.job.storeyreading import StoreyReading, TakenOff
from calcsheet.job.table import TextTable

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
        By direction, the tables of the matrices that the card names.
    floors : FloorReading, optional
        The mass take-off, needed where the card takes the masses from it.
    members : MemberReading, optional
        The stiffness take-off, needed where the card takes the stiffnesses from it.

    Returns
    -------
    StoreyReading
        With every problem; nothing is raised for one.
    """
    headings = read_headings(table, card)
    cells = StoreyCells(table, card, headings.columns)
    with np.errstate(over="ignore"):  # what overflows is refused as infinite
        taken, messages = _taken(cells, card, floors, members)
    problems = [
        *(CellProblem(None, key, str(error)) for key, error in headings.problems),
        *cells.problems,
        *(CellProblem(None, None, message) for message in messages),
    ]
    storeys = None
    if not problems:
        with np.errstate(over="ignore"):  # as above
            builder = _Builder(cells, card, taken)
            storeys = builder.storeys(matrices or {})
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
            taken[stiffness_key(d, None)] = TakenOff(card.model.members, given[::-1])
    return taken, messages


class _Builder:
    """Puts the storeys together, with the last problems that only the whole shows."""

    def __init__(self, cells: StoreyCells, card: Card, taken: Mapping[str, TakenOff]) -> None:
        self.cells = cells
        self.card = card
        self.taken = {key: found.numbers[::-1] for key, found in taken.items()}
        self.problems: list[CellProblem] = []

    def refuse(self, message: str, column: str | None = None) -> None:
        self.problems.append(CellProblem(None, column, message))

    def storeys(self, matrices: Mapping[str, TextTable]) -> Storeys | None:
        cells, n, levels = self.cells, self.cells.below, self.cells.levels
        elevation, height = cells.heights()
        mass = self.taken["mass"] if "mass" in self.taken else cells.mass()
        stiffness = self.chains(n) if self.card.model.kind == CHAIN else self.matrices(levels[n:], matrices)
        if stiffness is None:
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
        )

    def chains(self, below: int) -> tuple[StiffnessSet, ...] | None:
        sets = []
        for name, basis in self.card.stiffness.items():
            lateral: dict[str, Lateral] = {}
            for d in self.card.directions.analysed:
                key = stiffness_key(d, name if basis.own else None)
                try:
                    storey = (self.taken[key] if key in self.taken else self.cells.from_base(key))[below:]
                    lateral[d] = Chain(storey=storey * (basis.factor_of(d) or 1.0))
                except ModelError as error:
                    self.refuse(f"{self.cells.table.file}, {error}", key)
            sets.append(StiffnessSet(name, basis.ground, lateral))
        return None if self.problems else tuple(sets)

    def matrices(self, levels: tuple[str, ...], tables: Mapping[str, TextTable]) -> tuple[StiffnessSet, ...] | None:
        flexible = self.card.model.kind == FlexibilityMatrix.kind
        given = {}
        for d in self.card.directions.analysed:
            matrix, problems = read_matrix(tables[d], levels, "flexibility" if flexible else "stiffness")
            for error in problems:
                self.refuse(str(error))
            given[d] = matrix
        if self.problems:
            return None
        sets = []
        for name, basis in self.card.stiffness.items():
            lateral: dict[str, Lateral] = {}
            for d, matrix in given.items():
                factor = basis.factor_of(d) or 1.0
                try:
                    if flexible:
                        lateral[d] = FlexibilityMatrix(matrix=matrix / factor)
                    else:
                        lateral[d] = StiffnessMatrix(matrix=matrix * factor)
                except ModelError as error:
                    self.refuse(f"{tables[d].file}, {error}")
            sets.append(StiffnessSet(name, basis.ground, lateral))
        return None if self.problems else tuple(sets)
