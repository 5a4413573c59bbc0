"""The job as one object: its files, its steps, and who is told when they change.

State lives here and nowhere else; blocks and records are views. One lock guards it, one pass brings every step up to
date, and listeners hear of it afterwards: all numbers first, then all figures, the newest state winning.
"""

from __future__ import annotations

import re
import threading
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import Any, ClassVar

import numpy as np

from calcsheet.job.differences import Difference, differences
from calcsheet.job.errors import ConflictError, InputError, NotSavedError
from calcsheet.job.folder import JobFiles, JobFolder
from calcsheet.job.rewrite import Value, with_value
from calcsheet.job.storeyreading import StoreyReading
from calcsheet.job.table import TextTable
from calcsheet.steps.fromfiles import (
    FROM_FILES,
    MASSES,
    STIFFNESSES,
    RefusedError,
    WaitsError,
    inputs_from_files,
)
from calcsheet.steps.history import History
from calcsheet.steps.listen import Listener, Status, clock
from calcsheet.steps.registry import STEPS
from calcsheet.steps.serial import to_json
from calcsheet.steps.step import Done, Payload, Step, calculated, done, unfinished

KEY = re.compile(r"\w([\w. -]*\w)?")
"""Names that steps may have: they stand in JSON pointers."""
Values = Mapping[tuple[str, ...], Value | None]


@dataclass
class _Node:
    step: Step
    needs: dict[str, str]
    inputs: Any
    payload: Payload = field(default_factory=dict)
    upstream: tuple[Payload, ...] = ()


