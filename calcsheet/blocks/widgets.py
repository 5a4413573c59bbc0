"""The two widgets under the blocks: a table that is typed in and a view that is read.

They carry text between Python and the page and know nothing of storeys: a block fills the traits, and answers what
the engineer does through the ``answer`` function that it gives.
"""

from __future__ import annotations

import threading
from collections.abc import Callable, Mapping
from importlib.resources import files
from typing import Any

from anywidget import AnyWidget
from traitlets import Dict, Int, List, Unicode

Message = Mapping[str, Any]
Answer = Callable[[Message], str | None]

_FRONT = files("calcsheet.blocks") / "front"


def front(*names: str) -> str:
    """Text of the named files of the front end, one after another.

    Parameters
    ----------
    *names : str
        File names in ``calcsheet/blocks/front``.

    Returns
    -------
    str
        Their text; a static twin carries that of ``calcsheet.css`` and ``twin.css``.
    """
    return "\n".join((_FRONT / name).read_text("utf-8") for name in names)


class LiveWidget(AnyWidget):
    """What both widgets share: the block's name, its revision, and an answer to every message.

    Parameters
    ----------
    answer : callable
        Takes the page's message, a mapping with its ``op``, and returns None when it is done, or the sentence that says
        why not. It runs on the thread that brings the message, perhaps while a cell runs. It sets the traits
        before it returns, so that the page has the new state when it hears that the message is done.
    **traits
        First values of the traits.
    """

    block = Unicode().tag(sync=True)
    revision = Int().tag(sync=True)

    def __init__(self, answer: Answer, **traits: Any) -> None:
        super().__init__(**traits)
        self._answer = answer
        self._asked = threading.local()  # what the thread's message is, until it is answered
        self.on_msg(self._receive)

    def _receive(self, _widget: object, message: Message, _buffers: object) -> None:
        if message["op"] == "ping":
            self.send({"op": "pong", "n": message["n"]})
            return
        self._asked.seq = message["seq"]
        why_not: str | None = "this failed inside the program; its log has the traceback"
        try:
            why_not = self._answer(message)
        finally:
            self._acknowledge(why_not)

    def answered(self) -> None:
        """Tell the page already now that the message which this thread answers is done: what is still to do is drawing."""
        self._acknowledge(None)

    def _acknowledge(self, why_not: str | None) -> None:
        seq, self._asked.seq = getattr(self._asked, "seq", None), None
        if seq is not None:
            self.send({"op": "ack", "seq": seq, "ok": why_not is None, "message": why_not or ""})

    def __repr__(self) -> str:
        # Stored in the notebook as the text of the widget's output.
        return f"{type(self).__name__}({self.block})"


class TableWidget(LiveWidget):
    """A table with an input in each editable cell.

    Messages: ``set`` (row, key, text), ``paste`` (the same, with the size of the range pasted into: rows, columns),
    ``clear`` and ``fill`` (row, last: the first and last row; keys), ``insert`` (row: below it; None: at the top; count),
    ``delete`` (row, last), ``move`` (row, last, by: -1 or 1), ``undo``, ``redo``, ``load`` and ``keep`` (the answers to a
    conflict), ``look`` (whether the file was changed by somebody else; sent when the engineer comes to the table or back
    to the page).

    Attributes
    ----------
    table : dict
        ``columns``: list of {key, heading, editable, align: left or right}; ``rows``: list of {id, cells: {key: text},
        errors: {key: message}}; ``totals``: {key: text}; optional ``caption`` and ``item``, the word for a row.
        A row keeps its id for as long as the widget lives.
    status : dict
        ``kind``: saved, changed, conflict, error or waiting; ``text``.
    history : dict
        ``undo`` and ``redo``: what they would take back or do again, in words; empty where there is nothing.
    differences : dict
        ``cells``: list of {row, column, here, there}, what differs from the file in a conflict; ``more``: how many beside.
    """

    _esm = front("link.js", "cell.js", "range.js", "words.js", "tools.js", "hands.js", "table.js")
    _css = front("calcsheet.css")

    table = Dict().tag(sync=True)
    status = Dict().tag(sync=True)
    history = Dict().tag(sync=True)
    differences = Dict().tag(sync=True)


class ViewWidget(LiveWidget):
    """Choices, then words or numbers, then figures.

    Messages: ``choose`` (key, value).

    Attributes
    ----------
    html : str
        Numbers and tables, from our own renderers, escaped there.
    figures : list of dict
        {name, alt, svg}, optional ``revision``: a figure of an older revision than the widget's is shown as being redrawn.
    note : dict
        ``kind`` and ``text``; with ``waiting`` or ``refused`` the words stand in place of numbers and figures.
    choices : list of dict
        {key, label, value, options: [{value, label}]}.
    """

    _esm = front("link.js", "view.js")
    _css = front("calcsheet.css")

    html = Unicode().tag(sync=True)
    figures = List(Dict()).tag(sync=True)
    note = Dict().tag(sync=True)
    choices = List(Dict()).tag(sync=True)
