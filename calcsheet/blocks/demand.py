"""The blocks of the design demand: spectrum, modal table, drift check, storey actions, static comparison."""

from __future__ import annotations

from numbers import Real

from calcsheet.blocks.block import Block, must_be
from calcsheet.blocks.blocks import ParticipationSummary
from calcsheet.steps.actions import ActionsOptions
from calcsheet.steps.demand import DemandOptions
from calcsheet.steps.drift import DriftOptions
from calcsheet.steps.peaks import PeaksOptions
from calcsheet.steps.torsion import TorsionOptions


class DemandSpectrum(Block):
    """The design spectrum of the job's basis with the modes' periods on it, and what the edition says.

    Parameters
    ----------
    participation : ParticipationSummary
        The participation of the modes.

    Examples
    --------
    >>> demand = DemandSpectrum(participation)  # doctest: +SKIP
    """

    view_name = "demand"

    def __init__(self, participation: ParticipationSummary) -> None:
        must_be(self, participation, ParticipationSummary)
        job, needs = participation.job, dict(participation.payload["needs"])
        needs |= {"participation": participation.key, "basis": "basis"}
        super().__init__(job, job.attach("demand", DemandOptions(), needs, _key("demand", participation.key)))


class ModalTable(Block):
    """Modal values, storey shears by mode and the correlation of modes: all that combined values are made from.

    Parameters
    ----------
    demand : DemandSpectrum
        The design demand.

    Examples
    --------
    >>> table = ModalTable(demand)  # doctest: +SKIP
    """

    view_name = "peaks"

    def __init__(self, demand: DemandSpectrum) -> None:
        must_be(self, demand, DemandSpectrum)
        job, needs = demand.job, dict(demand.payload["needs"]) | {"demand": demand.key}
        super().__init__(job, job.attach("peaks", PeaksOptions(), needs, _key("peaks", needs["participation"])))


class DriftCheck(Block):
    """Design drifts against their limits, second-order effects, irregularities.

    Parameters
    ----------
    table : ModalTable
        The modal peaks.

    Examples
    --------
    >>> drift = DriftCheck(table)  # doctest: +SKIP
    """

    view_name = "drift"

    def __init__(self, table: ModalTable) -> None:
        must_be(self, table, ModalTable)
        job, needs = table.job, dict(table.payload["needs"]) | {"peaks": table.key}
        super().__init__(job, job.attach("drift", DriftOptions(), needs, _key("drift", needs["participation"])))


class StoreyActions(Block):
    """Design shears and overturning moments of the storeys.

    Parameters
    ----------
    drift : DriftCheck
        The drifts, whose second-order effects the actions take over.

    Examples
    --------
    >>> actions = StoreyActions(drift)  # doctest: +SKIP
    """

    view_name = "actions"

    def __init__(self, drift: DriftCheck) -> None:
        must_be(self, drift, DriftCheck)
        job = drift.job
        peaks = drift.payload["needs"]["peaks"]
        needs = dict(job.payload(peaks)["needs"]) | {"peaks": peaks, "drift": drift.key}
        super().__init__(job, job.attach("actions", ActionsOptions(), needs, _key("actions", needs["participation"])))


class StaticComparison(Block):
    """The three base shears beside each other, what governs the static one, and what is scaled.

    Parameters
    ----------
    actions : StoreyActions
        The storey actions.

    Examples
    --------
    >>> StaticComparison(actions)  # doctest: +SKIP
    """

    view_name = "comparison"

    def __init__(self, actions: StoreyActions) -> None:
        must_be(self, actions, StoreyActions)
        super().__init__(actions.job, actions.key)


class EdgeDrifts(Block):
    """Drifts at the edges of rigid floors, accidental eccentricities included, and the static ratios of torsion.

    Parameters
    ----------
    drift : DriftCheck
        The drifts at the centres of mass.
    accidental : float
        Accidental eccentricity over the floor's side.

    Examples
    --------
    >>> EdgeDrifts(drift)  # doctest: +SKIP
    """

    view_name = "torsion"

    def __init__(self, drift: DriftCheck, *, accidental: float = 0.05) -> None:
        must_be(self, drift, DriftCheck)
        if not isinstance(accidental, Real) or not 0.0 <= accidental < 0.5:
            raise ValueError(f"accidental: got {accidental!r}; must be a number from 0 and below 0.5")
        job, peaks = drift.job, drift.payload["needs"]["peaks"]
        needs = dict(job.payload(peaks)["needs"]) | {"peaks": peaks, "drift": drift.key}
        options = TorsionOptions(float(accidental))
        super().__init__(job, job.attach("torsion", options, needs, _key("torsion", needs["participation"])), options)


def _key(kind: str, participation: str) -> str:
    """Key of a step beside a participation: its kind, unless that is one of several."""
    return kind if participation == "participation" else f"{kind} of {participation}"
