"""The block of the mass take-off, and its masses adopted into the storey table."""

from __future__ import annotations

import pytest

from calcsheet.blocks import JobCard, MassTakeoff
from calcsheet.job.errors import InputError

FILES = {
    "floors.csv": "level,floor area [m²],plan x [m],plan y [m],slab [m²]\n"
    "Roof,250,25,10,250\n4,300,25,12,300\n3,300,25,12,300\n2,300,25,12,300\n1,310,25,12.4,310\n",
    "loads.csv": "load,kind,place,load per area [kN/m²]\nslab,permanent,floor,8.1\n",
}


def refusal(block) -> str:
    with pytest.raises(InputError) as caught:
        block.adopt()
    return str(caught.value)


def test_masses_are_adopted_and_nothing_else_changes(job_folder):
    folder = job_folder(files=FILES)
    before = (folder / "storeys.csv").read_text(encoding="utf-8")
    block = MassTakeoff(JobCard(folder))
    assert "masses-differ" in {c["kind"] for c in block.payload["cautions"]}
    block.adopt()
    # by hand: 250·8.1/9.80665, 300·8.1/9.80665 and 310·8.1/9.80665 t, to six digits
    expected = before.replace("141.5,", "206.4930,").replace("236,", "247.7910,").replace("244.25,", "247.7910,")
    expected = expected.replace("251,", "247.7910,").replace("268.75,", "256.0510,")
    assert (folder / "storeys.csv").read_text(encoding="utf-8") == expected
    assert "masses-differ" not in {c["kind"] for c in block.payload["cautions"]}


def test_weights_are_adopted_where_the_table_has_weights(job_folder):
    folder = job_folder(storeys=[("mass [t]", "weight [kN]")], files=FILES)
    block = MassTakeoff(JobCard(folder))
    block.adopt()
    text = (folder / "storeys.csv").read_text(encoding="utf-8")
    assert [float(line.split(",")[2]) for line in text.splitlines()[1:]] == [2025.0, 2430.0, 2430.0, 2430.0, 2511.0]


def test_a_blank_mass_column_can_be_filled(job_folder):
    blank = [("Roof,2.95,141.5", "Roof,2.95,"), ("4,3.3,236", "4,3.3,")]
    job = JobCard(job_folder(storeys=blank, files=FILES))
    assert job.job.payload("storeys")["state"] == "refused"
    MassTakeoff(job).adopt()
    assert job.job.payload("storeys")["state"] == "ok"


def test_what_can_not_be_adopted_is_refused(job_folder):
    bare = MassTakeoff(JobCard(job_folder(name="bare")))
    assert refusal(bare).startswith("mass take-off: no floors.csv and loads.csv in the job folder")
    card = [("[answers]", '[masses]\nsource = "floors.csv"\n[answers]')]
    columns = [("mass [t]", "remarks")]
    linked = MassTakeoff(JobCard(job_folder(card, columns, name="linked", files=FILES)))
    assert refusal(linked) == (
        "job.toml, masses.source: the storeys take their masses from floors.csv already; there is nothing to adopt"
    )
    none = MassTakeoff(JobCard(job_folder(storeys=columns, name="none", files=FILES)))
    assert refusal(none) == 'storeys.csv: no column for masses; must have one, such as "mass [t]" or "weight [kN]"'


def test_the_cell_run_again_reads_what_was_saved_elsewhere(job_folder):
    folder = job_folder(files=FILES)
    job = JobCard(folder)
    before = MassTakeoff(job).payload["result"]["weight"]
    (folder / "loads.csv").write_text(FILES["loads.csv"].replace("8.1", "16.2"), encoding="utf-8")
    again = MassTakeoff(job)
    assert again.job is job.job
    assert again.payload["result"]["weight"] == pytest.approx([2 * weight for weight in before])


def test_the_twin_shows_the_tables(static, in_folder):
    for name, text in FILES.items():
        (in_folder / name).write_text(text, encoding="utf-8")
    static.run('from calcsheet import JobCard, MassTakeoff\njob = JobCard(".")')
    static.run("MassTakeoff(job)", "take-off")
    twin = static.twin("take-off")
    assert "Weights by level and load" in twin["text/html"]
    assert twin["application/vnd.calcsheet+json"]["step"] == "masses"
