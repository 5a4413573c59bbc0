"""The mass take-off as a block: floors.csv, loads.csv and masses.csv to the masses of the levels."""

from __future__ import annotations

from calcsheet.blocks.block import Block, must_be
from calcsheet.blocks.jobcard import JobCard
from calcsheet.job import edits
from calcsheet.job.errors import InputError
from calcsheet.job.storeyreading import StoreyReading
from calcsheet.job.table import TextTable
from calcsheet.steps.fromfiles import MASSES
from calcsheet.steps.graph import Job
from calcsheet.units import UNITS


class MassTakeoff(Block):
    """What each level weighs, where its mass lies, and how it turns.

    With ``[masses] source = "floors.csv"`` in job.toml the storeys take their masses from here; else `adopt` writes
    them into the storey table, once. The tables are edited in a spreadsheet or text editor; running the cell again reads
    what was saved there.

    Parameters
    ----------
    job : JobCard
        The job card.

    Examples
    --------
    >>> take_off = MassTakeoff(job)  # doctest: +SKIP
    >>> take_off.adopt()  # doctest: +SKIP
    """

    view_name = "mass take-off"

    def __init__(self, job: JobCard) -> None:
        must_be(self, job, JobCard)
        opened = Job.open(job.job.folder.path)  # read anew where its files changed
        super().__init__(opened, opened.attach(MASSES, None))

    def adopt(self) -> None:
        """Write the masses into the mass or weight column of storeys.csv, once, to six significant digits.

        Raises
        ------
        InputError
            There is no take-off yet, the storeys take their masses from it already, or the storey table has neither
            column, with its unit.
        """
        if self.payload["state"] != "ok":
            raise InputError("", "mass take-off", self.payload["why"], "put that right first")
        given, found = self.payload["inputs"], self.payload["result"]

        def change(reading: StoreyReading) -> TextTable:
            column = next((c for c in reading.columns if c.key in ("mass", "weight") and c.unit is not None), None)
            if self.job.payload("card")["inputs"]["masses"] is not None:
                found_, allowed = "the storeys take their masses from floors.csv already", "there is nothing to adopt"
                raise InputError("job.toml", "masses.source", found_, allowed)
            if column is None:
                wanted = f'"mass [{UNITS["mass"][0].symbol}]" or "weight [{UNITS["weight"][0].symbol}]"'
                raise InputError(reading.table.file, "", "no column for masses", f"must have one, such as {wanted}")
            return edits.set_columns(reading, {column.key: dict(zip(given["level"], found[column.key], strict=True))})

        self.job.edit(change, "masses taken off")
