"""What the periods would be with all masses or stiffnesses multiplied: a question, no part of the calculation.

Nothing is saved until it is adopted, and nothing of it goes into a record.
"""

from __future__ import annotations

from collections.abc import Mapping

from traitlets import Dict, Unicode

from calcsheet.blocks.block import Block, Shown, must_be
from calcsheet.blocks.blocks import ModeSolver
from calcsheet.blocks.widgets import LiveWidget, Message, front
from calcsheet.core.model import models_of
from calcsheet.core.modes import modes_of
from calcsheet.core.scaled import scaled
from calcsheet.core.storeys import Storeys
from calcsheet.job import edits
from calcsheet.job.errors import InputError
from calcsheet.render.numbers import decimals_for, text
from calcsheet.render.table import Column, table

RANGE = (0.5, 2.0)
"""Factors that can be asked for."""
SHOWN = 6
"""Modes listed in each direction, at most."""
AS_SAVED = {"mass": 1.0, "stiffness": 1.0}


class WhatIf(Block):
    """Periods under a factor on all masses and one on all stiffnesses, by two sliders.

    Parameters
    ----------
    modes : ModeSolver
        The modes asked about.

    Examples
    --------
    >>> WhatIf(modes)  # doctest: +SKIP
    """

    view_name = "modes"

    def __init__(self, modes: ModeSolver) -> None:
        must_be(self, modes, ModeSolver)
        super().__init__(modes.job, modes.key)

    def shown(self) -> Shown:
        return ShownWhatIf(self)


class WhatIfWidget(LiveWidget):
    """Two factors, the numbers under them, and buttons to adopt them.

    Messages: ``factors`` (mass, stiffness), ``adopt`` (what: mass or stiffness).

    Attributes
    ----------
    factors : dict
        ``mass`` and ``stiffness``.
    html : str
        The periods, as saved and under the factors.
    note : str
        Why there are none.
    """

    _esm = front("link.js", "whatif.js")
    _css = front("calcsheet.css")

    factors = Dict().tag(sync=True)
    html = Unicode().tag(sync=True)
    note = Unicode().tag(sync=True)


class ShownWhatIf(Shown):
    """A display of the question: live alone, without a twin."""

    def __init__(self, block: Block) -> None:
        super().__init__(block)
        self.factors = dict(AS_SAVED)

    def make_widget(self) -> LiveWidget:
        return WhatIfWidget(self.answer, block="what if")

    def answer(self, message: Message) -> str | None:
        try:
            if message["op"] == "factors":
                asked = {key: float(message[key]) for key in AS_SAVED}
                if not all(RANGE[0] <= value <= RANGE[1] for value in asked.values()):
                    return f"factors must be from {RANGE[0]} to {RANGE[1]}"
                self.factors = asked
            elif message["op"] == "adopt" and message["what"] in AS_SAVED:
                factor, self.factors = self.factors[message["what"]], self.factors | {message["what"]: 1.0}
                try:
                    self.adopt(message["what"], factor)
                except InputError:
                    self.factors[message["what"]] = factor
                    raise
            else:
                return f"{message['op']}: not known to this block"
        except (InputError, ValueError) as error:
            return str(error)
        with self.block.job.telling:
            self.show_numbers()
        return None

    def adopt(self, what: str, factor: float) -> None:
        """Write the masses to the table, in one edit, or the factor of the stiffness set to the job card."""
        job = self.block.job
        if what == "mass":
            job.edit(lambda reading: edits.multiply(reading, ("mass", "weight"), factor), f"masses × {factor:g}")
            return
        name = self.block.payload["result"]["stiffness"]
        card = job.payload("card")["inputs"]
        given = card["stiffness"][name]
        if given.get("own"):
            where = f"stiffness.{name}"
            raise InputError(
                "job.toml", where, "has stiffnesses of its own", "multiply its columns in the table instead"
            )
        present = [key for key in ("factor", "factor_x", "factor_y") if given.get(key) is not None] or ["factor"]
        for key in present:
            job.set_value(["stiffness", name, key], float(f"{(given.get(key) or 1.0) * factor:.12g}"))

    def show_numbers(self) -> None:
        if self.widget is None:
            return
        revision, payloads = self.block.job.now()
        payload = payloads[self.block.key]
        with self.block.job.lock:
            files = self.block.job.files
        storeys = None if files is None or payload["state"] != "ok" else files.reading.storeys
        with self.widget.hold_sync():
            self.widget.set_trait("factors", dict(self.factors))
            self.widget.set_trait("note", "" if storeys is not None else f"Waits: {payload['why']}")
            shown = "" if storeys is None else periods(storeys, payload["result"]["stiffness"], self.factors)
            self.widget.set_trait("html", shown)
            self.widget.set_trait("revision", revision)
        self.widget.done()

    def show_figures(self) -> None:
        """There are none, and no twin: a question is no part of the calculation."""


def periods(storeys: Storeys, stiffness: str, factors: Mapping[str, float]) -> str:
    """HTML of the periods of a building as saved and under factors.

    Parameters
    ----------
    storeys : Storeys
        The building.
    stiffness : str
        The stiffness set.
    factors : mapping of str to float
        Of "mass" and "stiffness".
    """
    asked = models_of(scaled(storeys, factors["mass"], factors["stiffness"]), stiffness)
    parts = []
    for now, then in zip(models_of(storeys, stiffness), asked, strict=True):
        keep = min(SHOWN, now.size)
        saved, under = (modes_of(model, keep).period.tolist() for model in (now, then))
        decimals = decimals_for([*saved, *under], 4)
        columns = [
            Column("mode", tuple(str(i + 1) for i in range(keep))),
            Column("T as saved [s]", tuple(text(value, decimals) for value in saved)),
            Column("T if [s]", tuple(text(value, decimals) for value in under)),
            Column("T if / T", tuple(text(b / a, 3) for a, b in zip(saved, under, strict=True))),
        ]
        parts.append(table(columns, kind="values", caption=f"Periods in {' and '.join(now.direction)}"))
    return "".join(parts)
