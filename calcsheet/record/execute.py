"""A notebook executed from the top in a fresh kernel of this very environment."""

from __future__ import annotations

import os
import sys
import tempfile
from collections.abc import Callable
from pathlib import Path
from typing import Any

from jupyter_client.kernelspec import KernelSpec, KernelSpecManager
from jupyter_client.manager import AsyncKernelManager
from nbclient import NotebookClient
from nbclient.exceptions import CellExecutionError, DeadKernelError
from nbformat import NotebookNode

from calcsheet.blocks.block import STATIC
from calcsheet.record.errors import RecordError

Progress = Callable[[int, int], None]
"""Told the cell, from 1, that starts and the number of cells."""
QUOTED = 3
"""Lines quoted of a cell that fails."""

ISSUING = "CALCSHEET_ISSUING"
"""Environment variable of the kernel that executes a notebook to issue it: a cell of it can't issue it again."""


class _Here(KernelSpecManager):
    """Every kernel name means this environment's Python: a foreign one in the notebook is not followed."""

    def get_kernel_spec(self, kernel_name: str) -> KernelSpec:
        command = [sys.executable, "-m", "ipykernel_launcher", "-f", "{connection_file}"]
        return KernelSpec(argv=command, language="python", display_name="Python")


class _Manager(AsyncKernelManager):
    """Starts a kernel that nobody else on the machine can reach, where the system has sockets as files."""

    def __init__(self, **traits: Any) -> None:
        super().__init__(**traits | {"kernel_spec_manager": _Here()})
        if os.name == "posix":
            self._sockets = tempfile.TemporaryDirectory(prefix="calcsheet-")
            self.transport, self.ip = "ipc", str(Path(self._sockets.name) / "kernel")


def execute(notebook: NotebookNode, folder: Path, progress: Progress = lambda cell, cells: None) -> None:
    """Execute a notebook in place, in a fresh kernel with the job folder as its working directory.

    Parameters
    ----------
    notebook : NotebookNode
        The notebook; its outputs are replaced.
    folder : Path
        The job folder.
    progress : callable, optional
        Told of every cell before it runs.

    Raises
    ------
    RecordError
        A cell fails: the message quotes it.
    """
    code = [i for i, cell in enumerate(notebook.cells) if cell.cell_type == "code"]
    client = NotebookClient(
        notebook,
        kernel_manager_class=_Manager,
        timeout=None,
        store_widget_state=False,
        record_timing=False,
        resources={"metadata": {"path": str(folder)}},
        on_cell_start=lambda cell, cell_index: (
            progress(code.index(cell_index) + 1, len(code)) if cell_index in code else None
        ),
    )
    try:
        client.execute(env={**os.environ, STATIC: "1", ISSUING: "1"})
    except CellExecutionError:
        raise RecordError(_failure(notebook)) from None
    except DeadKernelError:
        raise RecordError("the kernel died while the notebook was executed") from None


def _failure(notebook: NotebookNode) -> str:
    """What failed, in one sentence that quotes the cell; numbers count all cells from 1."""
    for number, cell in enumerate(notebook.cells, 1):
        for output in cell.get("outputs", ()):
            if output.output_type == "error":
                lines = [line for line in cell.source.splitlines() if line.strip()]
                quoted = " / ".join(lines[:QUOTED]) + (" / …" if len(lines) > QUOTED else "")
                return f"cell {number} fails with {output.ename}: {output.evalue}; the cell: {quoted}"
    raise AssertionError("a notebook without an error did not fail")
