"""The command line.

For jobs: new, import, export, issue, answer, demo; for issued records: check, sign, comment, compare, register, tables.
"""

from __future__ import annotations

from calcsheet.cli import jobs, records
from calcsheet.cli.group import main

__all__ = ["jobs", "main", "records"]
