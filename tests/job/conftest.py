"""An invented job: five storeys on a basement, read from text without touching the disk."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from calcsheet.job.card import Card, parse_card
from calcsheet.job.storeyfile import read_storeys
from calcsheet.job.storeyreading import StoreyReading
from calcsheet.job.table import TextTable, parse_table
from calcsheet.job.textfile import Stamp, TextFile, decode

CARD = """\
# card of the calculation
format = 1

[job]
project = "Larch Yard"   # as on the drawings
title = "Lateral modes"
number = "C-014"
revision = "1"
date = 2026-01-31
reason = "first issue"

[people.prepared]
name = "A. Writer"
initials = "AW"

[people.checked]
name = ""

[units]
system = "SI"

[levels]
base_elevation = 0   # top of raft
effective_base = ""

[directions]
x = "x runs along grid 1"
y = "y runs along grid A"

[model]
kind = "storey chain"

[stiffness.uncracked]
factor = 1.0
ground = "gross sections"

[stiffness.cracked]
factor = 0.5
ground = "half the uncracked"

[serves]
forces = "uncracked"
drifts = "cracked"

[[assumptions]]
text = "Fixed at the raft"
ground = "ground report"

[origins]
"storeys.csv" = { source = "mass take-off", date = 2026-01-02 }  # by hand

[answers]
"""

STOREYS = """\
level,storey height [m],mass [t],stiffness x [kN/m],stiffness y [kN/m],remarks
Roof,3.40,212.5,148000,131000,plant
"3, upper",3.6,240,160000,150000,
2,3.6,251.25,163000,152500,
1,4.75,260,155000,140000,lobby
"""


@pytest.fixture(scope="session")
def card_text() -> str:
    return CARD


@pytest.fixture(scope="session")
def storeys_text() -> str:
    return STOREYS


@pytest.fixture(scope="session")
def card() -> Callable[..., Card]:
    """The card with pieces of its text replaced."""

    def build(*changes: tuple[str, str]) -> Card:
        return parse_card(changed(CARD, changes))

    return build


@pytest.fixture(scope="session")
def table() -> Callable[..., TextTable]:
    """A table from text or bytes."""

    def build(content: str | bytes, file: str = "storeys.csv") -> TextTable:
        content = content.encode() if isinstance(content, str) else content
        text, encoding = decode(content, file)
        return parse_table(TextFile(text, encoding, Stamp.of(content)), file)

    return build


@pytest.fixture(scope="session")
def read(card: Callable[..., Card], table: Callable[..., TextTable]) -> Callable[..., StoreyReading]:
    """The storey table with pieces of its text replaced, read under the card likewise."""

    def build(
        *changes: tuple[str, str],
        on: tuple[tuple[str, str], ...] = (),
        matrices: dict[str, str] | None = None,
        text: str = STOREYS,
    ) -> StoreyReading:
        chosen = card(*on)
        tables = {d: table(content, f"{d.removesuffix('.csv')}.csv") for d, content in (matrices or {}).items()}
        return read_storeys(table(changed(text, changes)), chosen, tables)

    return build


def changed(text: str, changes: tuple[tuple[str, str], ...]) -> str:
    for old, new in changes:
        assert old in text
        text = text.replace(old, new, 1)
    return text
