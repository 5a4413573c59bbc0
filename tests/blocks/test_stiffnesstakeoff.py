"""The stiffness take-off in a notebook cell: shown, and adopted once."""

from __future__ import annotations

import re

import pytest

from calcsheet.blocks import JobCard, StiffnessTakeoff
from calcsheet.job.errors import InputError
from calcsheet.steps.fromfiles import STIFFNESSES


def test_a_cell_shows_it_with_its_twin(shell, members_folder, monkeypatch):
    monkeypatch.chdir(members_folder())
    shell.run("from calcsheet import JobCard, StiffnessTakeoff")
    shell.run('job = JobCard(".")\njob')
    shell.run("takeoff = StiffnessTakeoff(job)\ntakeoff", "takeoff")
    twin = shell.twin("takeoff")
    assert "Storey stiffness in x with shares of its members" in twin["text/html"]
    assert twin["text/html"].count("data:image/svg+xml") == 1
    assert repr(shell["takeoff"]) == "StiffnessTakeoff(ok)"


def test_the_twin_says_what_is_wrong_in_its_files(shell, members_folder, monkeypatch):
    monkeypatch.chdir(members_folder([("Posts,all", "Posts,7")]))
    shell.run('from calcsheet import JobCard, StiffnessTakeoff\njob = JobCard(".")\njob')
    shell.run("StiffnessTakeoff(job)", "takeoff")
    assert "<b>Refused:</b> members.csv, row 6, member &quot;Posts&quot;" in shell.twin("takeoff")["text/html"]


@pytest.mark.parametrize("us", [False, True])
def test_adopted_stiffnesses_are_those_of_the_table_to_six_digits(members_folder, us):
    card = JobCard(members_folder(us=us, feeds=False))
    takeoff = StiffnessTakeoff(card)
    path = card.job.folder.path / "storeys.csv"
    before = path.read_text().splitlines()
    takeoff.adopt()
    adopted = card.job.payload("storeys")["inputs"]["stiffness"][0]["lateral"]
    for item in card.job.payload(STIFFNESSES)["result"]["directions"]:
        assert adopted[item["direction"]]["storey"] == pytest.approx(item["storey"], rel=5e-6)
    after = path.read_text().splitlines()
    assert [line.split(",")[:3] for line in after] == [line.split(",")[:3] for line in before]
    written = [len(re.sub(r"\D", "", cell)) for line in after[1:6] for cell in line.split(",")[3:5]]
    assert max(written) <= 7  # six digits, and a zero where three decimals might be read as thousands
    if us:
        assert after[-1] == before[-1]  # the level at the base


def test_what_feeds_the_table_is_not_adopted(members_folder):
    card = JobCard(members_folder())
    takeoff = StiffnessTakeoff(card)
    path = card.job.folder.path / "storeys.csv"
    before = path.read_bytes()
    message = (
        'job.toml, model.members: got "members.csv", so that storeys.csv takes the stiffnesses from there; '
        "must be left out to adopt them once"
    )
    with pytest.raises(InputError, match=f"^{re.escape(message)}$"):
        takeoff.adopt()
    assert path.read_bytes() == before


def test_what_is_not_there_is_not_adopted(job_folder, members_folder):
    with pytest.raises(
        InputError,
        match=r"^no stiffness take-off to adopt: no members\.csv in the job folder; the stiffness take-off needs it; put",
    ):
        StiffnessTakeoff(JobCard(job_folder())).adopt()
    folder = members_folder(feeds=False, name="bare")
    table = (folder / "storeys.csv").read_text().replace("stiffness y [kN/m]", "k_y")
    (folder / "storeys.csv").write_text(table)
    with pytest.raises(InputError, match=r'^storeys\.csv: no column "stiffness y"; must be one of "level"'):
        StiffnessTakeoff(JobCard(folder)).adopt()
    assert (folder / "storeys.csv").read_text() == table


def test_blank_columns_are_filled(members_folder):
    folder = members_folder(feeds=False)
    rows = [line.rsplit(",", 2)[0] for line in (folder / "storeys.csv").read_text().splitlines()[1:]]
    text = "level,storey height [m],mass [t],stiffness x [MN/m],stiffness y [kN/m]\n"
    (folder / "storeys.csv").write_text(text + "".join(f"{row},,\n" for row in rows))
    card = JobCard(folder)
    assert card.job.payload("storeys")["state"] == "refused"
    StiffnessTakeoff(card).adopt()
    assert card.job.payload("storeys")["state"] == "ok"
