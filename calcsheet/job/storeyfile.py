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
from calcsheet.job.storeyreading import StoreyReading
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
    messages: list[str] = []
    if card.masses is None:
        floors = None
    else:
        floors = floors or read_floors({}, card, None)
        messages += floors.messages
    if card.model.members is None:
        members = None
    else:
        members = members or read_members({}, card, None)
        messages += members.messages
    problems = [
        *(CellProblem(None, key, str(error)) for key, error in headings.problems),
        *cells.problems,
        *(CellProblem(None, None, message) for message in messages),
    ]
    storeys = None
    if not problems:
        with np.errstate(over="ignore"):  # what overflows is refused as infinite
            builder = _Builder(cells, card, floors, members)
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
    )


class _Builder:
    """Puts the storeys together, with the last problems that only the whole shows."""

    def __init__(
        self, cells: StoreyCells, card: Card, floors: FloorReading | None, members: MemberReading | None
    ) -> None:
        self.cells = cells
        self.card = card
        self.floors = None if floors is None else floors.floors
        self.members = None if members is None else members.takeoff
        self.problems: list[CellProblem] = []

    def refuse(self, message: str, column: str | None = None) -> None:
        self.problems.append(CellProblem(None, column, message))

    def storeys(self, matrices: Mapping[str, TextTable]) -> Storeys | None:
        cells, n, levels = self.cells, self.cells.below, self.cells.levels
        elevation, height = cells.heights()
        try:
            mass = cells.mass() if self.floors is None else take_off(self.floors).mass
        except ModelError as error:
            self.refuse(f"mass take-off, {error}")
            return None
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
            given=TAKE_OFF if self.floors else "mass" if "mass" in cells.values else "weight",
            gravity=cells.if_given(GRAVITY, n),
            area=self.floors.area[n:] if self.floors and AREA not in cells.values else cells.if_given(AREA, n),
        )

    def chains(self, below: int) -> tuple[StiffnessSet, ...] | None:
        sets = []
        taken = self.taken_off()
        if self.problems:
            return None
        for name, basis in self.card.stiffness.items():
            lateral: dict[str, Lateral] = {}
            for d in self.card.directions.analysed:
                key = stiffness_key(d, name if basis.own else None)
                try:
                    storey = taken[d] if d in taken else self.cells.from_base(key)[below:]
                    lateral[d] = Chain(storey=storey * (basis.factor_of(d) or 1.0))
                except ModelError as error:
                    self.refuse(f"{self.cells.table.file}, {error}", key)
            sets.append(StiffnessSet(name, basis.ground, lateral))
        return None if self.problems else tuple(sets)

    def taken_off(self) -> Mapping[str, Array]:
        """Storey stiffnesses by direction where they come from members [kN/m]."""
        if self.members is None or self.card.model.members is None:
            return {}
        try:
            return taken_off(self.members, self.card.model.members)
        except InputError as error:
            self.refuse(str(error))
            return {}

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
