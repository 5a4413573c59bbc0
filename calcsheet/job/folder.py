"""The job folder: its files read together, saved one by one, and watched for changes by others."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from pathlib import Path

from calcsheet.core.basis import Basis
from calcsheet.job import card as job_card
from calcsheet.job import storeycells, textfile
from calcsheet.job.basis import read_basis, spectrum_files
from calcsheet.job.card import Card, parse_card
from calcsheet.job.cardtables import FILE_NAME
from calcsheet.job.errors import InputError
from calcsheet.job.floorfile import FILES as FLOOR_FILES
from calcsheet.job.floorfile import FloorReading, read_floors
from calcsheet.job.memberfile import MemberReading, member_files, read_members
from calcsheet.job.planfile import LINES, PLAN, read_lines
from calcsheet.job.storeycells import read_frame
from calcsheet.job.storeyfile import read_storeys
from calcsheet.job.storeyreading import StoreyReading
from calcsheet.job.table import TextTable, parse_table
from calcsheet.job.textfile import Encoding, Stamp, TextFile
from calcsheet.job.wording import shown


@dataclass(frozen=True, eq=False)
class JobFiles:
    """The files of a job folder as they were read or last saved.

    Parameters
    ----------
    card : Card
        The job card.
    card_text : str
        Its text.
    card_encoding : Encoding
        How that text is held in bytes.
    reading : StoreyReading
        The storey table, with its problems or the storeys.
    matrices : mapping of str to TextTable
        The tables beside it: of given matrices by direction, of rigid floors by file.
    stamps : mapping of str to Stamp or None
        By file name, the state of each file on disk; None for one that a basis names and that isn't there.
    basis : Basis or None
        The basis of the demand; None where the card has none, or a wrong one.
    basis_problem : str
        Why there is none, or empty: all else can be calculated without one.
    takeoff_tables : mapping of str to TextTable or InputError
        By file, the tables of the two take-offs that there are; or why one is no table.
    floors : FloorReading or None
        The mass take-off, with its problems or the floors; None where the folder has none of its files.
    members : MemberReading or None
        The stiffness take-off, with its problems or the members; None where the folder has no table of members.
    """

    card: Card
    card_text: str
    card_encoding: Encoding
    reading: StoreyReading
    matrices: Mapping[str, TextTable]
    stamps: Mapping[str, Stamp | None]
    basis: Basis | None = None
    basis_problem: str = ""
    takeoff_tables: Mapping[str, TextTable | InputError] = field(default_factory=dict)
    floors: FloorReading | None = None
    members: MemberReading | None = None

    def with_storeys(self, table: TextTable, card: Card | None = None) -> JobFiles:
        """The files with another storey table, or another card, and all that is read anew with it."""
        card, tables = card or self.card, self.takeoff_tables
        floors, members = _takeoffs(tables, card, table)
        reading = read_storeys(table, card, self.matrices, floors, members)
        return replace(self, card=card, reading=reading, floors=floors, members=members)

    def with_takeoff(self, table: TextTable) -> JobFiles:
        """The files with another table of a take-off, and all that is read anew with it."""
        changed = replace(self, takeoff_tables={**self.takeoff_tables, table.file: table})
        return changed.with_storeys(self.reading.table)

    @property
    def problems(self) -> tuple[str, ...]:
        """All that keeps the storeys from being read, a sentence each."""
        return tuple(problem.message for problem in self.reading.problems)


@dataclass(frozen=True)
class JobFolder:
    """A job folder.

    Parameters
    ----------
    path : Path
        The folder.
    """

    path: Path

    def load(self) -> JobFiles:
        """Read the job card, the storey table, and the matrices and spectrum that the card names.

        Raises
        ------
        InputError
            A file is missing or no text, the card has an error, or a table has no cells. What is wrong in the
            cells is listed in the reading instead, and what is wrong with the basis stands beside it.
        """
        card_file = self._read(job_card.FILE, f"`calcsheet new {self.path}` makes one")
        card = parse_card(card_file.text)
        stamps: dict[str, Stamp | None] = {job_card.FILE: card_file.stamp}
        storeys = self._table(storeycells.FILE, "must have a row for each level", stamps)
        matrices = self._beside(card, stamps)
        tables = self._takeoff_tables(card, stamps)
        floors, members = _takeoffs(tables, card, storeys)
        reading = read_storeys(storeys, card, matrices, floors, members)
        basis, problem = self._basis(card, stamps)
        return JobFiles(
            card=card,
            card_text=card_file.text,
            card_encoding=card_file.encoding,
            reading=reading,
            matrices=matrices,
            stamps=stamps,
            basis=basis,
            basis_problem=problem,
            takeoff_tables=tables,
            floors=floors,
            members=members,
        )

    def save_storeys(self, files: JobFiles, table: TextTable, overwrite: bool = False) -> JobFiles:
        """Write the storey table, whatever is wrong in its cells, and read it anew.

        Parameters
        ----------
        files : JobFiles
            The files as last read or saved.
        table : TextTable
            The edited table.
        overwrite : bool
            Write over what somebody else has changed on disk since.

        Raises
        ------
        ConflictError
            The file was changed on disk since, unless `overwrite`.
        NotSavedError
            It can't be written.
        """
        stamps = self._write(storeycells.FILE, table.content(), files.stamps, overwrite)
        return replace(files.with_storeys(table), stamps=stamps)

    def save_takeoff(self, files: JobFiles, table: TextTable, overwrite: bool = False) -> JobFiles:
        """Write a table of a take-off and read anew what builds on it; arguments and errors of `save_storeys`."""
        stamps = self._write(table.file, table.content(), files.stamps, overwrite)
        return replace(files.with_takeoff(table), stamps=stamps)

    def save_card(self, files: JobFiles, text: str, overwrite: bool = False) -> JobFiles:
        """Write the job card and read everything anew under it.

        A text that is no valid card is refused (InputError) and not saved; the other arguments and errors are
        those of `save_storeys`.
        """
        card = parse_card(text)
        content = files.card_encoding.encode(text, job_card.FILE)
        stamps = self._write(job_card.FILE, content, files.stamps, overwrite)
        if card.model != files.card.model:
            return self.load()
        before = spectrum_files(files.card).values()
        kept = {name: stamp for name, stamp in stamps.items() if name not in before}
        basis, problem = self._basis(card, kept)
        files = files.with_storeys(files.reading.table, card)
        return replace(files, card_text=text, stamps=kept, basis=basis, basis_problem=problem)

    def storeys_on_disk(self) -> TextTable:
        """The storey table as it now is on disk, refusing (InputError) what is no table."""
        return self._table(storeycells.FILE, "must have a row for each level", {})

    def save_both(self, files: JobFiles, table: TextTable, text: str) -> JobFiles:
        """Write storey table and job card: both, or neither; arguments and errors are those of the two above."""
        parse_card(text)
        saved = files if table == files.reading.table else self.save_storeys(files, table)
        if text == files.card_text:
            return saved
        try:
            return self.save_card(saved, text)
        except InputError:
            if saved is not files:
                self.save_storeys(saved, files.reading.table)
            raise

    def changed_on_disk(self, files: JobFiles) -> tuple[str, ...]:
        """Return the names of the files that are no longer on disk as they were read or saved."""
        return tuple(name for name, stamp in files.stamps.items() if textfile.stamp(self.path / name) != stamp)

    def _basis(self, card: Card, stamps: dict[str, Stamp | None]) -> tuple[Basis | None, str]:
        """The basis of a card, or what is wrong with it; the state of its spectrum's file is added to `stamps`."""
        try:
            tables = {}
            for key, name in spectrum_files(card).items():
                # noted first: a file that is missing or wrong is looked at again once it has changed
                stamps[name] = textfile.stamp(self.path / name)
                tables[key] = self._table(name, f"must be there, since {job_card.FILE} names it in basis.{key}", stamps)
            return read_basis(card, tables), ""
        except InputError as error:
            return None, str(error)

    def _beside(self, card: Card, stamps: dict[str, Stamp | None]) -> dict[str, TextTable]:
        """The tables that the storeys are read with: matrices by direction, or those of rigid floors by file."""
        if card.model.by_file:
            return {
                d: self._table(name, f"must be there, since {job_card.FILE} names it in model.{d}", stamps)
                for d, name in card.model.files.items()
            }
        if card.model.lateral is not None:
            return {}
        why = f"must be there, since model.kind is {shown(card.model.kind)} ({job_card.FILE})"
        tables = {name: self._table(name, why, stamps) for name in (LINES, PLAN)}
        for row in read_lines(tables[LINES])[0]:
            if row.file:
                if not re.fullmatch(FILE_NAME, row.file):
                    allowed = 'must be the name of a file in the job folder, such as "core.csv"'
                    raise InputError(LINES, f'line "{row.line.name}"', f'file "{row.file}"', allowed)
                why = f"must be there, since {LINES} names it for line {shown(row.line.name)}"
                tables[row.file] = self._table(row.file, why, stamps)
        return tables

    def _takeoff_tables(self, card: Card, stamps: dict[str, Stamp | None]) -> dict[str, TextTable | InputError]:
        """The tables of the take-offs that there are; one that comes later is noticed by its state."""
        tables: dict[str, TextTable | InputError] = {}
        for name in (*FLOOR_FILES, *member_files(card)):
            stamps[name] = textfile.stamp(self.path / name)
            if stamps[name] is not None:
                try:
                    tables[name] = self._table(name, "", stamps)
                except InputError as error:
                    tables[name] = error
        return tables

    def _write(
        self, name: str, content: bytes, stamps: Mapping[str, Stamp | None], overwrite: bool
    ) -> Mapping[str, Stamp | None]:
        path = self.path / name
        expected = textfile.stamp(path) if overwrite else stamps[name]
        return {**stamps, name: textfile.write(path, content, expected)}

    def _read(self, name: str, remedy: str) -> TextFile:
        path = self.path / name
        if not path.is_file():
            raise InputError("", "", f"no {name} in {self.path}", remedy)
        return textfile.read(path)

    def _table(self, name: str, remedy: str, stamps: dict[str, Stamp | None]) -> TextTable:
        source = self._read(name, remedy)
        stamps[name] = source.stamp
        return parse_table(source, name)


def _takeoffs(
    tables: Mapping[str, TextTable | InputError], card: Card, storeys: TextTable
) -> tuple[FloorReading | None, MemberReading | None]:
    """The take-offs of masses and of stiffnesses, each where the folder has it or the card asks for it."""
    frame = read_frame(storeys, card)
    has_floors = card.masses is not None or not tables.keys().isdisjoint(FLOOR_FILES)
    has_members = card.model.members is not None or member_files(card)[0] in tables
    return (
        read_floors(tables, card, frame) if has_floors else None,
        read_members(tables, card, frame) if has_members else None,
    )
