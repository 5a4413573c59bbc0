"""What every block is: a view of a step of a job, shown in a cell by a live widget and its static twin."""

from __future__ import annotations

import os
from collections.abc import Mapping
from typing import Any, ClassVar

from IPython.core.getipython import get_ipython
from IPython.display import DisplayHandle, display

from calcsheet.blocks.twin import bundle, held_up, images
from calcsheet.blocks.widgets import LiveWidget, Message, ViewWidget, front
from calcsheet.render.figure import Drawing
from calcsheet.render.registry import VIEWS
from calcsheet.render.view import Rendered, View
from calcsheet.steps.graph import Job
from calcsheet.steps.serial import fingerprint, to_json
from calcsheet.steps.step import Payload

STATIC = "CALCSHEET_STATIC"
"""Environment variable: "1" leaves the live widgets out, as when a record is issued."""


REST = 0.06
"""Time [s] that the page is given to show the numbers before the processor goes to drawing figures."""


class Block:
    """A view of a step.

    Parameters
    ----------
    job : Job
        The job.
    key : str
        Key of the step in it.
    asked : object, optional
        The inputs that this block asked the step for; none where it only shows the step.
    **options
        Options of the view.
    """

    view_name: ClassVar[str]

    def __init__(self, job: Job, key: str, asked: object = None, **options: Any) -> None:
        self.job = job
        self.key = key
        self.asked = "" if asked is None else fingerprint(to_json(asked))
        self.view: View = VIEWS[self.view_name]
        self.options = self.view.chosen(options)

    @property
    def payload(self) -> Payload:
        """The step's present payload: state, inputs, result, worked lines, cautions, evidence."""
        return self.job.payload(self.key)

    def __repr__(self) -> str:
        payload = self.payload
        return f"{type(self).__name__}({payload['state']}{': ' + payload['why'] if payload['why'] else ''})"

    def shown(self) -> Shown:
        """A new display of this block."""
        return Shown(self)

    def _ipython_display_(self) -> None:
        cell, run = _running()
        if cell not in _SHOWN or _SHOWN[cell][0] != run:
            for before in _SHOWN.pop(cell, (run, []))[1]:
                before.close()
            _SHOWN[cell] = (run, [])
        shown = self.shown()
        _SHOWN[cell][1].append(shown)
        shown.open()


def must_be(block: Block, given: object, kind: type[Block]) -> None:
    """Refuse (TypeError) what a block can't be built on."""
    if not isinstance(given, kind):
        got = type(given).__name__
        article = "an" if got[0] in "AEIOUaeiou" else "a"
        raise TypeError(f"{type(block).__name__}: got {article} {got}; must be a {kind.__name__}")


