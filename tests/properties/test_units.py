"""One building in the units and columns of two tables is one building."""

from __future__ import annotations

import csv
import io

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calcsheet.core.model import models_of
from calcsheet.core.modes import modes_of
from calcsheet.core.participation import participation
from calcsheet.job.card import parse_card
from calcsheet.job.storeyfile import read_storeys
from calcsheet.job.table import parse_table
from calcsheet.job.textfile import Stamp, TextFile, decode

profile = settings.get_profile("calcsheet")

CARD = """\
format = 1
job = {{ project = "P", title = "T", number = "1", revision = "A", date = 2026-01-31 }}
people.prepared.name = "A. Writer"
units.system = "{system}"
levels.base_elevation = 0.0
directions = {{ x = "along grid 1", y = "along grid A" }}
model.kind = "storey chain"
stiffness.gross = {{ factor = 1.0, ground = "as drawn" }}
serves = {{ forces = "gross", drifts = "gross" }}
"""

FOOT, KIP, GRAVITY = 0.3048, 4.4482216152605, 9.80665
SI = {"storey height [m]": 1.0, "mass [t]": 1.0, "stiffness x [kN/m]": 1.0, "stiffness y [kN/m]": 1.0}
US = {
    "storey height [ft]": FOOT,
    "weight [kip]": KIP / GRAVITY,
    "stiffness x [kip/in]": KIP / (FOOT / 12.0),
    "stiffness y [kip/ft]": KIP / FOOT,
}
MIXED = {"storey height [cm]": 0.01, "mass [kg]": 0.001, "stiffness x [MN/m]": 1e3, "stiffness y [N/mm]": 1.0}

STOREY = st.tuples(st.floats(2.0, 8.0), st.floats(10.0, 2000.0), st.floats(1e4, 1e7), st.floats(1e4, 1e7))
BUILDINGS = st.lists(STOREY, min_size=1, max_size=8)


def table(columns: dict[str, list[str]]) -> str:
    out = io.StringIO()
    csv.writer(out, lineterminator="\n").writerows([columns.keys(), *zip(*columns.values(), strict=True)])
    return out.getvalue()


def columns_of(building, units) -> dict[str, list[str]]:
    """Columns of a storey table, roof first, with every digit."""
    n = len(building)
    values = np.array(building)[::-1] / np.array(list(units.values()))
    named = {heading: [repr(float(v)) for v in values[:, i]] for i, heading in enumerate(units)}
    return {"level": [f"L{n - i}" for i in range(n)]} | named


def read(text: str, system: str = "SI"):
    content = text.encode()
    decoded, encoding = decode(content, "storeys.csv")
    source = parse_table(TextFile(decoded, encoding, Stamp.of(content)), "storeys.csv")
    return read_storeys(source, parse_card(CARD.format(system=system)))


def results(reading):
    assert reading.problems == ()
    for model in models_of(reading.storeys, "gross"):
        modes = modes_of(model)
        yield modes, participation(model, modes, model.direction[0])


@pytest.mark.parametrize(("units", "system"), [(US, "US"), (MIXED, "SI")])
@profile
@given(building=BUILDINGS)
def test_units_change_no_result(building, units, system):
    here = results(read(table(columns_of(building, SI))))
    there = results(read(table(columns_of(building, units)), system))
    for (modes, part), (other_modes, other) in zip(here, there, strict=True):
        assert other_modes.period == pytest.approx(modes.period, rel=1e-12)
        assert other.total_mass == pytest.approx(part.total_mass, rel=1e-13)
        assert other.cumulative == pytest.approx(part.cumulative, abs=1e-8)
        assert other.effective_mass @ other.effective_height == pytest.approx(
            part.effective_mass @ part.effective_height, rel=1e-10
        )


@profile
@given(BUILDINGS, st.permutations(range(5)))
def test_the_order_of_columns_changes_nothing(building, order):
    columns = columns_of(building, SI)
    names = list(columns)
    moved = {names[i]: columns[names[i]] for i in order}
    here, there = read(table(columns)).storeys, read(table(moved)).storeys
    assert there.level == here.level
    for name in ("elevation", "storey_height", "mass"):
        assert getattr(there, name).tolist() == getattr(here, name).tolist()
    for direction in ("x", "y"):
        chains = [s.stiffness[0].lateral[direction].storey.tolist() for s in (here, there)]
        assert chains[0] == chains[1]


@profile
@given(BUILDINGS.filter(lambda b: len(b) > 1))
def test_rows_from_the_base_up_are_refused_where_elevations_show_it(building):
    columns = columns_of(building, SI)
    heights = [float(h) for h in columns.pop("storey height [m]")]
    columns["elevation [m]"] = [repr(sum(heights[i:])) for i in range(len(heights))]
    assert read(table(columns)).problems == ()
    upside_down = {heading: cells[::-1] for heading, cells in columns.items()}
    problems = read(table(upside_down)).problems
    assert problems
    assert all("elevation" in problem.message for problem in problems)
