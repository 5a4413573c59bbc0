"""The storey table as a block: typed in, pasted into, written through to its file."""

from __future__ import annotations

import itertools
from difflib import SequenceMatcher
from typing import Any

from calcsheet.blocks.block import Block, Shown, must_be
from calcsheet.blocks.jobcard import JobCard
from calcsheet.blocks.widgets import LiveWidget, Message, TableWidget
from calcsheet.job import edits
from calcsheet.job.errors import InputError
from calcsheet.job.storeyfile import StoreyReading
from calcsheet.render.numbers import decimals_for, text
from calcsheet.units import display


class StoreyTable(Block):
    """The storey table of a job.

    Parameters
    ----------
    job : JobCard
        The job card.

    Examples
    --------
    >>> storeys = StoreyTable(job)  # doctest: +SKIP
    >>> storeys.set("3", "mass", 352.5)  # doctest: +SKIP
    """

    view_name = "storeys"

    def __init__(self, job: JobCard) -> None:
        must_be(self, job, JobCard)
        super().__init__(job.job, "storeys")

    def shown(self) -> Shown:
        return ShownTable(self)

    def set(self, level: int | str, column: str, value: float | str) -> None:
        """Set a cell, by level (or row from 0, roof first) and column, to a number or a text as typed.

        Raises
        ------
        InputError
            There is no such level or column.
        """
        change = edits.set_text if isinstance(value, str) else edits.set_number
        self.job.edit(lambda reading: change(reading, level, column, value))  # type: ignore[arg-type]

    def paste(self, level: int | str, column: str, block: str) -> None:
        """Paste rows of cells separated by tabs, from a cell to the right and down; the table grows as needed."""
        self.job.edit(lambda reading: edits.paste(reading, level, column, block))

    def insert(self, below: int | str | None) -> None:
        """Add a blank row below a level; at the top with None."""
        self.job.edit(lambda reading: edits.insert_row(reading, below))

    def remove(self, level: int | str) -> None:
        """Take a level out."""
        self.job.edit(lambda reading: edits.delete_row(reading, level))


class ShownTable(Shown):
    """A display of the storey table."""

    def __init__(self, block: Block) -> None:
        super().__init__(block)
        self._ids: list[str] = []
        self._rows: list[tuple[str, ...]] = []
        self._fresh = (f"row-{i}" for i in itertools.count(1))

    def make_widget(self) -> LiveWidget:
        return TableWidget(self.answer, block=self.block.view_name)

    def answer(self, message: Message) -> str | None:
        job, op = self.block.job, message["op"]
        try:
            if op == "load":
                job.load()
            elif op == "keep":
                job.keep()
            elif op == "look":
                job.look()
            else:
                job.edit(lambda reading: _edited(reading, message, self._place(reading, message["row"])))
        except InputError as error:
            return str(error)
        return None

    def show_numbers(self) -> None:
        if self.widget is None:
            return
        job = self.block.job
        with job.lock:
            revision, files, status, payload = job.revision, job.files, job.status, self.block.payload
            table = {} if files is None else self._table(files.reading, payload)
        kind, words = status.kind, status.text
        if kind == "saved" and payload["state"] == "refused":
            kind, words = "waiting", f"{words}, but not calculated: {payload['why']}"
        with self.widget.hold_sync():
            self.widget.set_trait("table", table)
            self.widget.set_trait("status", {"kind": kind, "text": words})
            self.widget.set_trait("revision", revision)

    def show_live_figures(self, drawings: Any, revision: int) -> None:
        """A table has none."""

    def _table(self, reading: StoreyReading, payload: dict[str, Any]) -> dict[str, Any]:
        self._carry_ids(list(reading.rows))
        errors: dict[int, dict[str, str]] = {}
        for problem in reading.problems:
            if problem.row is not None:
                column = problem.column or reading.columns[0].key
                errors.setdefault(problem.row, {}).setdefault(column, problem.message)
        keys = [c.key for c in reading.columns]
        return {
            "columns": [
                {"key": c.key, "heading": c.heading, "editable": True, "align": "right" if c.unit else "left"}
                for c in reading.columns
            ],
            "rows": [
                {"id": self._ids[i], "cells": dict(zip(keys, cells, strict=False)), "errors": errors.get(i, {})}
                for i, cells in enumerate(reading.rows)
            ],
            "totals": self._totals(reading, payload),
            "item": "level",
        }

    def _totals(self, reading: StoreyReading, payload: dict[str, Any]) -> dict[str, str]:
        """Sum of the mass or weight column in its own unit."""
        if payload["state"] != "ok":
            return {}
        for column in reading.columns:
            if column.used and column.key in ("mass", "weight") and column.unit is not None:
                total = payload["result"][column.key] / column.unit.factor
                shown = text(total, decimals_for([total], display(column.key, "SI").digits + 1))
                return {"level": "sum above the base", column.key: shown}
        return {}

    def _place(self, reading: StoreyReading, row: str | None) -> int | None:
        """Index of the row that has an id; the job's lock is held."""
        self._carry_ids(list(reading.rows))
        if row is None:
            return None
        if row not in self._ids:
            raise InputError("", "", "this row is no longer in the table", "type into the table as it now stands")
        return self._ids.index(row)

    def _carry_ids(self, rows: list[tuple[str, ...]]) -> None:
        """Give every row that stays the id it had, and a new one to every row that has come."""
        if len(rows) != len(self._rows):
            ids = []
            for tag, i, i_end, j, j_end in SequenceMatcher(None, self._rows, rows, autojunk=False).get_opcodes():
                kept = self._ids[i:i_end] if tag in ("equal", "replace") else []
                ids += kept[: j_end - j] + [next(self._fresh) for _ in range(j_end - j - len(kept))]
            self._ids = ids
        self._rows = rows


def _edited(reading: StoreyReading, message: Message, row: int | None) -> Any:
    match message["op"]:
        case "set":
            return edits.set_text(reading, row or 0, message["key"], message["text"])
        case "paste":
            return edits.paste(reading, row or 0, message["key"], message["text"])
        case "insert":
            return edits.insert_row(reading, row)
        case "delete":
            return edits.delete_row(reading, row or 0)
        case other:
            raise InputError("", "", f"{other} is not known to the storey table", "must be an edit")