class Shown:
    """One display of a block in one cell; a `Listener` of the job.

    Parameters
    ----------
    block : Block
        The block.
    """

    def __init__(self, block: Block) -> None:
        self.block = block
        self.options = dict(block.options)  # the live view's own; the twin keeps the block's
        self.widget: LiveWidget | None = None
        self.handle: DisplayHandle | None = None
        self.source = fingerprint(_source())
        self._drawn: dict[object, tuple[tuple[Payload, ...], tuple[Drawing, ...]]] = {}

    def open(self) -> None:
        """Show widget and twin below each other, and listen to the job from now on."""
        with self.block.job.telling:
            if os.environ.get(STATIC) != "1":
                self.block.job.rest = REST
                self.widget = self.make_widget()
                self.show_numbers()
                display(self.widget)
            self.show_figures()
            self.block.job.listen(self)

    def close(self) -> None:
        """Give up widget and listening: the cell shows another display now."""
        self.block.job.leave(self)
        if self.widget is not None:
            self.widget.close()

    # ---- live ------------------------------------------------------------------------------------------------------

    def make_widget(self) -> LiveWidget:
        return ViewWidget(self.answer, block=self.block.view_name)

    def answer(self, message: Message) -> str | None:
        """Do what the page asks; the sentence that says why not, where it can't be done."""
        if message["op"] != "choose":
            return f"{message['op']}: not known to this block"
        with self.block.job.telling:
            try:
                self.options = self.block.view.chosen(self.options | {message["key"]: message["value"]})
            except ValueError as error:
                return str(error)
            self.show_numbers()
            revision, payloads = self.block.job.now()
            if payloads[self.block.key]["state"] == "ok":
                self.show_live_figures(self.drawn(payloads, self.options), revision)
        return None

    def show_numbers(self) -> None:
        if self.widget is None:
            return
        revision, payloads = self.block.job.now()
        payload = payloads[self.block.key]
        choices = [
            {
                "key": c.key,
                "label": c.label,
                "value": self.options[c.key],
                "options": [{"value": v, "label": text} for v, text in c.options.items()],
            }
            for c in self.block.view.choices
        ]
        ok = payload["state"] == "ok"
        with self.widget.hold_sync():  # one message a block: the page takes longest over their number
            self.widget.set_trait("note", {} if ok else {"kind": payload["state"], "text": payload["why"]})
            if ok:
                self.widget.set_trait("choices", choices)
                self.widget.set_trait("html", self.rendered(payloads, self.options).html)
            self.widget.set_trait("revision", revision)
        self.widget.answered()

    def show_live_figures(self, drawings: tuple[Drawing, ...], revision: int) -> None:
        if self.widget is not None:
            self.widget.set_trait(
                "figures", [{"name": d.name, "alt": d.alt, "svg": d.svg, "revision": revision} for d in drawings]
            )

    # ---- twin ------------------------------------------------------------------------------------------------------

    def show_figures(self) -> None:
        block = self.block
        revision, payloads = block.job.now()
        payload = payloads[block.key]
        if payload["state"] == "ok" or not block.view.printed:
            html = self.rendered(payloads, block.options).html + images(self.drawn(payloads, block.options))
            self.show_live_figures(self.drawn(payloads, self.options), revision)
        else:
            html = held_up(payload)
        carried = self.carried(payloads)
        carried |= {"source": self.source, "asked": block.asked, "covered": block.view.covers(payloads, block.key)}
        self.keep(bundle(block.view, block.key, payload, block.options, html, revision=revision, **carried))

    def carried(self, payloads: Mapping[str, Payload]) -> dict[str, Any]:
        """What this twin carries for the whole notebook."""
        return {}

    def keep(self, data: dict[str, Any]) -> None:
        if self.handle is None:
            self.handle = display(data, raw=True, display_id=True)
        else:
            self.handle.update(data, raw=True)

    def rendered(self, payloads: Mapping[str, Payload], options: Mapping[str, Any]) -> Rendered:
        return self.block.view.render(payloads, self.block.key, options)

    def drawn(self, payloads: Mapping[str, Payload], options: Mapping[str, Any]) -> tuple[Drawing, ...]:
        """The figures; those of before where nothing that they show has changed."""
        chosen = tuple(sorted(options.items()))
        shows = payloads["card"], payloads[self.block.key]  # each stays the same object until it changes
        before, drawings = self._drawn.get(chosen, ((), ()))
        if tuple(map(id, before)) != tuple(map(id, shows)):
            drawings = self.rendered(payloads, options).draw()
            self._drawn[chosen] = shows, drawings
        return drawings


class ShownCard(Shown):
    """The job card's display: its twin carries the payloads of the whole job, and the style sheet of all twins."""

    def carried(self, payloads: Mapping[str, Payload]) -> dict[str, Any]:
        return {"style": front("calcsheet.css", "twin.css"), "payloads": payloads}


_SHOWN: dict[object, tuple[object, list[Shown]]] = {}
"""What each cell shows, and the run that showed it."""


def _running() -> tuple[object, object]:
    """The notebook cell that is running, by its id where the front end tells it, and this run of it."""
    shell = get_ipython()
    if shell is None:
        return None, None
    kernel = getattr(shell, "kernel", None)
    parent = (getattr(shell, "parent_header", None) if kernel is None else kernel.get_parent("shell")) or {}
    cell = parent.get("metadata", {}).get("cellId") or shell.execution_count
    return cell, parent.get("header", {}).get("msg_id") or shell.execution_count


def _source() -> str:
    """Source of the cell that is running."""
    shell = get_ipython()
    return "" if shell is None else str(shell.history_manager.input_hist_raw[-1]).rstrip("\n")
