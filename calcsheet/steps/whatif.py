"""The model that a what-if asks about, taken from a job's payloads; what it answers is kept nowhere."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from calcsheet.core.basis import Basis
from calcsheet.core.storeys import Storeys
from calcsheet.core.whatif import Answered, answered, multiplied
from calcsheet.steps.registry import STEPS
from calcsheet.steps.serial import from_json
from calcsheet.steps.step import Payload

LEAST, MOST = 0.25, 4.0
"""Factors that may be asked about: beyond these it is another building."""


@dataclass(frozen=True)
class Factors:
    """Factors on the whole model.

    Parameters
    ----------
    mass : float
        On every mass.
    x, y : float
        On every stiffness in that direction.

    Raises
    ------
    ValueError
        A factor outside `LEAST` to `MOST`.
    """

    mass: float = 1.0
    x: float = 1.0
    y: float = 1.0

    def __post_init__(self) -> None:
        for key, name in NAMES.items():
            value = getattr(self, key)
            if isinstance(value, bool) or not isinstance(value, int | float) or not LEAST <= value <= MOST:
                raise ValueError(f"{name}: got {value!r}; must be a number from {LEAST:g} to {MOST:g}")

    def along(self, direction: str) -> float:
        """The factor on the stiffnesses in a direction."""
        return self.x if direction == "x" else self.y


NAMES = {"mass": "mass factor", "x": "stiffness factor x", "y": "stiffness factor y"}
"""Each factor in words."""


@dataclass(frozen=True, eq=False)
class Asked:
    """The saved model behind some modes.

    Parameters
    ----------
    storeys : Storeys
        The building.
    stiffness : str
        The stiffness set that the modes use.
    keep : int or None
        Number of modes in each direction; all with None.
    basis : Basis or None
        Basis of the demand on these modes; None where the job has no such demand.
    waits : str
        Why there is no base shear though a demand is asked for; empty where there is one, or none is asked for.
    """

    storeys: Storeys
    stiffness: str
    keep: int | None
    basis: Basis | None
    waits: str

    @property
    def directions(self) -> tuple[str, ...]:
        """The directions that the stiffness set gives."""
        return tuple(sorted(next(s.lateral for s in self.storeys.stiffness if s.name == self.stiffness)))

    def answered(self, factors: Factors | None = None) -> tuple[Answered, ...]:
        """What the saved model answers, or with factors the multiplied one; solved by the core either way.

        Raises
        ------
        ModelError
            As `calcsheet.core.whatif.answered`.
        """
        storeys = self.storeys
        if factors is not None:
            along = {d: factors.along(d) for d in self.directions}
            storeys = multiplied(storeys, factors.mass, self.stiffness, along)
        return answered(storeys, self.stiffness, self.keep, self.basis)


def asked(payloads: Mapping[str, Payload], key: str) -> Asked:
    """The saved model behind the modes of a key, whose state is "ok"."""
    payload = payloads[key]
    inputs, result = payload["inputs"], payload["result"]
    storeys = from_json(Storeys, payloads[payload["needs"]["storeys"]]["inputs"])
    demand = _demand(payloads, key)
    basis, waits = None, ""
    if demand is not None and demand["state"] == "ok":
        basis = from_json(STEPS["basis"].inputs, payloads[demand["needs"]["basis"]]["inputs"])
    elif demand is not None:
        waits = demand["why"]
    return Asked(storeys, result["stiffness"], inputs["keep"], basis, waits)


def shown_by(payloads: Mapping[str, Payload], key: str) -> tuple[Payload, ...]:
    """The payloads that `asked` reads: while they are the same objects, so is what it gives."""
    payload, demand = payloads[key], _demand(payloads, key)
    read = [payload, payloads[payload["needs"]["storeys"]]]
    if demand is not None:
        read += [demand, payloads[demand["needs"]["basis"]]]
    return tuple(read)


def _demand(payloads: Mapping[str, Payload], key: str) -> Payload | None:
    return next((p for p in payloads.values() if p["kind"] == "demand" and p["needs"]["modes"] == key), None)
