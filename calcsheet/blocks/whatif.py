"""A what-if on the whole model, as a block on screen only: nothing is saved until it is adopted."""

from __future__ import annotations

import threading
from collections.abc import Mapping
from dataclasses import asdict
from typing import Any

from traitlets import Dict, Float, List, Unicode

from calcsheet.blocks.block import Block, Shown, must_be
from calcsheet.blocks.blocks import ModeSolver
from calcsheet.blocks.widgets import LiveWidget, Message, front
from calcsheet.core.errors import ModelError
from calcsheet.core.whatif import Answered
from calcsheet.job.adopt import Adoption, adoption, multiplied_columns
from calcsheet.job.errors import InputError
from calcsheet.job.folder import JobFiles
from calcsheet.job.table import TextTable
from calcsheet.render.view import system_of
from calcsheet.render.whatif import NOTICE, compared, in_short
from calcsheet.steps.graph import Values
from calcsheet.steps.step import Payload
from calcsheet.steps.whatif import LEAST, MOST, NAMES, Asked, Factors, asked, shown_by

SAVED = Factors()
"""The saved model's own factors."""


class WhatIfWidget(LiveWidget):
    """Factors that are set, and what the model then answers.

    Messages: ``factors`` (mass, x, y) and ``adopt`` (sentence: the one shown, which must still be what would change).

    Attributes
    ----------
    fields : list of dict
        {key, label}: the factors that can be set, ``least`` to ``most``.
    factors : dict
        {mass, x, y}: those that ``html`` is of.
    html, short : str
        The answers as tables, and in one sentence.
    adopting : str
        The sentence that says what adopting changes; empty where there is nothing to adopt.
    done : str
        What was adopted last.
    notice : str
        That this is on screen only.
    note : dict
        ``kind`` and ``text`` that stand in place of the answers.
    """

    _esm = front("link.js", "whatif.js")
    _css = front("calcsheet.css")

    fields = List(Dict()).tag(sync=True)
    least = Float(LEAST).tag(sync=True)
    most = Float(MOST).tag(sync=True)
    factors = Dict().tag(sync=True)
    html = Unicode().tag(sync=True)
    short = Unicode().tag(sync=True)
    adopting = Unicode().tag(sync=True)
    done = Unicode().tag(sync=True)
    notice = Unicode(NOTICE).tag(sync=True)
    note = Dict().tag(sync=True)


class WhatIf(Block):
    """What if every mass, or every stiffness in a direction, were another.

    The saved inputs stay as they are until the factors are adopted on the page: the mass (or weight) column of storeys.csv
    is then multiplied, and the factor of the stiffness set that the modes use, which is the one that serves forces unless
    the solver was given another.

    Parameters
    ----------
    modes : ModeSolver
        The modes asked about.

    Examples
    --------
    >>> WhatIf(modes)  # doctest: +SKIP
    """

    view_name = "what if"

    def __init__(self, modes: ModeSolver) -> None:
        must_be(self, modes, ModeSolver)
        super().__init__(modes.job, modes.key)

    def shown(self) -> Shown:
        return ShownWhatIf(self)


class ShownWhatIf(Shown):
    """A display of a what-if, with factors of its own."""

    def __init__(self, block: Block) -> None:
        super().__init__(block)
        self.factors = SAVED
        self.done = ""
        self._turn = threading.RLock()  # one answer at a time; never held while the job is changed
        self._read: tuple[Payload, ...] = ()
        self._saved: tuple[Asked, tuple[Answered, ...]] | None = None

    def make_widget(self) -> LiveWidget:
        return WhatIfWidget(self.answer, block=self.block.view_name)

    def answer(self, message: Message) -> str | None:
        try:
            match message["op"]:
                case "factors":
                    factors = Factors(*(message.get(key, 1.0) for key in NAMES))
                    with self._turn:
                        self.factors, self.done = factors, ""
                        self.show_numbers()
                case "adopt":
                    self._adopt(message["sentence"])
                case op:
                    return f"{op}: not known to this block"
        except (ValueError, InputError) as error:
            return str(error)
        return None

    def _adopt(self, sentence: str) -> None:
        """Put the factors into the files, where that changes what the sentence says and nothing else."""
        factors = self.factors

        def change(files: JobFiles) -> tuple[TextTable, Values]:
            found = self._adoption(self.block.payload, files, factors)
            if not sentence or _said(found) != sentence:
                raise ValueError("nothing adopted: what would change is no longer what was said; adopt again")
            self.done = f"Adopted: {found.changes}. The factors are back at 1."
            self.factors = SAVED  # before the listeners hear of the new model, this one among them
            return multiplied_columns(files.reading, found.columns), found.values

        try:
            self.block.job.edit_both(change)
        except InputError:
            self.factors, self.done = factors, ""
            raise

    def _adoption(self, payload: Payload, files: JobFiles, factors: Factors) -> Adoption:
        if payload["state"] != "ok":
            raise ValueError(f"nothing adopted: {payload['why']}")
        result = payload["result"]
        along = {model["name"]: factors.along(model["name"]) for model in result["models"]}
        return adoption(files, result["stiffness"], factors.mass, along)

    def show_numbers(self) -> None:
        if self.widget is None:
            return
        with self._turn:
            with self.block.job.lock:
                (revision, payloads), files = self.block.job.now(), self.block.job.files
            payload, factors = payloads[self.block.key], self.factors
            note = {"kind": payload["state"], "text": payload["why"]}
            shown: dict[str, Any] = {"html": "", "short": "", "adopting": ""}
            if payload["state"] == "ok" and files is not None:
                try:
                    shown = self._answers(payloads, factors)
                    note = {}
                    shown["adopting"] = _said(self._adoption(payload, files, factors))
                except InputError as error:  # answered, but not to be adopted
                    note = {"kind": "refused", "text": str(error)}
                except (ModelError, ArithmeticError) as error:  # such as a period that the spectrum does not reach
                    note = {"kind": "refused", "text": f"With these factors: {error}"}
            with self.widget.hold_sync():
                for name, value in shown.items():
                    self.widget.set_trait(name, value)
                self.widget.set_trait("note", note)
                self.widget.set_trait("done", self.done)
                self.widget.set_trait("factors", asdict(factors))
                self.widget.set_trait("revision", revision)

    def _answers(self, payloads: Mapping[str, Payload], factors: Factors) -> dict[str, Any]:
        """What the multiplied model answers beside the saved one, which is solved again only where it has changed."""
        read = shown_by(payloads, self.block.key)
        if self._saved is None or tuple(map(id, read)) != tuple(map(id, self._read)):
            model = asked(payloads, self.block.key)
            self._read, self._saved = read, (model, model.answered())
        model, saved = self._saved
        now = model.answered(factors)
        return {
            "fields": [{"key": k, "label": NAMES[k]} for k in ("mass", *model.directions)],
            "html": compared(saved, now, factors, model.waits, system_of(payloads)),
            "short": in_short(saved, now),
        }

    def show_live_figures(self, drawings: Any, revision: int) -> None:
        """It has none."""


def _said(found: Adoption) -> str:
    """What stands beside the button that adopts; empty where nothing would change."""
    return f"Adopting changes {found.changes}." if found.changes else ""
