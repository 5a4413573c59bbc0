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
from calcsheet.record.issue import issue, notebook_of

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
    assert "; run all cells of calc.ipynb and save it, or issue" in found.stderr
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


@pytest.fixture
def issued(quick_kernel, new_notebook, in_folder):
    """A job whose notebook nobody but the program has run."""
    nbformat.write(new_notebook(CELLS), in_folder / "calc.ipynb")
    issue(in_folder, to=["html"])
    return in_folder


def test_after_issuing_alone_the_record_raises_them(issued):
    assert [(one.key, one.state) for one in asked(issued)] == [(X, "open"), (Y, "open")]
    assert answer(issued, X, "A first look.", "O. Quist").state == "answered"
    assert [one.state for one in asked(issued)] == ["answered", "open"]
    card = issued / "job.toml"
    card.write_text(card.read_text(encoding="utf-8").replace("Remy Aalto", "Remi Aalto"), encoding="utf-8")
    assert [one.state for one in asked(issued)] == ["answered", "open"]


@pytest.mark.parametrize(
    ("file", "old", "new"),
    [
        ("job.toml", 'revision = "A"', 'revision = "B"'),
        ("job.toml", "Heron Row", "Heron Lane"),
        ("storeys.csv", "141.5", "151.5"),
    ],
)
def test_a_record_of_other_inputs_raises_none(issued, file, old, new):
    path = issued / file
    text = path.read_text(encoding="utf-8")
    assert old in text
    path.write_text(text.replace(old, new), encoding="utf-8")
    with pytest.raises(RecordError) as caught:
        asked(issued)
    assert str(caught.value) == (
        "the notebook shows no JobCard, or was not run; run all cells of calc.ipynb and save it, or issue"
    )


def test_a_cell_changed_since_it_was_run_is_for_no_record_to_answer(issued, static):
    notebook = static.executed(CELLS)
    notebook.cells[3].source = notebook.cells[3].source.replace("keep=1", "keep=2")
    nbformat.write(notebook, issued / "calc.ipynb")
    with pytest.raises(RecordError, match=r"cell 4 was changed and not run again"):
        asked(issued)


def test_a_wrong_card_is_the_cause_that_is_named(folder, new_notebook):
    card = folder / "job.toml"
    card.write_text(card.read_text(encoding="utf-8").replace('system = "SI"', 'system = "XY"'), encoding="utf-8")
    assert 'Job card is refused: job.toml, units.system: got "XY"' in run(folder).stderr
    nbformat.write(new_notebook(CELLS), folder / "calc.ipynb")
    assert 'Job card is refused: job.toml, units.system: got "XY"' in run(folder).stderr


def test_a_mistyped_key_is_told_the_nearest(folder):
    card = folder / "job.toml"
    text = card.read_text(encoding="utf-8")
    card.write_text(text + '[answers."target-not-reachd-x"]\ntext = "Seen."\n', encoding="utf-8")
    assert run(folder).stderr == (
        f"Note: job.toml, answers.target-not-reachd-x: no caution has this key; "
        f"the nearest that has no answer is {X}.\n"
    )


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
