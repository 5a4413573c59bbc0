"""What keeps a record a draft."""

from __future__ import annotations

import nbformat
import pytest

from calcsheet import resources
from calcsheet.record.status import held_back, status_of
from calcsheet.steps.graph import Job
from calcsheet.steps.modes import ModesOptions
from calcsheet.steps.participation import ParticipationOptions


@pytest.fixture
def payloads(job_folder):
    def of(*card, keep=None):
        job = Job(job_folder(card))
        job.attach("modes", ModesOptions(keep=keep))
        job.attach("participation", ParticipationOptions())
        return job.payloads()

    return of


def test_for_checking_where_nothing_holds_it_back(payloads):
    found = payloads()
    assert held_back(found) == ()
    assert status_of(found) == "FOR CHECKING"


def test_a_draft_until_it_is_signed(payloads):
    found = payloads(('initials = "OQ"\ndate = 2026-03-09', 'initials = "OQ"'))
    assert held_back(found) == ("not signed by who prepared it: people.prepared has no date",)
    assert status_of(found) == "DRAFT"


def test_a_draft_until_its_cautions_are_answered(payloads):
    unanswered = payloads(keep=1)
    (reason,) = held_back(unanswered)
    assert reason == "cautions that need an answer: target-not-reached-x, target-not-reached-y"
    assert status_of(unanswered) == "DRAFT"


def test_an_answer_lifts_a_caution_and_a_blank_one_does_not(payloads):
    answers = '[answers]\ntarget-not-reached-x = "a first look"\ntarget-not-reached-y = "{}"'
    blank = payloads(("[answers]", answers.format(" ")), keep=1)
    assert held_back(blank) == ("cautions that need an answer: target-not-reached-y",)


def test_answers_to_all_make_it_for_checking(payloads):
    answers = '[answers]\ntarget-not-reached-x = "a first look"\ntarget-not-reached-y = "likewise"'
    assert status_of(payloads(("[answers]", answers), keep=1)) == "FOR CHECKING"


def test_tables_without_origin_and_sets_without_ground_ask_for_an_answer(payloads):
    found = payloads(('source = "take-off"', 'source = " "'), ('ground = "cracked beams"', 'ground = ""'))
    assert held_back(found) == ("cautions that need an answer: no-origin-storeys.csv, no-ground-cracked",)


def test_evidence_beyond_its_limit_makes_a_draft(payloads):
    found = payloads()
    found["modes"]["evidence"][2] |= {"within": False}
    what = found["modes"]["evidence"][2]["what"]
    assert held_back(found) == (f"evidence beyond its limit: {what}",)
    assert status_of(found) == "DRAFT"


def test_texts_of_the_template_are_named_by_key_and_cell(payloads):
    found = payloads(
        ('name = "Odile Quist"', 'name = "Name of the engineer"'),
        ('x = "Along grids 1 to 4."', 'x = "Say which grid lines x runs along, and on which drawing."'),
        ('ground = "solid slabs"', 'ground = "Say why."'),
    )
    words = (
        "# Scope\n\nSay what this calculation is for, and where it ends.",
        "# Storeys\n\nSay 15 % more than drawn.",
    )
    assert held_back(found, words) == (
        'texts of the template: people.prepared.name, directions.x, assumptions.0.ground, cell "Scope"',
    )
    assert status_of(found, words) == "DRAFT"


def test_a_sentence_of_the_engineers_that_begins_with_say_is_his_own(payloads):
    found = payloads(('ground = "solid slabs"', 'ground = "Say 200 mm of concrete, as drawn."'))
    assert status_of(found, ("Say 5 kN/m\u00b2 on the floors.",)) == "FOR CHECKING"


@pytest.mark.parametrize("template", resources.templates())
def test_every_text_that_a_template_leaves_open_is_found(template):
    folder = resources.folder(resources.TEMPLATES) / template
    (reason,) = [r for r in held_back(Job(folder).payloads(), _words(folder)) if r.startswith("texts of the template")]
    asks = (folder / "job.toml").read_text(encoding="utf-8").count('= "Say ') + 3
    asks += sum("\nSay " in source for source in _words(folder))
    named = reason.removeprefix("texts of the template: ").split(", ")
    assert {"job.project", "job.number", "people.prepared.name"} < set(named)
    assert len(named) == asks


def _words(folder):
    cells = nbformat.read(folder / "calc.ipynb", as_version=4).cells
    return [cell.source for cell in cells if cell.cell_type == "markdown"]
