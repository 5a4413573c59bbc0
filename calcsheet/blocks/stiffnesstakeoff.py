"""The stiffness take-off as a block: storey stiffnesses from members.csv, shown, and adopted once where asked for."""

from __future__ import annotations

from calcsheet.blocks.block import Block, must_be
from calcsheet.blocks.jobcard import JobCard
from calcsheet.core.chain import Chain
from calcsheet.core.stiffnesstakeoff import StoreyStiffness
from calcsheet.job import edits
from calcsheet.job.card import FILE
from calcsheet.job.errors import InputError
from calcsheet.job.headings import stiffness_key
from calcsheet.job.storeycells import FILE as STOREYS
from calcsheet.steps.fromfiles import STIFFNESSES
from calcsheet.steps.graph import Job
from calcsheet.steps.serial import from_json


class StiffnessTakeoff(Block):
    """Storey stiffnesses added up from the members of members.csv, with sections.csv and materials.csv.

    With ``members = "members.csv"`` under [model] in job.toml they are the storey table's stiffnesses; without it they
    stand beside the table until adopted. The tables are edited in a spreadsheet or text editor; running the cell again
    reads what was saved there.

    Parameters
    ----------
    job : JobCard
        The job card.
    rows : {"shown", "hidden"}
        Whether each row of members is listed.

    Examples
    --------
    >>> takeoff = StiffnessTakeoff(job)  # doctest: +SKIP
    >>> takeoff.adopt()  # doctest: +SKIP
    """

    view_name = "stiffness take-off"

    def __init__(self, job: JobCard, *, rows: str = "shown") -> None:
        must_be(self, job, JobCard)
        opened = Job.open(job.job.folder.path)  # read anew where its files changed
        super().__init__(opened, opened.attach(STIFFNESSES, None), rows=rows)

    def adopt(self) -> None:
        """Write the stiffnesses into the columns "stiffness x" and "stiffness y" of the storey table, once, in one edit.

        They are written to six significant digits. Sets with own values keep them.

        Raises
        ------
        InputError
            There is no take-off to adopt, the table takes it already, or it has no such columns; nothing has changed.
        """
        payload = self.payload
        if payload["state"] != "ok":
            raise InputError("", "", f"no stiffness take-off to adopt: {payload['why']}", "put that right first")
        members = self.job.payload("card")["inputs"]["model"]["members"]
        if members is not None:
            found = f'got "{members}", so that {STOREYS} takes the stiffnesses from there'
            raise InputError(FILE, "model.members", found, "must be left out to adopt them once")
        result: StoreyStiffness = from_json(StoreyStiffness, payload["result"])
        levels = payload["inputs"]["level"]
        numbers = {
            stiffness_key(Chain.columns[0], item.direction, None): dict(zip(levels, item.storey.tolist(), strict=True))
            for item in result.directions
        }
        self.job.edit(lambda reading: edits.set_columns(reading, numbers), "stiffnesses taken off")
