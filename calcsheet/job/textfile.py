"""Text files read with their encoding and a hash, and replaced whole or not at all."""

from __future__ import annotations

import codecs
import hashlib
import os
import stat
import tempfile
from dataclasses import dataclass
from pathlib import Path

from calcsheet.job.errors import ConflictError, InputError, NotSavedError


@dataclass(frozen=True)
class Stamp:
    """The state of a file on disk when it was read or written.

    Parameters
    ----------
    sha256 : str
        Hash of its bytes.
    """

    sha256: str

    @classmethod
    def of(cls, content: bytes) -> Stamp:
        """Return the stamp of a file of these bytes."""
        return cls(hashlib.sha256(content).hexdigest())


@dataclass(frozen=True)
class Encoding:
    """How a file's text is held in bytes, so that it is written as it was read.

    Parameters
    ----------
    name : str
        Name of the codec.
    mark : bytes
        The byte-order mark, or nothing.
    """

    name: str = "utf-8"
    mark: bytes = b""

    def encode(self, text: str, file: str) -> bytes:
        """Return the bytes of a text, refusing (InputError) a character that the encoding lacks."""
        try:
            return self.mark + text.encode(self.name)
        except UnicodeEncodeError as error:
            raise InputError(
                file,
                "",
                f'"{text[error.start]}" can\'t be written in {self.name}, the encoding of the file',
                "save the file as UTF-8 first",
            ) from None


_MARKS = (
    Encoding("utf-8", codecs.BOM_UTF8),
    Encoding("utf-16-le", codecs.BOM_UTF16_LE),
    Encoding("utf-16-be", codecs.BOM_UTF16_BE),
)


@dataclass(frozen=True)
class TextFile:
    """A text, the encoding it was found in, and the stamp of its file."""

    text: str
    encoding: Encoding
    stamp: Stamp


def decode(content: bytes, file: str) -> tuple[str, Encoding]:
    """Return the text of a file and its encoding.

    A byte-order mark decides; without one it is UTF-8, or Windows-1252 where the bytes are not UTF-8.

    Raises
    ------
    InputError
        The bytes are text in none of these.
    """
    marked = next((encoding for encoding in _MARKS if content.startswith(encoding.mark)), None)
    for encoding in [marked] if marked else [Encoding("utf-8"), Encoding("cp1252")]:
        try:
            return content[len(encoding.mark) :].decode(encoding.name), encoding
        except UnicodeDecodeError:
            continue
    raise InputError(file, "", "not a text in UTF-8, UTF-16 or Windows-1252", "save the file as UTF-8")


def read(path: Path) -> TextFile:
    """Read a text file.

    Raises
    ------
    InputError
        The file can't be opened, or is no text.
    """
    try:
        content = path.read_bytes()
    except OSError as error:
        found = f"can't be read ({error.strerror})"
        raise InputError(path.name, "", found, "must be a file that can be opened") from None
    text, encoding = decode(content, path.name)
    return TextFile(text, encoding, Stamp.of(content))


def stamp(path: Path) -> Stamp | None:
    """Return the stamp of a file as it now is on disk, or None where there is no file that can be read."""
    try:
        return Stamp.of(path.read_bytes())
    except OSError:
        return None


def write(path: Path, content: bytes, expected: Stamp | None) -> Stamp:
    """Replace a file whole, or leave it as it was.

    Parameters
    ----------
    path : Path
        The file; a symbolic link is followed.
    content : bytes
        What it shall hold.
    expected : Stamp or None
        The state that the file on disk must still be in; None: there must be no file.

    Returns
    -------
    Stamp
        The file's new state.

    Raises
    ------
    ConflictError
        The file on disk is not in the expected state.
    NotSavedError
        The file can't be written.
    """
    path = Path(os.path.realpath(path))
    try:
        now = Stamp.of(path.read_bytes()) if path.exists() else None
        if now != expected:
            state = "changed on disk since it was read" if now else "removed from disk since it was read"
            remedy = "load it again, or keep what was typed here"
            raise ConflictError(path.name, "", f"not saved, {state}", remedy)
        _replace(path, content)
    except PermissionError:
        raise NotSavedError(
            path.name,
            "",
            "not saved, the file is read-only or held open by another program",
            "close it there and save again",
        ) from None
    except OSError as error:
        raise NotSavedError(path.name, "", f"not saved ({error.strerror})", "mend this and save again") from None
    return Stamp.of(content)


def _replace(path: Path, content: bytes) -> None:
    if path.exists() and not os.access(path, os.W_OK):
        raise PermissionError  # replacing a read-only file would succeed, against its owner's wish
    handle, name = tempfile.mkstemp(prefix=f".{path.name}.", suffix=".part", dir=path.parent)
    part = Path(name)
    try:
        with os.fdopen(handle, "wb") as file:
            file.write(content)
            file.flush()
            os.fsync(file.fileno())
        # a temporary file is private to its owner: without this a shared file would become private too
        part.chmod(stat.S_IMODE(path.stat().st_mode) if path.exists() else 0o644)
        os.replace(part, path)
    finally:
        part.unlink(missing_ok=True)