class Job:
    """A job folder open in this process.

    Use `Job.open`: it gives the same object for the same folder.

    Parameters
    ----------
    path : Path
        The folder.
    """

    _opened: ClassVar[dict[Path, Job]] = {}
    _opening: ClassVar[threading.Lock] = threading.Lock()

    def __init__(self, path: Path) -> None:
        self.folder = JobFolder(path)
        self.lock = threading.RLock()
        self.telling = threading.RLock()  # held while anything is shown; never taken by who holds the other
        self.revision = 0
        self.status = Status("error", "not read yet")
        self.files: JobFiles | None = None
        self.history = History()
        self._problem = ""
        self._unsaved = False
        self._nodes: dict[str, _Node] = {}
        self._listeners: list[Listener] = []
        self._told = 0
        self.rest = 0.0  # s between numbers and figures, for who shows them to take the numbers in
        self._newer = threading.Event()  # ends the rest
        self._nodes["card"] = _Node(STEPS["card"], {}, None)
        self._nodes["storeys"] = _Node(STEPS["storeys"], {}, None)
        self.load()

    @classmethod
    def open(cls, folder: str | Path) -> Job:
        """The job of a folder; read anew where its files changed on disk and nothing here is unsaved."""
        path = Path(folder).resolve()
        with cls._opening:
            job = cls._opened.get(path)
            if job is None:
                job = cls._opened[path] = cls(path)
                return job
        if not job._unsaved and (job.files is None or job.folder.changed_on_disk(job.files)):
            job.load()
        return job

    # ---- steps -----------------------------------------------------------------------------------------------------

    def attach(self, kind: str, inputs: Any, needs: dict[str, str] | None = None, key: str | None = None) -> str:
        """Add a step, or give one that is there new inputs, and bring the job up to date.

        Parameters
        ----------
        kind : str
            Kind of the step.
        inputs : object
            Its inputs.
        needs : dict of str to str, optional
            Key of the step that serves each kind needed; that kind's own name where omitted.
        key : str, optional
            Name of the step in this job; its kind where omitted.

        Returns
        -------
        str
            The key.

        Raises
        ------
        ValueError
            A name that can't be used, a need that isn't there, or inputs that can't be kept; nothing has changed.
        """
        key = key or kind
        if not KEY.fullmatch(key):
            raise ValueError(
                f'name of a step: got "{key}"; must be of letters, digits, points, hyphens, underscores, spaces'
            )
        to_json(inputs)  # what can't be kept is refused before anything changes
        with self.lock:
            step, before = STEPS[kind], self._nodes.get(key)
            served = {k: (needs or {}).get(k, k) for k in step.needs}
            if "basis" in served.values():  # read from the files as soon as somebody asks for it
                self._nodes.setdefault("basis", _Node(STEPS["basis"], {}, None))
            missing = [k for k in served.values() if k not in self._nodes]
            if missing:
                raise ValueError(f"{step.title} needs {', '.join(missing)}, which this job has not yet")
            if before is not None and before.step is not step:
                raise ValueError(f'"{key}" is another step of this job: {before.step.title}')
            if before is None:
                self._nodes[key] = _Node(step, served, inputs)
            else:
                self._nodes[key] = replace(before, needs=served, inputs=inputs)
            self._update()
        self._tell()
        return key

    def payload(self, key: str) -> Payload:
        """The present payload of a step."""
        with self.lock:
            return self._nodes[key].payload

    def payloads(self) -> dict[str, Payload]:
        """The present payloads of all steps by key, upstream first."""
        return self.now()[1]

    def now(self) -> tuple[int, dict[str, Payload]]:
        """The present revision and its payloads."""
        with self.lock:
            return self.revision, {key: node.payload for key, node in self._nodes.items()}

    # ---- files -----------------------------------------------------------------------------------------------------

    def load(self) -> None:
        """Read the files from disk; what is unsaved here is given up, but can be had again by undoing."""
        with self.lock:
            before, self._unsaved = self.files, False
            try:
                self.files, self._problem = self.folder.load(), ""
                table = self.files.reading.table
                self.status = Status("saved", f"{table.file}: as read from disk at {clock()}")
                if before is not None and before.reading.table.content() != table.content():
                    self.history.did(f"{table.file} loaded from disk", before.reading.table)
            except InputError as error:
                self._problem = str(error)
                self.status = Status("error", self._problem)
            self._update()
        self._tell()

    def edit(self, change: Callable[[StoreyReading], TextTable], what: str = "edit") -> None:
        """Edit the storey table and write it through to its file.

        Parameters
        ----------
        change : callable
            From the table as read to the table wanted.
        what : str
            The edit in words, for who undoes it.

        Raises
        ------
        InputError
            The edit itself is refused; nothing has changed. A cell that it leaves wrong is no such case: it is saved,
            and the storeys say what is wrong.
        """
        with self.lock:
            before = self._read().reading.table
            self._save(change(self._read().reading), overwrite=False)
            if self._read().reading.table.content() != before.content():
                self.history.did(what, before)
        self._tell()

    def undo(self) -> None:
        """Take back the last edit of the storey table (InputError where none is remembered)."""
        with self.lock:
            self._save(self.history.back(self._read().reading.table), overwrite=False)
        self._tell()

    def redo(self) -> None:
        """Do again what was undone last (InputError where there is nothing)."""
        with self.lock:
            self._save(self.history.forth(self._read().reading.table), overwrite=False)
        self._tell()

    def set_value(self, key: str | Sequence[str | int], value: Value | None) -> None:
        """Set a key of the job card and write it through, comments kept; None takes the key out.

        Parameters
        ----------
        key : str or sequence
            Dotted key, such as "job.revision" or 'stiffness."half cracked".factor', or its parts.
        value : str, bool, int, float, date, mapping of these, or None
            Its value, a mapping as a table.

        Raises
        ------
        InputError
            The card would not be valid, or was changed on disk; nothing has changed.
        """
        with self.lock:
            files = self._read()
            self.files = self.folder.save_card(files, with_value(files.card_text, key, value))
            self._update()
        self._tell()

    def edit_both(self, change: Callable[[JobFiles], tuple[TextTable, Values]]) -> None:
        """Edit the storey table and set keys of the job card: both are written through, or neither.

        Parameters
        ----------
        change : callable
            From the files as read to the table wanted and the values wanted, by key as in `set_value`.

        Raises
        ------
        InputError
            The card would not be valid, or a file is not saved or was changed on disk; nothing has changed.
        """
        with self.lock:
            files = self._read()
            if self.status.kind != "saved":
                raise InputError("", "", self.status.text, "put that right first")
            (table, values), text = change(files), files.card_text
            for key, value in values.items():
                text = with_value(text, key, value)
            self.files = self.folder.save_both(files, table, text)
            if table.content() != files.reading.table.content():
                self.history.did("adopted", files.reading.table)
            self.status = Status("saved", f"saved to {table.file} at {clock()}")
            self._update()
        self._tell()

    def keep(self) -> None:
        """Write the table in memory over what is on disk, which undoing brings back; what else changed there is read."""
        with self.lock:
            theirs = self._on_disk()
            self._save(self._read().reading.table, overwrite=True)
            if theirs is not None:
                self.history.did("keeping what was here", theirs)
            others = not self._unsaved and self.folder.changed_on_disk(self._read())
        if others:
            self.load()
        else:
            self._tell()

    def differences(self) -> tuple[Difference, ...]:
        """What differs between the storey table here and on disk; nothing where there is no table on disk."""
        with self.lock:
            theirs = self._on_disk()
            return () if theirs is None else differences(self._read().reading.table, theirs)

    def look(self) -> None:
        """See whether somebody else changed the files on disk, and say so."""
        with self.lock:
            if self.files is None or self.status.kind == "conflict":
                return
            changed = self.folder.changed_on_disk(self.files)
            if not changed:
                return
            self.status = Status("conflict", f"{' and '.join(changed)}: changed on disk since read here")
            self._update()
        self._tell()

    def _on_disk(self) -> TextTable | None:
        try:
            return self.folder.storeys_on_disk()
        except InputError:
            return None  # gone, or no table: there is nothing to compare with

    def _read(self) -> JobFiles:
        if self.files is None or self._problem:
            raise InputError("", "", self._problem or "the job can't be read", "put that right first")
        return self.files

    def _save(self, table: TextTable, overwrite: bool) -> None:
        files = self._read()
        try:
            self.files = self.folder.save_storeys(files, table, overwrite)
            self.status, self._unsaved = Status("saved", f"saved to {table.file} at {clock()}"), False
        except NotSavedError as error:
            self.files, self._unsaved = files.with_storeys(table), True
            self.status = Status("conflict" if isinstance(error, ConflictError) else "error", str(error))
        self._update()

    # ---- one pass --------------------------------------------------------------------------------------------------

    def _update(self) -> None:
        """Bring every step up to date, upstream first; the lock is held."""
        self.revision += 1
        self._newer.set()
        card = None if self.files is None else self.files.card
        if card is not None:  # what the storeys are made from is to be traced
            for key, feeds in ((MASSES, card.masses), (STIFFNESSES, card.model.members)):
                if feeds is not None:
                    self._nodes.setdefault(key, _Node(STEPS[key], {}, None))
        for key, node in self._nodes.items():
            upstream = tuple(self._nodes[k].payload for k in node.needs.values())
            if key in FROM_FILES:
                node.payload = self._from_files(key, node)
                continue
            held_up = next((p for p in upstream if p["state"] != "ok"), None)
            if held_up is not None:
                why = held_up["why"]
                if held_up["state"] == "refused":
                    why = f"waits for {STEPS[held_up['kind']].title.lower()}: {why}"
                node.payload = unfinished(node.step, node.needs, "waiting", why, node.inputs)
            elif not self._current(node, upstream):
                served = tuple(done(STEPS[p["kind"]], p) for p in upstream)
                node.payload = _calculated(node, served)
            node.upstream = upstream

    def _current(self, node: _Node, upstream: tuple[Payload, ...]) -> bool:
        """Whether a step's payload was calculated from these very inputs."""
        same = len(upstream) == len(node.upstream) and all(a is b for a, b in zip(upstream, node.upstream, strict=True))
        before = node.payload
        return same and bool(before) and before["needs"] == node.needs and before["inputs"] == to_json(node.inputs)

    def _from_files(self, key: str, node: _Node) -> Payload:
        """The payload of a step whose inputs are the job's files."""
        try:
            node.inputs = inputs_from_files(key, self.files, self._problem, self.status)
        except RefusedError as error:
            return unfinished(node.step, {}, "refused", str(error))
        except WaitsError as error:
            return unfinished(node.step, {}, "waiting", str(error))
        if node.payload and node.payload["state"] == "ok" and node.payload["inputs"] == to_json(node.inputs):
            return node.payload
        return _calculated(node, ())

    # ---- listeners -------------------------------------------------------------------------------------------------

    def listen(self, listener: Listener) -> None:
        """Tell `listener` of every change from now on."""
        with self.lock:
            self._listeners.append(listener)

    def leave(self, listener: Listener) -> None:
        """Tell `listener` no more."""
        with self.lock:
            self._listeners = [other for other in self._listeners if other is not listener]

    def _tell(self) -> None:
        """Show the newest state everywhere; a pass that falls behind gives way to the next."""
        with self.telling:
            while True:
                with self.lock:
                    revision, listeners = self.revision, list(self._listeners)
                    self._newer.clear()
                if self._told == revision:
                    return
                for listener in listeners:
                    listener.show_numbers()
                self._newer.wait(self.rest)
                for listener in listeners:
                    if self.revision != revision:
                        break
                    listener.show_figures()
                else:
                    self._told = revision


def _calculated(node: _Node, upstream: tuple[Done, ...]) -> Payload:
    """The payload of a step; refused, not left as it was, where its numbers leave the range of the machine."""
    try:
        with np.errstate(all="ignore"):  # what isn't finite is refused
            return calculated(node.step, node.needs, node.inputs, upstream)
    except (ArithmeticError, ValueError) as error:
        return unfinished(
            node.step, node.needs, "refused", f"can't be calculated from these numbers: {error}", node.inputs
        )
