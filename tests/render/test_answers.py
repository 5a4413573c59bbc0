"""Answers to cautions: the finding that they are given to, and whether they count."""

from __future__ import annotations

import copy
import datetime as dt
from hashlib import sha256

import pytest

from calcsheet.job.errors import InputError
from calcsheet.render.answers import answer_to, finding, raised, unasked, unasked_words

DAY = dt.date(2026, 3, 9)
DRIFT = {
    "kind": "drift-exceeds",
    "subject": "x",
    "text": 'The drift in x is {0}, over {{1}} in storey "<A & B>".',
    "numbers": [{"value": 0.01234, "quantity": "displacement", "at": "result/d"}],
    "answer": True,
}


def job(*cautions, system="SI", answers=None, key="drift"):
    """Payloads of a card and of one step that raises these cautions."""
    card = {"kind": "card", "cautions": [], "inputs": {"units": {"system": system}, "answers": answers or {}}}
    return {"card": card, key: {"kind": "drift", "cautions": list(cautions)}}


def answer(**other):
    return {"text": "Seen.", "by": "O. Quist", "date": "2026-03-09", "finding": finding(DRIFT, "SI"), **other}


def state(**other):
    (one,) = raised(job(DRIFT, answers={"drift-exceeds-x": answer(**other)}))
    return one.state, one.said, one.waits


def test_a_finding_is_the_hash_of_the_words_as_printed():
    # 12.34 mm to three digits, 0.4858 in to three
    for system, shown in (("SI", "12.3 mm"), ("US", "0.486 in")):
        words = f'The drift in x is {shown}, over {{1}} in storey "<A & B>".'
        assert finding(DRIFT, system) == sha256(words.encode()).hexdigest()[:8]
        (one,) = raised(job(DRIFT, system=system))
        assert (one.plain, one.finding) == (words, finding(DRIFT, system))


def test_a_finding_stays_while_its_print_stays():
    now = finding(DRIFT, "SI")
    for value, same in ((0.012341, True), (0.01236, False)):
        other = copy.deepcopy(DRIFT)
        other["numbers"][0]["value"] = value
        assert (finding(other, "SI") == now) is same
    assert finding(DRIFT | {"text": DRIFT["text"] + "!"}, "SI") != now
    assert finding(DRIFT | {"answer": False, "subject": "y"}, "SI") == now


def test_states():
    assert state() == ("answered", "answered", False)
    assert state(text=" ") == ("incomplete", "incomplete: no text", True)
    assert state(by="", date=None) == ("incomplete", "incomplete: no by, no date", True)
    assert state(finding="") == ("incomplete", "incomplete: no finding", True)
    assert state(finding="00000000") == ("lapsed", "lapsed", True)
    assert state(text="", by="", date=None, finding="") == ("open", "open", True)
    (one,) = raised(job(DRIFT))
    assert (one.state, one.waits) == ("open", True)
    (one,) = raised(job(DRIFT | {"answer": False}))
    assert (one.state, one.waits) == ("open", False)


def test_a_step_of_another_name_has_keys_of_its_own():
    both = job(DRIFT) | job(DRIFT, key="soft soil")
    assert [one.key for one in raised(both)] == ["drift-exceeds-x", "drift-exceeds-x of soft soil"]
    assert [one.at for one in raised(both)] == ["/drift", "/soft soil"]


def test_answers_that_no_caution_asks_for():
    answers = {"drift-exceeds-x": answer(), "hunch": answer(), "drift-exceeds-y": answer()}
    assert unasked(job(DRIFT, answers=answers)) == ("hunch", "drift-exceeds-y")
    assert unasked_words(job(DRIFT, answers=answers)) == (
        "job.toml, answers.hunch: no caution has this key",
        "job.toml, answers.drift-exceeds-y: no caution has this key",
    )


def test_a_mistyped_key_is_told_the_nearest_that_waits():
    assert unasked_words(job(DRIFT, answers={"drift-exeeds-x": answer()})) == (
        "job.toml, answers.drift-exeeds-x: no caution has this key; the nearest that has no answer is drift-exceeds-x",
    )


def test_an_answer_to_what_is_found_now():
    given = answer_to(job(DRIFT), "drift-exceeds-x", "Seen.", "O. Quist", DAY)
    assert given == {"text": "Seen.", "by": "O. Quist", "date": DAY, "finding": finding(DRIFT, "SI")}


def test_the_same_answer_keeps_its_day():
    payloads = job(DRIFT, answers={"drift-exceeds-x": answer()})
    later = dt.date(2026, 4, 1)
    assert answer_to(payloads, "drift-exceeds-x", "Seen.", "O. Quist", later)["date"] == DAY
    assert answer_to(payloads, "drift-exceeds-x", "Seen.", "R. Aalto", later)["date"] == later
    assert answer_to(payloads, "drift-exceeds-x", "Seen again.", "O. Quist", later)["date"] == later


def test_words_that_answered_another_finding_are_refused_unless_meant_again():
    payloads = job(DRIFT, answers={"drift-exceeds-x": answer(finding="00000000")})
    given = ("drift-exceeds-x", "Seen.", "O. Quist", dt.date(2026, 4, 1))
    with pytest.raises(InputError) as caught:
        answer_to(payloads, *given)
    assert str(caught.value) == (
        "job.toml, answers.drift-exceeds-x: these words answer an earlier finding; read the present one, then answer it in "
        "other words or say that these are meant again"
    )
    again = answer_to(payloads, *given, again=True)
    assert (again["date"], again["finding"]) == (given[3], finding(DRIFT, "SI"))


@pytest.mark.parametrize(
    ("key", "text", "by", "message"),
    [
        ("drift", "Seen.", "O.Q.", "answers.drift: no caution has this key; must be one of drift-exceeds-x"),
        ("drift-exceeds-x", " ", "O.Q.", "answers.drift-exceeds-x.text: got a blank; must be a text that is not blank"),
        ("drift-exceeds-x", "Seen.", "", "answers.drift-exceeds-x.by: got a blank; must be a text that is not blank"),
    ],
)
def test_refusals(key, text, by, message):
    with pytest.raises(InputError) as caught:
        answer_to(job(DRIFT), key, text, by, DAY)
    assert str(caught.value) == f"job.toml, {message}"


def test_a_job_that_asks_for_nothing_says_so():
    with pytest.raises(InputError, match=r"no caution has this key; no caution of this job asks for an answer$"):
        answer_to(job(DRIFT | {"answer": False}), "hunch", "Seen.", "O.Q.", DAY)
