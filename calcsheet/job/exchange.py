"""A job's tables brought in from spreadsheet files, and written to them."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

from calcsheet.job import columns, floorfile, headings, storeycells
from calcsheet.job.cardtables import Import
from calcsheet.job.errors import CellProblem, InputError
from calcsheet.job.folder import JobFiles, JobFolder
from calcsheet.job.headings import LEVEL
from calcsheet.job.importing import Found, Knows, find_table, merged, whole
from calcsheet.job.rewrite import with_value
from calcsheet.job.table import TextTable
from calcsheet.job.workbook import read_sheets, write_workbook

TABLES = {"storeys": storeycells.FILE, "floors": floorfile.FLOORS}
"""The tables that a sheet can be brought into."""


@dataclass(frozen=True)
class Imported:
    """What was brought in.

    Parameters
    ----------
    place : str
        File and sheet that it came from.
    table : str
        The job's file.
    columns : tuple of str
        The columns brought in.
    levels : int
        How many levels they were given for.
    changed : int
        How many cells are now another text; of a table taken whole, all.
    notices : tuple of str
        What was left out, a sentence each.
    """

    place: str
    table: str
    columns: tuple[str, ...]
    levels: int
    changed: int
    notices: tuple[str, ...]


def import_file(
    folder: JobFolder,
    path: Path,
    *,
    table: str = "storeys",
    sheet: str = "",
    mapping: Mapping[str, str] | None = None,
    take_whole: bool = False,
) -> Imported:
    """Bring the levels of an XLSX or CSV file into a table of the job; headings that were mapped are kept in job.toml.

    Parameters
    ----------
    folder : JobFolder
        The job.
    path : Path
        The file.
    table : {"storeys", "floors"}
        The job's table.
    sheet : str
        The sheet; "" for the one chosen before, or the only one with a table of levels.
    mapping : mapping of str to str, optional
        The file's headings to this program's, beside those mapped before.
    take_whole : bool
        Whether the sheet replaces the whole table, instead of setting its columns level by level.

    Raises
    ------
    InputError
        The file or what it would make of the table is refused, by cell address; nothing has changed.
    """
    files = folder.load()
    before = getattr(files.card.imports, table).get(path.name, Import())
    mapping = dict(before.columns) | dict(mapping or {})
    sheet = sheet or before.sheet
    knows = _knows(files, table)
    found = find_table(read_sheets(path), sheet, mapping, knows, ("imports", table, path.name))
    old = _table(files, table)
    new = whole(found, TABLES[table], old) if take_whole or old is None else merged(found, old, knows)
    after = _with(files, table, new)
    _refuse_worse(found, _problems(files, table), _problems(after, table), new)
    text = files.card_text
    for theirs, ours in mapping.items():
        if before.columns.get(theirs) != ours:
            text = with_value(text, ["imports", table, path.name, "columns", theirs], ours)
    if sheet != before.sheet:
        text = with_value(text, ["imports", table, path.name, "sheet"], sheet)
    save = folder.save_storeys if table == "storeys" else folder.save_takeoff
    files = save(files, new)
    if text != files.card_text:
        folder.save_card(files, text)
    notices = [*found.notices, *_lost(old, new)]
    given = tuple(source.heading for source in found.sources[1:])
    return Imported(found.sheet.place, TABLES[table], given, len(found.levels), _changed(old, new), tuple(notices))


def export_file(folder: JobFolder, path: Path) -> tuple[str, ...]:
    """Write the storey table and the tables of the mass take-off to a new XLSX file, a sheet each.

    Parameters
    ----------
    folder : JobFolder
        The job.
    path : Path
        The file; it must not be there yet.

    Returns
    -------
    tuple of str
        Names of the sheets.

    Raises
    ------
    InputError
        A table can't be read, or the file can't be written.
    """
    files = folder.load()
    tables = {Path(storeycells.FILE).stem: files.reading.table}
    for name in floorfile.FILES:
        table = files.takeoff_tables.get(name)
        if isinstance(table, InputError):
            raise table
        if table is not None:
            tables[Path(name).stem] = table
    write_workbook(path, tables)
    return tuple(tables)


def _knows(files: JobFiles, table: str) -> Knows:
    """What headings stand for in a table of the job."""
    if table == "storeys":
        return lambda name: headings.known(name, name, files.card, files.reading.ways)
    loads = files.takeoff_tables.get(floorfile.LOADS)
    if not isinstance(loads, TextTable):
        what = "no loads.csv in the job folder"
        raise loads or InputError("", "", what, "make it first: the columns of floors.csv are named after its loads")
    wanted = floorfile.floor_columns(loads, files.card)
    return lambda name: columns.known(name, wanted)


def _table(files: JobFiles, table: str) -> TextTable | None:
    if table == "storeys":
        return files.reading.table
    found = files.takeoff_tables.get(TABLES[table])
    if isinstance(found, InputError):
        raise found
    return found


def _with(files: JobFiles, table: str, new: TextTable) -> JobFiles:
    if table == "storeys":
        return files.with_storeys(new)
    return files.with_takeoff(new)


def _problems(files: JobFiles, table: str) -> tuple[CellProblem, ...]:
    if table == "storeys":
        return files.reading.problems
    return () if files.floors is None else files.floors.problems[TABLES[table]]


def _refuse_worse(
    found: Found, before: tuple[CellProblem, ...], after: tuple[CellProblem, ...], table: TextTable
) -> None:
    """Refuse what would bring in a problem that the table hasn't already, by the address of the cell."""
    known = {problem.message for problem in before}
    new = [problem for problem in after if problem.message not in known]
    if not new:
        return
    first = new[0]
    names = [heading.strip().casefold() for heading in table.headings]
    level = "" if first.row is None else " ".join(table.rows[first.row][names.index(LEVEL)].split())
    what, _, allowed = first.message.removeprefix(f"{table.file}, ").partition("; ")
    more = f" (and {len(new) - 1} more of this file)" if len(new) > 1 else ""
    raise InputError(f"{found.sheet.place}, {found.where(level, first.column)}", "", what, allowed + more)


def _lost(old: TextTable | None, new: TextTable) -> tuple[str, ...]:
    """Columns that a table taken whole no longer has."""
    if old is None:
        return ()
    kept = {headings.split_heading(heading)[0].casefold() for heading in new.headings}
    gone = [h for h in old.headings if h.strip() and headings.split_heading(h)[0].casefold() not in kept]
    return (f"{new.file} had columns that it has no longer: {', '.join(gone)}",) if gone else ()


def _changed(old: TextTable | None, new: TextTable) -> int:
    """Cells that have another text now."""
    if old is None or len(old.rows) != len(new.rows):
        return sum(map(len, new.rows))
    width = len(new.headings)
    pairs = zip(old.rows, new.rows, strict=True)
    return sum(a != b for o, n in pairs for a, b in zip((*o, *("",) * width)[:width], n[:width], strict=True))
