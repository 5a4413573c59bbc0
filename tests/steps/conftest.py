"""An invented building and its card as the steps take them, and the steps up to participation run on them."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest

from calcsheet.core.chain import Chain
from calcsheet.core.storeys import LevelBelow, StiffnessSet, Storeys
from calcsheet.job.card import Card, parse_card
from calcsheet.steps.modes import ModesOptions
from calcsheet.steps.participation import ParticipationOptions
from calcsheet.steps.registry import STEPS
from calcsheet.steps.step import Payload, calculated, done

CARD = """\
format = 1

[job]
project = "Larch Yard"
title = "Lateral modes"
number = "C-014"
revision = "1"
date = 2026-01-31

[people.prepared]
name = "A. Writer"

[units]
system = "SI"

[levels]
base_elevation = 0.0

[directions]
x = "along grid 1"
y = "along grid A"

[model]
kind = "storey chain"

[stiffness.gross]
factor = 1.0
ground = "steel sections as drawn"

[serves]
forces = "gross"
drifts = "gross"

[[assumptions]]
text = "Fixed at the raft"

[origins]
"storeys.csv" = { source = "mass take-off" }
"""

LEVEL = ("1", "2", "3", "4", "Roof")
HEIGHT = np.array([4.6, 3.4, 3.4, 3.4, 3.1])
MASS = np.array([410.0, 385.0, 385.0, 372.0, 240.0])
X = np.array([5.2e5, 4.9e5, 4.4e5, 3.8e5, 3.1e5])
Y = np.array([4.7e5, 4.5e5, 4.1e5, 3.5e5, 2.6e5])


def storeys(
    *, level=LEVEL, height=HEIGHT, mass=MASS, x=X, y=Y, lateral=None, name: str = "gross", ground: str = "as drawn"
) -> Storeys:
    height = np.asarray(height, dtype=float)
    given = {"x": Chain(np.asarray(x)), "y": Chain(np.asarray(y))} if lateral is None else lateral
    return Storeys(
        base="base",
        base_elevation=0.0,
        level=tuple(level),
        elevation=np.cumsum(height),
        storey_height=height,
        mass=np.asarray(mass, dtype=float),
        below=(LevelBelow("Basement", -3.2, 520.0),),
        stiffness=(StiffnessSet(name, ground, given),),
        forces=name,
        drifts=name,
    )


def payloads(building: Storeys, keep: int | None = None, share: float = 0.9) -> dict[str, Payload]:
    inputs = {
        "card": parse_card(CARD),
        "storeys": building,
        "modes": ModesOptions(keep=keep, share=share),
        "participation": ParticipationOptions(),
    }
    found: dict[str, Payload] = {}
    for kind in inputs:
        step = STEPS[kind]
        upstream = tuple(done(STEPS[need], found[need]) for need in step.needs)
        found[kind] = calculated(step, {need: need for need in step.needs}, inputs[kind], upstream)
    return found


@pytest.fixture(scope="session")
def building() -> Callable[..., Storeys]:
    """Five storeys on a basement, in x and y; parts of it by name in other words."""
    return storeys


@pytest.fixture(scope="session")
def steps_of() -> Callable[..., dict[str, Payload]]:
    """Payloads of the steps up to participation on a building."""
    return payloads


@pytest.fixture(scope="session")
def card_with() -> Callable[..., Card]:
    """The card with pieces of its text replaced."""

    def build(*changes: tuple[str, str]) -> Card:
        text = CARD
        for old, new in changes:
            assert old in text
            text = text.replace(old, new, 1)
        return parse_card(text)

    return build
