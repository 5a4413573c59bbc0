"""Answers to cautions given from the shell."""

from __future__ import annotations

import datetime as dt

import nbformat
import pytest
from click.testing import CliRunner

from calcsheet.cli import main
from calcsheet.record.answering import answer, asked
from calcsheet.record.collect import collect
from calcsheet.record.errors import RecordError
from calcsheet.record.issue import notebook_of

CELLS = (
    "from calcsheet import *",
    'job = JobCard(".")\njob',
    "storeys = StoreyTable(job)\nstoreys",
    "modes = ModeSolver(storeys, keep=1)\nmodes",
    "ParticipationSummary(modes)",
)
X, Y = "target-not-reached-x", "target-not-reached-y"


@pytest.fixture
def folder(static, in_folder):
    nbformat.write(static.executed(CELLS), in_folder / "calc.ipynb")
    return in_folder


def run(*args):
    return CliRunner().invoke(main, ["answer", *map(str, args)])


def test_what_waits_is_listed(folder):
    assert [(one.key, one.state) for one in asked(folder)] == [(X, "open"), (Y, "open")]
    found = run(folder)
    assert found.exit_code == 0, found.output
    first, words, *_ = found.stdout.splitlines()
    assert first == f"{X} (open), finding {asked(folder)[0].finding}"
    assert words.startswith("  In x the one mode kept reaches ")


def test_answers_one_after_the_other(folder):
    assert answer(folder, X, "A first look.", "O. Quist", dt.date(2026, 3, 9)).state == "answered"
    found = run(folder, Y, "--text", "Likewise.", "--by", "O. Quist", "--date", "2026-03-10")
    assert found.exit_code == 0, found.output
    assert found.stdout.startswith(f"{Y}: answered, finding {asked(folder)[1].finding}")
    assert [one.state for one in asked(folder)] == ["answered", "answered"]
    assert "(answered)" in run(folder).stdout
    card = (folder / "job.toml").read_text(encoding="utf-8")
    assert f'[answers.{X}]\ntext = "A first look."\nby = "O. Quist"\ndate = 2026-03-09\nfinding = "' in card
    assert "date = 2026-03-10" in card


def test_a_notebook_of_older_inputs_is_stale(folder):
    table = folder / "storeys.csv"
    table.write_text(table.read_text().replace("141.5", "151.5"))
    with pytest.raises(RecordError, match=r"^the notebook is stale: storeys\.csv or job\.toml"):
        asked(folder)
    found = run(folder, X, "--text", "A first look.", "--by", "O. Quist")
    assert found.exit_code == 2
    assert "the notebook is stale" in found.stderr
    assert "[answers." not in (folder / "job.toml").read_text(encoding="utf-8")


def test_answers_are_all_that_may_differ_from_the_notebook(folder):
    answer(folder, X, "A first look.", "O. Quist")
    card = folder / "job.toml"
    card.write_text(card.read_text(encoding="utf-8").replace("Heron Row", "Heron Lane"), encoding="utf-8")
    with pytest.raises(RecordError, match=r"^the notebook is stale: job\.toml"):
        asked(folder)


def test_the_record_after_answers_in_the_notebook(static, in_folder):
    says = tuple(f'job.answer("{key}", "A first look.", by="O. Quist")' for key in (X, Y))
    nbformat.write(static.executed((*CELLS, *says)), in_folder / "calc.ipynb")
    assert [one.state for one in asked(in_folder)] == ["answered", "answered"]
    content = collect(notebook_of(in_folder))
    assert set(content.payloads["card"]["inputs"]["answers"]) == {X, Y}


@pytest.mark.parametrize(
    ("args", "message"),
    [
        (("hunch", "--text", "x", "--by", "y"), f"no caution has this key; must be one of {X}, {Y}"),
        ((X, "--text", "x"), "an answer needs --text and --by"),
        (("--text", "x"), "an answer needs the key of its caution"),
        ((X, "--text", " ", "--by", "y"), "text: got a blank"),
    ],
)
def test_refusals(folder, args, message):
    found = run(folder, *args)
    assert found.exit_code == 2
    assert message in found.stderr
    assert found.stdout == ""


def test_a_folder_without_a_notebook(in_folder):
    assert "no calc.ipynb in " in run(in_folder).stderr


def test_a_job_that_asks_for_nothing(static, in_folder):
    nbformat.write(static.executed(CELLS[:3]), in_folder / "calc.ipynb")
    assert run(in_folder).stdout == "No caution asks for an answer.\n"
