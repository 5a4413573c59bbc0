"""The blocks that show a step and ask for nothing but their options."""

from __future__ import annotations

from numbers import Integral, Real

from calcsheet.blocks.block import Block, must_be
from calcsheet.blocks.storeytable import StoreyTable
from calcsheet.steps.modes import ModesOptions
from calcsheet.steps.participation import ParticipationOptions
from calcsheet.steps.plan import PlanOptions


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
        must_be(self, storeys, StoreyTable)
        options = ModesOptions(keep=_count(keep), share=_share(share), stiffness=stiffness)
        key = storeys.job.attach("modes", options, {"storeys": storeys.key}, name)
        super().__init__(storeys.job, key, options, energy=energy)


class ModePlot(Block):
    """Mode shapes over elevation, each named with its period.

    Parameters
    ----------
    modes : ModeSolver
        The modes.
    normalise : {"largest", "roof", "mass"}
        Scale of the shapes drawn.
    values : {"shown", "hidden"}
        Whether the mass-normalised ordinates are listed.

    Examples
    --------
    >>> ModePlot(modes, normalise="roof")  # doctest: +SKIP
    """

    view_name = "mode plot"

    def __init__(self, modes: ModeSolver, *, normalise: str = "largest", values: str = "shown") -> None:
        must_be(self, modes, ModeSolver)
        super().__init__(modes.job, modes.key, normalise=normalise, values=values)


class FloorLines(Block):
    """The plan of rigid floors: centres of stiffness, eccentricities, torsional radii, and how each mode moves.

    Parameters
    ----------
    modes : ModeSolver
        The modes.

    Examples
    --------
    >>> FloorLines(modes)  # doctest: +SKIP
    """

    view_name = "plan"

    def __init__(self, modes: ModeSolver) -> None:
        must_be(self, modes, ModeSolver)
        needs = {"storeys": modes.payload["needs"]["storeys"], "modes": modes.key}
        key = "plan" if modes.key == "modes" else f"plan of {modes.key}"
        super().__init__(modes.job, modes.job.attach("plan", PlanOptions(), needs, key))


class ParticipationSummary(Block):
    """Participation of the modes in x and y, and how many reach the target share of the mass.

    Parameters
    ----------
    modes : ModeSolver
        The modes.
    share : float, optional
        Target share of the mass; the solver's where omitted.
    name : str, optional
        Name of this summary in the job: a second one of the same modes needs its own.

    Examples
    --------
    >>> ParticipationSummary(modes)  # doctest: +SKIP
    """

    view_name = "participation"

    def __init__(self, modes: ModeSolver, *, share: float | None = None, name: str | None = None) -> None:
        must_be(self, modes, ModeSolver)
        needs = {"storeys": modes.payload["needs"]["storeys"], "modes": modes.key}
        usual = "participation" if modes.key == "modes" else f"participation of {modes.key}"
        options = ParticipationOptions(None if share is None else _share(share))
        key = modes.job.attach("participation", options, needs, name or usual)
        super().__init__(modes.job, key, options)


def _share(share: float) -> float:
    if not isinstance(share, Real) or not 0.0 < share <= 1.0:
        raise ValueError(f"share: got {share!r}; must be a number above 0 and at most 1")
    return float(share)


def _count(keep: int | None) -> int | None:
    if keep is not None and (not isinstance(keep, Integral) or keep < 1):
        raise ValueError(f"keep: got {keep!r}; must be a number of modes, or None for all")
    return None if keep is None else int(keep)
