"""The storey table as a block: typed in, pasted into, written through to its file."""

from __future__ import annotations

import dataclasses
import itertools
from difflib import SequenceMatcher
from typing import Any

from calcsheet.blocks.block import Block, Shown, must_be
from calcsheet.blocks.computed import computed, sums
from calcsheet.blocks.jobcard import JobCard
from calcsheet.blocks.widgets import LiveWidget, Message, TableWidget
from calcsheet.job import edits
from calcsheet.job.errors import InputError
from calcsheet.job.storeyreading import StoreyReading
from calcsheet.job.table import TextTable

LISTED = 40
"""Cells that differ from the file, listed in a conflict; the others are counted."""


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
        self.job.edit(lambda reading: change(reading, level, column, value), f"{column} set")  # type: ignore[arg-type]

    def paste(self, level: int | str, column: str, block: str) -> None:
        """Paste rows of cells separated by tabs, from a cell to the right and down; the table grows as needed."""
        self.job.edit(lambda reading: edits.paste(reading, level, column, block), WORDS["paste"])

    def insert(self, below: int | str | None) -> None:
        """Add a blank row below a level; at the top with None."""
        self.job.edit(lambda reading: edits.insert_rows(reading, below), "row inserted")

    def remove(self, level: int | str) -> None:
        """Take a level out."""
        self.job.edit(lambda reading: edits.delete_rows(reading, level, level), "row deleted")

    def undo(self) -> None:
        """Take back the last edit of the table, whoever made it here (InputError where none is remembered)."""
        self.job.undo()

    def redo(self) -> None:
        """Do again what was undone last (InputError where there is nothing)."""
        self.job.redo()


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
        ask = {"load": job.load, "keep": job.keep, "look": job.look, "undo": job.undo, "redo": job.redo}
        try:
            if op in ask:
                ask[op]()
            else:
                job.edit(lambda reading: self._edited(reading, message), in_words(message))
        except InputError as error:
            return str(error)
        return None

    def show_numbers(self) -> None:
        if self.widget is None:
            return
        job = self.block.job
        with job.lock:
            revision, files, status, payload = job.revision, job.files, job.status, self.block.payload
            table = {} if files is None else self._table(files.reading, files.card.units.system)
            history = {"undo": job.history.undoes, "redo": job.history.redoes}
            differences = job.differences() if files is not None and status.kind == "conflict" else ()
        kind, words = status.kind, status.text
        if kind == "saved" and payload["state"] == "refused":
            marked = files is not None and all(problem.row is not None for problem in files.reading.problems)
            why = "the blocks below wait for the values marked here" if marked else f"not calculated: {payload['why']}"
            kind, words = "waiting", f"{words}; {why}"
        listed = [dataclasses.asdict(d) for d in differences[:LISTED]]
        with self.widget.hold_sync():
            self.widget.set_trait("table", table)
            self.widget.set_trait("history", history)
            self.widget.set_trait("status", {"kind": kind, "text": words})
            self.widget.set_trait("differences", {"cells": listed, "more": len(differences) - len(listed)})
            self.widget.set_trait("revision", revision)
        self.widget.answered()

    def show_live_figures(self, drawings: Any, revision: int) -> None:
        """A table has none."""

    def _table(self, reading: StoreyReading, system: str) -> dict[str, Any]:
        self._carry_ids(list(reading.rows))
        errors: dict[int, dict[str, str]] = {}
        for problem in reading.problems:
            if problem.row is not None:
                column = problem.column or reading.columns[0].key
                errors.setdefault(problem.row, {}).setdefault(column, problem.message)
        keys = [c.key for c in reading.columns]
        beside = computed(reading, system)
        return {
            "columns": [
                {"key": c.key, "heading": c.heading, "editable": True, "align": "right" if c.unit else "left"}
                for c in reading.columns
            ]
            + [{"key": c.key, "heading": c.heading, "editable": False, "align": "right"} for c in beside],
            "rows": [
                {
                    "id": self._ids[i],
                    "cells": dict(zip(keys, cells, strict=False)) | {c.key: c.cells.get(i, "") for c in beside},
                    "errors": errors.get(i, {}),
                }
                for i, cells in enumerate(reading.rows)
            ],
            "totals": sums(reading, beside),
            "item": "level",
        }

    def _edited(self, reading: StoreyReading, message: Message) -> TextTable:
        """The table after what the page asks for; rows come by id, ranges by their first and last row."""
        op, row = message["op"], self._place(reading, message["row"])
        last = self._place(reading, message.get("last", message["row"]))
        if op == "insert":
            return edits.insert_rows(reading, row, message.get("count", 1))
        if row is None or last is None or op not in WORDS.keys() | {"set"}:
            raise InputError("", "", f"{op} is not known to the storey table", "must be an edit of a row")
        match op:
            case "set":
                return edits.set_text(reading, row, message["key"], message["text"])
            case "paste":
                size = message.get("rows", 1), message.get("columns", 1)
                return edits.paste(reading, row, message["key"], message["text"], *size)
            case "clear":
                return edits.clear(reading, row, last, message["keys"])
            case "fill":
                return edits.fill_down(reading, row, last, message["keys"])
            case "delete":
                return edits.delete_rows(reading, row, last)
        return edits.move_rows(reading, row, last, message["by"])

    def _place(self, reading: StoreyReading, row: str | None) -> int | None:
        """Index of the row that has an id; the job's lock is held."""
        self._carry_ids(list(reading.rows))
        if row is None:
            return None
        if row not in self._ids:
            raise InputError("", "", "this row is no longer in the table", "type into the table as it now stands")
        return self._ids.index(row)

    def _carry_ids(self, rows: list[tuple[str, ...]]) -> None:
        """Give every row that stays the id it had, also where it has moved, and a new one to every row that has come."""
        before = self._rows
        changed = [i for i, (a, b) in enumerate(zip(before, rows, strict=False)) if a != b]
        if len(rows) != len(before):
            ids: list[str | None] = []
            for tag, i, i_end, j, j_end in SequenceMatcher(None, before, rows, autojunk=False).get_opcodes():
                kept = self._ids[i:i_end] if tag in ("equal", "replace") else []
                ids += [*kept, *[None] * (j_end - j)][: j_end - j]
            self._ids = [own or next(self._fresh) for own in ids]
        elif sorted(before[i] for i in changed) == sorted(rows[i] for i in changed):
            there: dict[tuple[str, ...], list[str]] = {}
            for i in changed:
                there.setdefault(before[i], []).append(self._ids[i])
            for i in changed:
                self._ids[i] = there[rows[i]].pop(0)
        self._rows = rows


WORDS = {
    "paste": "cells pasted",
    "clear": "cells cleared",
    "fill": "cells filled down",
    "insert": "rows inserted",
    "delete": "rows deleted",
    "move": "rows moved",
}


def in_words(message: Message) -> str:
    """What the page asks for, for who undoes it."""
    op = str(message["op"])
    return f"{message['key']} typed" if op == "set" else WORDS.get(op, op)
