"""The blocks that show a step and ask for nothing but their options."""

from __future__ import annotations

import datetime as dt
from numbers import Integral, Real
from pathlib import Path

from calcsheet.blocks.block import Block, Shown, ShownCard
from calcsheet.blocks.storeytable import StoreyTable
from calcsheet.steps.graph import Job
from calcsheet.steps.modes import ModesOptions
from calcsheet.steps.participation import ParticipationOptions


class JobCard(Block):
    """The job of a folder: identity, people, units, model.

    Parameters
    ----------
    folder : str or path
        The job folder, with job.toml and storeys.csv.

    Examples
    --------
    >>> job = JobCard(".")  # doctest: +SKIP
    """

    view_name = "card"

    def __init__(self, folder: str | Path = ".") -> None:
        super().__init__(Job.open(folder), "card")

    def set(self, key: str, value: str | bool | int | float | dt.date | None) -> None:
        """Set a key of job.toml, such as "job.revision" or 'answers."no-origin-storeys.csv"'; None takes it out.

        Raises
        ------
        InputError
            The card would not be valid, or was changed on disk; nothing has changed.
        """
        self.job.set_value(key, value)

    def shown(self) -> Shown:
        return ShownCard(self)


class ModeSolver(Block):
    """Natural modes of the building in each direction.

    Parameters
    ----------
    storeys : StoreyTable
        The storey table.
    share : float
        Share of the mass that the modes used should reach.
    keep : int, optional
        Number of modes kept in each direction; all where omitted.
    stiffness : str, optional
        Name of the stiffness set; the one that serves forces where omitted.
    energy : {"hidden", "shown"}
        Whether the energy shares by level and storey are listed.
    name : str
        Name of this solution in the job: a second solver needs its own.

    Examples
    --------
    >>> modes = ModeSolver(storeys, share=0.9)  # doctest: +SKIP
    """

    view_name = "modes"

    def __init__(
        self,
        storeys: StoreyTable,
        *,
        share: float = 0.9,
        keep: int | None = None,
        stiffness: str | None = None,
        energy: str = "hidden",
        name: str = "modes",
    ) -> None:
        options = ModesOptions(keep=_count(keep), share=_share(share), stiffness=stiffness)
        key = storeys.job.attach("modes", options, {"storeys": storeys.key}, name)
        super().__init__(storeys.job, key, energy=energy)


class ModePlot(Block):
    """Mode shapes over elevation, each named with its period.

    Parameters
    ----------
    modes : ModeSolver
        The modes.
    normalise : {"largest", "roof", "mass"}
        Scale of the shapes drawn.
    values : {"hidden", "shown"}
        Whether the mass-normalised ordinates are listed.

    Examples
    --------
    >>> ModePlot(modes, normalise="roof")  # doctest: +SKIP
    """

    view_name = "mode plot"

    def __init__(self, modes: ModeSolver, *, normalise: str = "largest", values: str = "hidden") -> None:
        super().__init__(modes.job, modes.key, normalise=normalise, values=values)


class ParticipationSummary(Block):
    """Participation of the modes in x and y, and how many reach the target share of the mass.

    Parameters
    ----------
    modes : ModeSolver
        The modes.
    share : float, optional
        Target share of the mass; the solver's where omitted.

    Examples
    --------
    >>> ParticipationSummary(modes)  # doctest: +SKIP
    """

    view_name = "participation"

    def __init__(self, modes: ModeSolver, *, share: float | None = None) -> None:
        needs = {"storeys": modes.payload["needs"]["storeys"], "modes": modes.key}
        key = "participation" if modes.key == "modes" else f"participation of {modes.key}"
        options = ParticipationOptions(None if share is None else _share(share))
        super().__init__(modes.job, modes.job.attach("participation", options, needs, key))


def _share(share: float) -> float:
    if not isinstance(share, Real) or not 0.0 < share <= 1.0:
        raise ValueError(f"share: got {share!r}; must be a number above 0 and at most 1")
    return float(share)


def _count(keep: int | None) -> int | None:
    if keep is not None and (not isinstance(keep, Integral) or keep < 1):
        raise ValueError(f"keep: got {keep!r}; must be a number of modes, or None for all")
    return None if keep is None else int(keep)
