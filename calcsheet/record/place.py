"""Files of a record put in their place: whole or absent, and never over what is there."""

from __future__ import annotations

import errno
import os
import shutil
import tempfile
from collections.abc import Iterator, Mapping
from contextlib import contextmanager
from pathlib import Path, PurePosixPath

from calcsheet.record.errors import RecordError

BUILDING = ".building-"
"""Beginning of the name of a folder in which files wait to be moved."""
LEFT_BEHIND = 24 * 3600.0
"""Age [s] from which such a folder is taken for one that a killed build has left."""
DATA = ".json"
"""Ending of the file that makes a set of files a record."""
NO_LINKS = (errno.EPERM, errno.EOPNOTSUPP, errno.ENOTSUP, errno.ENOSYS)


def placed(target: Path, files: Mapping[str, bytes]) -> tuple[Path, ...]:
    """Make a revision's folder with all its files at once.

    They are written into a folder beside it, which is then renamed: whoever looks sees all of them or none, and of those
    who place one revision at the same time one wins. What a killed build has left is removed a day later.

    Parameters
    ----------
    target : Path
        The revision's folder; the folder above it is made where it is missing.
    files : mapping of str to bytes
        Content by name; a name may lead into a folder of its own, as in ``tables/index.csv``.

    Returns
    -------
    tuple of Path
        The files, in the order given.

    Raises
    ------
    RecordError
        The revision is there already.
    """
    refuse_issued(target)
    target.parent.mkdir(exist_ok=True)
    with _building(target.parent) as building:
        _write(building, files)
        building.chmod(0o755)  # a temporary folder is private to its owner
        refuse_issued(target)
        try:
            os.rename(building, target)  # onto a folder that holds anything it fails on every system
        except OSError:
            refuse_issued(target)  # somebody else was first
            raise
    return tuple(target / name for name in files)


def refuse_issued(target: Path) -> None:
    """Refuse (RecordError) a revision whose folder `target` is there."""
    if target.exists():
        raise RecordError(
            f'revision "{target.name}" is issued already, in {target}; raise job.revision in job.toml to issue the next'
        )


def placed_beside(folder: Path, files: Mapping[str, bytes]) -> tuple[Path, ...]:
    """Put new files beside those of a record, over none of them.

    The set's JSON file goes first and decides: it appears whole, under a name that nobody has, or not at all. So of two
    who sign at the same time one wins and the other has placed nothing; and no print with a signature lies there without
    its data. Killed after it, the set lacks prints only, which the JSON holds all of: the same call completes it.

    Parameters
    ----------
    folder : Path
        Where the record is.
    files : mapping of str to bytes
        Content by name; one of them is the JSON file.

    Returns
    -------
    tuple of Path
        The files, in the order given.

    Raises
    ------
    RecordError
        One of the files is there already.
    ValueError
        There is not one JSON file among them.
    """
    (data,) = (name for name in files if name.endswith(DATA))
    prints = [name for name in files if name != data]
    there = {name for name in files if (folder / name).exists()}
    begun = data in there < files.keys() and _holds(folder / data, files[data])
    if there and not begun:
        raise _taken(folder / min(there))
    with _building(folder) as building:
        _write(building, files)
        for name in prints if begun else [data, *prints]:
            try:
                _move(building / name, folder / name)
            except FileExistsError:
                if name == data or not _holds(folder / name, files[name]):
                    raise _taken(folder / name) from None
    return tuple(folder / name for name in files)


def _taken(path: Path) -> RecordError:
    return RecordError(
        f"{path.name} is there already, in {path.parent}; an issued file is never overwritten: read who signed it first"
    )


@contextmanager
def _building(place: Path) -> Iterator[Path]:
    """A folder to build in, on the same file system as `place`; nothing of it is left after a failure."""
    building = Path(tempfile.mkdtemp(prefix=BUILDING, dir=place))
    try:
        now = building.stat().st_mtime  # by the clock that dates the others: a server's may differ from ours
        for other in place.glob(f"{BUILDING}*"):
            _remove_if_older(other, now - LEFT_BEHIND)
        yield building
    finally:
        shutil.rmtree(building, ignore_errors=True)


def _remove_if_older(folder: Path, date: float) -> None:
    try:
        old = folder.stat().st_mtime < date
    except OSError:  # moved into place, or removed by another
        return
    if old:
        shutil.rmtree(folder, ignore_errors=True)


def _write(folder: Path, files: Mapping[str, bytes]) -> None:
    for name, content in files.items():
        path = PurePosixPath(name)
        if path.is_absolute() or ".." in path.parts or "\\" in name or ":" in name:
            raise ValueError(f'file name "{name}"; must lead into the folder')
        (folder / path).parent.mkdir(parents=True, exist_ok=True)
        (folder / path).write_bytes(content)


def _holds(path: Path, content: bytes) -> bool:
    return path.is_file() and path.read_bytes() == content


def _move(source: Path, path: Path) -> None:
    """Give a file, whole, a name that nobody has (else FileExistsError)."""
    if os.name == "nt":
        os.rename(source, path)  # refuses a name that is taken there
    else:
        _link(source, path)


def _link(source: Path, path: Path) -> None:
    try:
        os.link(source, path)
    except OSError as error:
        if error.errno not in NO_LINKS:
            raise
        # a file system without links: the name is taken by an empty file, which no reader takes for a record
        path.open("xb").close()
        os.replace(source, path)
