"""The error of a record that can't be made."""

from __future__ import annotations


class RecordError(Exception):
    """No record is made; the message is one sentence that says why."""
