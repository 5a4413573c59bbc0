"""The record as an nbconvert exporter: ``jupyter nbconvert --to calcsheet-record``. It does not execute."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from nbconvert.exporters import Exporter
from nbformat import NotebookNode
from traitlets import Enum, default

from calcsheet.record.collect import collect, refuse_stale
from calcsheet.record.document import record_of
from calcsheet.record.files import html_of
from calcsheet.record.page import PAPERS


class RecordExporter(Exporter):
    """A saved notebook as the HTML of a record, or a refusal where it is stale."""

    export_from_notebook = "Calculation record"
    paper = Enum(PAPERS, default_value="a4", help="paper size of the printed page").tag(config=True)

    @default("file_extension")
    def _file_extension_default(self) -> str:
        return ".html"

    def from_notebook_node(self, nb: NotebookNode, resources: Any = None, **kwargs: Any) -> tuple[str, dict[str, Any]]:
        """Convert a notebook.

        Parameters
        ----------
        nb : NotebookNode
            The notebook, as it was executed and saved.
        resources : dict, optional
            nbconvert's; its metadata's ``path`` is the job folder.

        Raises
        ------
        RecordError
            The notebook holds no record, or its inputs are no longer those of the job folder.
        """
        nb, resources = super().from_notebook_node(nb, resources, **kwargs)
        content = collect(nb)
        refuse_stale(content, Path(resources.get("metadata", {}).get("path") or "."))
        return html_of(record_of(content, self.paper)), resources
