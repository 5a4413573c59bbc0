"""What keeps a record a draft."""

from __future__ import annotations

import datetime as dt

import nbformat
import pytest

from calcsheet import resources
from calcsheet.record.collect import Content
from calcsheet.record.document import record_of
from calcsheet.record.parts import Words
from calcsheet.record.status import held_back, reasons
from calcsheet.render.answers import answer_to
from calcsheet.steps.graph import Job
from calcsheet.steps.modes import ModesOptions
from calcsheet.steps.participation import ParticipationOptions


def status_of(payloads, words=()):
    return record_of(Content(tuple(Words(text) for text in words), payloads))["status"]


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
    record = record_of(Content((), found))
    assert held_back(found) == ()
    assert reasons(record) == ("not signed by who prepared it: people.prepared has no date",)
    assert record["status"] == "DRAFT"


def test_a_draft_until_its_cautions_are_answered(payloads):
    unanswered = payloads(keep=1)
    (reason,) = held_back(unanswered)
    assert reason == "cautions that need an answer: target-not-reached-x (open), target-not-reached-y (open)"
    assert status_of(unanswered) == "DRAFT"


def answered(payloads, key, **other):
    """Payloads whose card answers a caution, parts of the answer replaced by `other`."""
    day = dt.date(2026, 3, 9)
    table = answer_to(payloads, key, "a first look", "Odile Quist", day) | {"date": day.isoformat()} | other
    payloads["card"]["inputs"]["answers"] |= {key: table}
    return payloads


@pytest.mark.parametrize(
    ("other", "said"),
    [
        ({"text": " "}, "incomplete: no text"),
        ({"by": "", "date": None}, "incomplete: no by, no date"),
        ({"finding": ""}, "incomplete: no finding"),
        ({"finding": "00000000"}, "lapsed"),
        ({"text": "", "by": "", "date": None, "finding": ""}, "open"),
    ],
)
def test_an_answer_lifts_a_caution_where_it_is_complete_and_given_to_what_is_found(payloads, other, said):
    found = answered(answered(payloads(keep=1), "target-not-reached-x"), "target-not-reached-y", **other)
    assert held_back(found) == (f"cautions that need an answer: target-not-reached-y ({said})",)
    assert status_of(found) == "DRAFT"


def test_answers_to_all_make_it_for_checking(payloads):
    found = answered(answered(payloads(keep=1), "target-not-reached-x"), "target-not-reached-y")
    assert held_back(found) == ()
    assert status_of(found) == "FOR CHECKING"


def test_an_answer_lapses_with_the_finding(payloads):
    found = answered(payloads(keep=1), "target-not-reached-x")
    share = found["participation"]["cautions"][0]["numbers"][0]
    share["value"] += 1e-6  # not in the digits that are printed
    assert held_back(found) == ("cautions that need an answer: target-not-reached-y (open)",)
    share["value"] += 0.01
    assert held_back(found) == (
        "cautions that need an answer: target-not-reached-x (lapsed), target-not-reached-y (open)",
    )


def test_an_answer_that_no_caution_asks_for_holds_nothing_back(payloads):
    found = payloads()
    found["card"]["inputs"]["answers"] = {"hunch": {"text": "x", "by": "", "date": None, "finding": ""}}
    assert status_of(found) == "FOR CHECKING"


def test_tables_without_origin_and_sets_without_ground_ask_for_an_answer(payloads):
    found = payloads(('source = "take-off"', 'source = " "'), ('ground = "cracked beams"', 'ground = ""'))
    assert held_back(found) == ("cautions that need an answer: no-origin-storeys.csv (open), no-ground-cracked (open)",)


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
