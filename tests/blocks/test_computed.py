"""Columns that take-offs give to the storey table, shown beside what is typed; values worked by hand."""

from __future__ import annotations

import pytest

from calcsheet.blocks.computed import computed, sums
from calcsheet.steps.graph import Job

FLOORS = {
    "floors.csv": "level,floor area [m²],plan x [m],plan y [m],slab [m²]\n"
    "Roof,250,25,10,250\n4,300,25,12,300\n3,300,25,12,300\n2,300,25,12,300\n1,310,25,12.4,310\n",
    "loads.csv": "load,kind,place,load per area [kN/m²]\nslab,permanent,floor,8.1\n",
}
MEMBERS = {
    "members.csv": "member,storeys,kind,section,direction,count,acts as\n"
    "Along,all,column,C40,x,10,fixed-fixed\nAcross,all,column,C40,y,8,fixed-fixed\n",
    "sections.csv": "section,material,shape,depth [mm],width [mm]\nC40,Concrete,rectangle,400,400\n",
    "materials.csv": "material,kind,modulus [GPa],Poisson ratio\nConcrete,concrete,32,0.2\n",
}
FROM_FLOORS = ("[answers]", '[masses]\nsource = "floors.csv"\n[answers]')
FROM_MEMBERS = ('kind = "storey chain"', 'kind = "storey chain"\nmembers = "members.csv"')


@pytest.fixture
def floors_job(job_folder):
    """A job whose masses come from floors.csv, with pieces of its storey table replaced."""

    def build(*storeys):
        return Job.open(job_folder([FROM_FLOORS], [("mass [t]", "remarks"), *storeys], files=FLOORS))

    return build


def shown(job):
    """Headings and cells of the calculated columns by key, and the row of sums."""
    reading = job.files.reading
    columns = computed(reading, job.files.card.units.system)
    return {c.key: c.heading for c in columns}, {c.key: list(c.cells.values()) for c in columns}, sums(reading, columns)


def test_masses_and_areas_taken_off_are_columns_and_sums_follow(floors_job):
    headings, cells, totals = shown(floors_job())
    assert list(headings.values())[:3] == [
        "mass from floors.csv [t]",
        "floor area from floors.csv [m²]",
        "elevation [m]",
    ]
    # by hand: 250·8.1/9.80665 = 206.49, 300·8.1/9.80665 = 247.79, 310·8.1/9.80665 = 256.05 t
    assert cells["=mass"] == ["206.5", "247.8", "247.8", "247.8", "256.1"]
    assert cells["=floor area"] == ["250.0", "300.0", "300.0", "300.0", "310.0"]
    # 206.49, 454.28, 702.08, 949.87, 1205.92 t; weights 2025, 4455, 6885, 9315, 11826 kN
    assert cells["=mass at and above"] == ["206.5", "454.3", "702.1", "949.9", "1\u202f205.9"]
    assert cells["=weight at and above"] == ["2\u202f025", "4\u202f455", "6\u202f885", "9\u202f315", "11\u202f826"]
    assert cells["=mass / level below"] == ["0.833", "1.000", "1.000", "0.968"]  # 250/300, 300/310
    assert totals["=mass"] == "1\u202f205.9"


def test_a_wrong_cell_elsewhere_leaves_them(floors_job):
    job = floors_job(("152000", "stiff"))
    assert job.payload("storeys")["state"] == "refused"
    assert shown(job)[1]["=mass"] == ["206.5", "247.8", "247.8", "247.8", "256.1"]


def test_columns_stay_and_are_blank_while_the_take_off_can_not_be_read(floors_job):
    headings, cells, totals = shown(floors_job(("3,3.3,", "3,tall,")))
    assert list(headings)[:2] == ["=mass", "=floor area"]
    assert cells["=mass"] == cells["=floor area"] == cells["=mass at and above"] == []
    assert totals == {}


def test_floor_areas_of_the_table_itself_go_first(floors_job):
    job = floors_job(("remarks", "floor area [m²]"))
    assert "=floor area" not in shown(job)[0]
    assert job.payload("storeys")["inputs"]["area"][-1] == 141.5


def test_stiffnesses_taken_off_are_columns_beside_one_that_is_not_used(job_folder):
    job = Job.open(job_folder([FROM_MEMBERS], [("stiffness y [kN/m]", "remarks")], files=MEMBERS))
    headings, cells, _ = shown(job)
    assert list(headings.values())[:2] == ["stiffness x from members.csv [kN/m]", "stiffness y from members.csv [kN/m]"]
    assert "stiffness x" in {c.key for c in job.files.reading.columns}
    # fixed at both ends, n·12·E·I/h³ (textbook beam theory): E·I = 32e6·0.4⁴/12 = 68 267 kN·m²;
    # n = 10 and 8; h = 2.95, 3.3, 3.3, 3.65, 4.4 m
    expected = [12 * 32e6 * 0.4**4 / 12 / h**3 for h in (2.95, 3.3, 3.3, 3.65, 4.4)]
    for key, count in (("=stiffness x", 10), ("=stiffness y", 8)):
        numbers = [float(cell.replace("\u202f", "")) for cell in cells[key]]
        assert numbers == pytest.approx([count * k for k in expected], abs=0.5)


def test_levels_at_the_base_have_no_stiffness_and_units_are_the_jobs(members_folder):
    job = Job.open(members_folder(us=True))
    reading = job.files.reading
    column = next(c for c in computed(reading, "US") if c.key == "=stiffness y")
    assert column.heading == "stiffness y from members.csv [kip/in]"
    assert sorted(column.cells) == list(reading.used[: reading.above]) == [0, 1, 2, 3, 4]
    assert reading.levels[5] == "Plaza"
