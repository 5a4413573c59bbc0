"""The print of a PDF record held against its data: made again by the engine that made it, and compared."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

from calcsheet.record.check.finding import AGREES, DIFFERS, NOT_ASSESSED, Finding
from calcsheet.record.check.layout import same_engine, same_layout, to_install, too_long
from calcsheet.record.check.pdfobjects import compared
from calcsheet.record.files import paged
from calcsheet.record.recordfile import Read

PART = "print"
APPENDED = "the file goes on after the bytes as issued, as a signing program leaves it (its signature is not assessed)"
PACKED = "the file is packed otherwise"
END = b"%%EOF"


def pdf_findings(read: Read, record: Mapping[str, Any]) -> Iterator[Finding]:
    """What the print of a PDF record shows.

    Parameters
    ----------
    read : Read
        The file.
    record : mapping
        Its record in the present format.
    """
    beyond = too_long(record)
    if beyond or not (same_layout(record) and same_engine(record)):
        yield Finding(PART, NOT_ASSESSED, f"pages: {beyond or to_install(record)}")
        return
    made = paged(record, read.name, read.data)
    if read.source == made:
        yield Finding(PART, AGREES, "the file made again from the data is the same, byte by byte")
        return
    goes_on = read.source.startswith(made.rstrip())
    try:
        wrong = compared(read.source, made, signed=goes_on)
    except Exception as error:  # the library raises whatever it meets in a damaged file
        yield Finding(PART, DIFFERS, f"its pages can't be read ({type(error).__name__})")
        return
    after = ", in what was appended after the issue" if goes_on else ""
    yield from (Finding(PART, DIFFERS, text + after, place) for place, text in wrong)
    if not wrong:
        yield Finding(
            PART, AGREES, f"the pages made again from the data are the same; {APPENDED if goes_on else PACKED}"
        )
