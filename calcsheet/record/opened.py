"""A record opened from its file, in the present format and of its schema: what follows may rely on its structure."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from calcsheet.record.document import settled
from calcsheet.record.errors import RecordError
from calcsheet.record.migrate import FORMAT, migrated
from calcsheet.record.recordfile import read_record
from calcsheet.record.schema import refusal


def opened(path: Path) -> dict[str, Any]:
    """The record that a file holds.

    Parameters
    ----------
    path : Path
        HTML, PDF or JSON. One of an earlier format is brought to the present one, with status and fingerprints anew.

    Raises
    ------
    RecordError
        No file that can be read, or data that are not a record's.
    """
    given = read_record(path).record
    try:
        record = migrated(given)
        if given["format"] != FORMAT:
            record = settled(record)
    except (LookupError, TypeError, AttributeError, ValueError) as error:
        raise RecordError(
            f"{path.name}: its data are no record ({type(error).__name__}); name an issued record"
        ) from None
    if why := refusal(record):
        raise RecordError(f"{path.name}: its data are no record: {why}")
    return record
