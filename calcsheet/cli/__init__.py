"""The command line: jobs (new, issue, answer, demo) and issued records (check, sign, comment, compare, register, tables)."""

from __future__ import annotations

from calcsheet.cli import jobs, records
from calcsheet.cli.group import main

__all__ = ["jobs", "main", "records"]
