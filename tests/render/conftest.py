"""Views rendered from a job, and their numbers held against its payloads in units written here."""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping

import pytest

from calcsheet.render.registry import VIEWS

KIP, FOOT = 4.4482216152605, 0.3048  # kN and m, exact by definition
ONE = {
    "SI": {"displacement": 0.001, "share": 0.01},
    "US": {
        "displacement": FOOT / 12.0, "share": 0.01, "length": FOOT, "force": KIP, "moment": KIP * FOOT, "mass": KIP / FOOT,
        "acceleration": FOOT,
    },
}  # fmt: skip
"""What one unit shown is in core units: m, kN, t, s."""
FIELDS = {
    "displacement": "elastic design limit displacement separation first cap/drift",
    "share": "share",
    "length": "overturning",
    "force": "shear static_force equivalent modal_base_shear design_base_shear first_base_shear",
    "moment": "moment",
    "mass": "effective_mass first_effective_mass",
    "acceleration": "ordinate",
    "one": "period approximate_period gamma_roof related theta amplified forces drifts factor scale torsion value",
}
QUANTITY = {field: quantity for quantity, fields in FIELDS.items() for field in fields.split()}
QUANTITY |= {"second_order/limit": "one", "damping/value": "share"}


def assert_numbers_hold(numbers, payloads, system) -> None:
    assert numbers
    for pointer, shown in numbers:
        found = payloads
        parts = pointer.removeprefix("/").split("/")
        for part in parts:
            found = found[int(part)] if isinstance(found, list) else found[part]
        named = [part for part in parts if not part.isdigit()]
        quantity = QUANTITY.get("/".join(named[-2:])) or QUANTITY[named[-1]]
        text = re.sub(r"\s", "", shown).replace("\u2212", "-")
        half = 0.5 * 10.0 ** -len(text.partition(".")[2])
        one = ONE[system].get(quantity, 1.0)
        assert abs(found / one - float(text)) <= half * (1 + 1e-9), (pointer, shown, found / one)


@pytest.fixture
def numbers_hold() -> Callable[..., None]:
    """Every printed number is the correctly rounded value at its pointer, in the system's unit."""
    return assert_numbers_hold


@pytest.fixture
def rendered() -> Callable[..., str]:
    """HTML of a view of a job."""

    def render(job, name: str) -> str:
        view = VIEWS[name]
        return view.render(job.payloads(), view.step, view.chosen({})).html

    return render


@pytest.fixture
def drawn() -> Callable[..., tuple]:
    """Figures of a view of a job."""

    def draw(job, name: str) -> tuple:
        view = VIEWS[name]
        return view.render(job.payloads(), view.step, view.chosen({})).draw()

    return draw


US = """\
level,storey height [ft],weight [kip],stiffness x [kip/in],stiffness y [kip/in],gravity load [kip]
Roof,11.5,312,205,190,390
2,11.5,455,290,271,610
1,14.25,470,318,300,640
"""


@pytest.fixture
def us() -> Mapping[str, object]:
    """What makes a job of `demand_job` one in US units."""
    return {"storeys": US, "card": [('system = "SI"', 'system = "US"')], "name": "us"}
