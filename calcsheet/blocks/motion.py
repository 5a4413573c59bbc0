"""Mode shapes that move, as a block on screen only."""

from __future__ import annotations

from typing import Any

from traitlets import Dict

from calcsheet.blocks.block import Block, Shown, must_be
from calcsheet.blocks.blocks import ModeSolver
from calcsheet.blocks.widgets import LiveWidget, front
from calcsheet.render.motion import motion


class MotionWidget(LiveWidget):
    """Mode shapes drawn and moved by the page, which sends no message but pings.

    Attributes
    ----------
    motion : dict
        As `calcsheet.render.motion.motion` gives it; empty where there is a note.
    note : dict
        ``kind`` and ``text`` that stand in place of the drawing.
    """

    _esm = front("link.js", "motion.js")
    _css = front("calcsheet.css")

    motion = Dict().tag(sync=True)
    note = Dict().tag(sync=True)


class ModeMotion(Block):
    """Mode shapes moving between their extremes: mode, direction and speed are chosen on the page.

    It is on screen only; `ModePlot` shows the still shapes, there and in the record.

    Parameters
    ----------
    modes : ModeSolver
        The modes.

    Examples
    --------
    >>> ModeMotion(modes)  # doctest: +SKIP
    """

    view_name = "mode motion"

    def __init__(self, modes: ModeSolver) -> None:
        must_be(self, modes, ModeSolver)
        super().__init__(modes.job, modes.key)

    def shown(self) -> Shown:
        return ShownMotion(self)


class ShownMotion(Shown):
    """A display of moving mode shapes."""

    def make_widget(self) -> LiveWidget:
        return MotionWidget(self.answer, block=self.block.view_name)

    def show_numbers(self) -> None:
        if self.widget is None:
            return
        revision, payloads = self.block.job.now()
        payload = payloads[self.block.key]
        ready = payload["state"] == "ok"
        with self.widget.hold_sync():
            self.widget.set_trait("note", {} if ready else {"kind": payload["state"], "text": payload["why"]})
            self.widget.set_trait("motion", motion(payloads, self.block.key) if ready else {})
            self.widget.set_trait("revision", revision)

    def show_live_figures(self, drawings: Any, revision: int) -> None:
        """The page draws."""
