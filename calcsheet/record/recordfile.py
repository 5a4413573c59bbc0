"""A record read from its HTML, PDF or JSON file: untrusted bytes, so recognised by content, bounded, and run by nobody."""

from __future__ import annotations

import io
import logging
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from pypdf import PdfReader, apply_configuration

from calcsheet.record.errors import RecordError
from calcsheet.record.strictjson import LARGEST_JSON, parsed
from calcsheet.record.tokens import attributes, name_of, tokens

DATA = "calcsheet-data"
"""Id of the script element that holds the data of an HTML record."""
MB = 1024 * 1024
LARGEST_FILE = 64 * MB
MOST_ATTACHMENTS = 20
MOST_TOKENS = 3_000_000
PDF_LIMITS = {
    "zlib_maximum_output_length": LARGEST_JSON,
    "zlib_maximum_recovery_input_length": MB,
    "lzw_maximum_output_length": MB,
    "run_length_maximum_output_length": MB,
    "brotli_maximum_output_length": MB,
    "array_based_stream_maximum_output_length": LARGEST_JSON,
    "stream_decoding_work_maximum_length": 2 * LARGEST_JSON,
    "stream_filters_maximum_length": 2,
    "stream_parsing_work_maximum_count": 400_000,
    "page_tree_maximum_entries": 10_000,
    "page_tree_maximum_depth": 30,
    "disable_legacy_handling": True,
}
"""What the PDF reader may spend on one file."""


@dataclass(frozen=True)
class Read:
    """A record with the file it came from.

    Parameters
    ----------
    record : dict
        Its data, as they stand in the file: of any format, not validated.
    kind : {"html", "pdf", "json"}
        What the file is, by its content.
    source : bytes
        The file.
    data : bytes
        The JSON as it stands in the file.
    name : str
        Name of the PDF's attachment that holds the data; never a path.
    """

    record: dict[str, Any]
    kind: str
    source: bytes
    data: bytes
    name: str = ""


def read_record(path: Path) -> Read:
    """Read the record that a file holds.

    Parameters
    ----------
    path : Path
        HTML, PDF or JSON.

    Raises
    ------
    RecordError
        No file, beyond `LARGEST_FILE`, none of the three kinds, no data or more than one set of them, or data that are not
        one object of plain JSON within the limits of `strictjson.parsed`.
    """
    if not path.is_file():
        raise RecordError(f"no record {path}; name an issued HTML, PDF or JSON file")
    with path.open("rb") as file:
        source = file.read(LARGEST_FILE + 1)
    return record_in(source, path.name)


def record_in(source: bytes, called: str) -> Read:
    """Read the record that the bytes of a file hold.

    Parameters
    ----------
    source : bytes
        The file's content.
    called : str
        The file's name, for messages.

    Raises
    ------
    RecordError
        As `read_record`.
    """
    if len(source) > LARGEST_FILE:
        raise RecordError(f"{called}: more than {LARGEST_FILE // MB} MB; no record is as large")
    start = source[:1024].removeprefix(b"\xef\xbb\xbf").lstrip()
    if b"%PDF-" in source[:1024]:
        kind, (name, data) = "pdf", _attached(source, called)
    elif start.startswith(b"{"):
        kind, name, data = "json", "", source
    elif start.startswith(b"<"):
        kind, name, data = "html", "", _embedded(source, called)
    else:
        raise RecordError(f"{called}: neither HTML, PDF nor JSON; name an issued record")
    record = parsed(data, called)
    if not isinstance(record, dict) or "payloads" not in record:
        raise RecordError(f"{called}: its data are no record; an object with payloads is asked for")
    return Read(record, kind, source, data, name)


def _embedded(source: bytes, called: str) -> bytes:
    """The data of an HTML file: what its one script element of their id holds."""
    try:
        html = source.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        raise RecordError(f"{called}: byte {error.start} is not UTF-8; a record's HTML is") from None
    found = [text for tag, text in _scripts(html, called) if attributes(tag).get("id") == DATA]
    if len(found) != 1:
        many = f"{len(found)} elements" if found else "no element"
        raise RecordError(f'{called}: {many} "{DATA}" in the HTML; a record has exactly one')
    return found[0].encode()


def _scripts(html: str, called: str) -> Iterator[tuple[str, str]]:
    """Opening tag and content of every script element."""
    tag = ""
    for i, token in enumerate(tokens(html)):
        if i >= MOST_TOKENS:
            raise RecordError(f"{called}: more than {MOST_TOKENS} tags; no record has as many")
        if tag:
            yield tag, "" if name_of(token) == "/script" else token
        tag = token if name_of(token) == "script" else ""


@contextmanager
def bounded() -> Iterator[None]:
    """The PDF reader within `PDF_LIMITS`, and silent: its warnings name parts of a file, not what to do."""
    logger = logging.getLogger("pypdf")
    level = logger.level
    logger.setLevel(logging.CRITICAL)
    try:
        with apply_configuration(**PDF_LIMITS):
            yield
    finally:
        logger.setLevel(level)


def _attached(source: bytes, called: str) -> tuple[str, bytes]:
    """Name and content of the PDF's one attachment of data."""
    try:
        with bounded():
            found = []
            for i, file in enumerate(PdfReader(io.BytesIO(source)).attachment_list):
                if i >= MOST_ATTACHMENTS:
                    raise RecordError(f"{called}: more than {MOST_ATTACHMENTS} files are attached; a record has one")
                if file.name.lower().endswith(".json"):
                    found.append(file)
            if len(found) > 1:
                found = [file for file in found if file.associated_file_relationship == "/Data"]
            if len(found) != 1:
                raise RecordError(
                    f"{called}: {len(found) or 'no'} JSON files attached as data; a record has exactly one"
                )
            content = bytes(found[0].content)
            return str(found[0].name), content
    except RecordError:
        raise
    except Exception as error:  # the library raises whatever it meets in a damaged file
        raise RecordError(f"{called}: a PDF that can't be read ({type(error).__name__})") from None
