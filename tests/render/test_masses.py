"""The view of the mass take-off."""

from __future__ import annotations

import re
from html import unescape

import pytest

from calcsheet.render.registry import VIEWS
from calcsheet.render.words import worked
from calcsheet.steps.graph import Job

KIP, FOOT = 4.4482216152605, 0.3048  # kN and m, exact by definition
ONE = {
    "area": FOOT**2,
    "amount": FOOT,
    "plan_x": FOOT,
    "plan_y": FOOT,
    "centre_x": FOOT,
    "centre_y": FOOT,
    "storey_height": FOOT,
    "radius": FOOT,
    "x": FOOT,
    "y": FOOT,
    "value": KIP / 1000.0 / FOOT**2,
    "counted": KIP / 1000.0 / FOOT**2,
    "weight_per_area": KIP / 1000.0 / FOOT**2,
    "by_load": KIP,
    "weight": KIP,
    "other": KIP,
    "foot": KIP,
    "total": KIP,
    "mass": KIP / FOOT,
    "inertia": KIP * FOOT,
    "share": 0.01,
}
FILES = {
    "storeys.csv": "level,elevation [ft],stiffness x [kip/in],stiffness y [kip/in]\n"
    "Roof,24.5,505,560\n2,12.25,790,715\nPlaza,0,,\n",
    "floors.csv": "level,floor area [ft²],plan x [ft],plan y [ft],storage [ft],curtain wall [ft]\n"
    "Roof,4000,80,50,0,260\n2,4000,80,50,70,260\nPlaza,4000,80,50,,\n",
    "loads.csv": "load,kind,place,load per area [psf]\nstorage,variable,walls,125\ncurtain wall,permanent,façade,15\n",
    "masses.csv": "level,item,weight [kip],x [ft],y [ft]\nRoof,chiller <b>,24,10,-8\n2,safe,310,0,0\nPlaza,vault,9,0,0\n",
}
CARD = (("[answers]", '[[mass_basis]]\nload = "storage"\nshare = 0.25\n[masses]\nsource = "floors.csv"\n[answers]'),)


@pytest.fixture
def payloads(job_folder):
    return Job(job_folder(CARD, us=True, files=FILES)).payloads()


def test_every_number_is_the_rounded_value_at_its_pointer(payloads, document):
    seen = document(VIEWS["mass take-off"].render(payloads, "masses", {}).html)
    assert len(seen.numbers) > 60
    for pointer, shown in seen.numbers:
        parts = pointer.removeprefix("/").split("/")
        found = payloads
        for part in parts:
            found = found[int(part)] if isinstance(found, list) else found[part]
        name = next(part for part in reversed(parts) if not part.isdigit())
        text = re.sub(r"\s", "", shown).replace("\u2212", "-")
        half = 0.5 * 10.0 ** -len(text.partition(".")[2])
        assert abs(found / ONE[name] - float(text)) <= half * (1 + 1e-9), (pointer, shown)


def test_a_level_can_be_worked_out_from_its_printed_line(payloads):
    """Its words as a formula in kip, ft and s; four printed digits a number give three that can be relied on."""
    lines = [line for line in payloads["masses"]["lines"] if line["quantity"].startswith("Mass, ")]
    for line, level in zip(lines, (2, 1, 0), strict=True):
        row = worked([("/masses", line)], "US").partition("<tbody>")[2]
        printed = [unescape(re.sub("<[^>]+>", "", cell)) for cell in re.findall("<td[^>]*>(.*?)</td>", row)]
        formula = re.sub("storage|curtain wall|chiller <b>|safe|vault|[\u202f\u00a0]", "", printed[2])
        for old, new in {"psf": "* 0.001", "kip": "", "ft": "", "×": "*", "½ (": "0.5 * (", "½": "0.5"}.items():
            formula = formula.replace(old, new)
        found = eval(formula.replace("/ g", "/ 32.174"))
        assert found == pytest.approx(payloads["masses"]["result"]["mass"][level] / (KIP / FOOT), rel=1e-3)
        assert float(printed[3].split("\u00a0")[0]) == pytest.approx(found, rel=1e-3)


def test_what_is_shown(payloads, document):
    seen = document(VIEWS["mass take-off"].render(payloads, "masses", {}).html)
    assert "storage [ft]" in seen.words
    assert "load per area counted [psf]" in seen.words
    assert "chiller <b>" in seen.words
    assert "unit weight" not in seen.words


def test_the_storey_table_says_that_its_masses_are_taken_off(payloads, document):
    seen = document(VIEWS["storeys"].render(payloads, "storeys", {}).html)
    assert "mass by take-off [kip·s²/ft]" in seen.words


def test_many_loads_stand_in_several_tables(job_folder, document):
    names = [f"load {i}" for i in range(11)]
    heading = ",".join(f"{name} [ft²]" for name in names)
    cells = ",".join("4000" for _ in names)
    rows = "\n".join(f"{level},4000,80,50,{cells}" for level in ("Roof", "2", "Plaza"))
    loads = "\n".join(f"{name},permanent,floor,11" for name in names)
    files = {
        "storeys.csv": FILES["storeys.csv"],
        "floors.csv": f"level,floor area [ft²],plan x [ft],plan y [ft],{heading}\n{rows}\n",
        "loads.csv": f"load,kind,place,load per area [psf]\n{loads}\n",
    }
    payloads = Job(job_folder(CARD, us=True, files=files)).payloads()
    html = VIEWS["mass take-off"].render(payloads, "masses", {}).html
    assert html.count("Weights by level and load") == 2
    pointers = [pointer for pointer, _ in document(html).numbers if "/by_load/1/" in pointer]
    assert pointers == [f"/masses/result/by_load/1/{i}" for i in range(11)]
