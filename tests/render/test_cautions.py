"""The list of cautions as it is printed."""

from __future__ import annotations

import re

import pytest

from calcsheet.render.answers import finding
from calcsheet.render.cautions import cautions
from calcsheet.render.registry import VIEWS
from calcsheet.steps.cautions import CAUTIONS

NUMBER = {"value": 0.5, "quantity": "period", "at": "result/t"}


def caution(kind, text, subject="", answer=False, numbers=()):
    return {"kind": kind, "subject": subject, "text": text, "numbers": list(numbers), "answer": answer}


GENERAL = caution("left-out", "All <else> is left out.")
PLAIN = caution("modes-left-out", "In x 2 of 5 modes.", "x")
OPEN_X = caution("target-not-reached", "In x {0} & less.", "x", True, [NUMBER])
DONE_Y = caution("target-not-reached", "In y as well.", "y", True)
LAPSED = caution("no-ground", "No ground for {{a}}.", "a b", True)
HALF = caution("no-origin", "No origin.", "storeys.csv", True)


def answered(of, **other):
    return {"text": "From <tests>.", "by": "O. & Q.", "date": "2026-03-09", "finding": finding(of, "SI"), **other}


@pytest.fixture
def payloads():
    answers = {
        "target-not-reached-y": answered(DONE_Y),
        "no-ground-a b": answered(LAPSED, finding="00000000"),
        "no-origin-storeys.csv": answered(HALF, by="", date=None),
        "hunch<": answered(HALF),
    }
    card = {"units": {"system": "SI"}, "answers": answers}
    return {
        "card": {"kind": "card", "state": "ok", "inputs": card, "cautions": [GENERAL, LAPSED, HALF]},
        "modes": {"kind": "modes", "state": "ok", "cautions": [PLAIN, DONE_Y, OPEN_X]},
    }


def items(html):
    """Class and words of each item, marks of emphasis left out."""
    found = re.findall(r'<li class="([^"]*)">(.*?)</li>', html, re.DOTALL)
    return [(kind, " ".join(re.sub(r"</?(p|b|code|data)\b[^>]*>", " ", inner).split())) for kind, inner in found]


def test_what_waits_comes_first_and_what_always_holds_last(payloads, document):
    html = cautions(payloads)
    seen = document(html)
    assert seen.headings == ["Raised by the numbers", "General"]
    shown = items(html)
    assert [kind for kind, _ in shown] == ["caution needs-answer"] * 3 + ["caution"] * 3
    starts = [
        "Needs an answer; the one given has lapsed",
        "Needs an answer; the one given is incomplete: no by, no date.",
    ]
    starts += ["Needs an answer. In x", "In y as well.", "In x 2 of 5 modes.", "All &lt;else&gt; is left out."]
    assert [text[: len(start)] for (_, text), start in zip(shown, starts, strict=True)] == starts
    assert seen.numbers == [("/modes/result/t", "0.5000")]
    assert "No ground for {a}." in seen.words


def test_each_says_what_was_found_why_it_matters_what_is_usual_and_how_it_was_answered(payloads, document):
    said = document(cautions(payloads)).words
    kind = CAUTIONS["target-not-reached"]
    order = [
        "In x 0.5000\u00a0s & less.",
        "Why it matters: " + kind.why,
        "Usually done: " + kind.usual,
        "To be answered under answers.target-not-reached-x",
    ]
    places = [said.index(text) for text in order]
    assert places == sorted(places)
    assert said.count(kind.why) == said.count(kind.usual) == 1  # of two of its kind, once
    assert "Answer: From <tests>. (O. & Q., 2026-03-09)" in said
    assert "Answer: From <tests>. (O. & Q., 2026-03-09, to finding 00000000)" in said
    assert "Answer: From <tests>. (nobody named, no date, to finding " in said
    assert f"To be answered under answers.target-not-reached-x, finding {finding(OPEN_X, 'SI')}" in said
    assert f'To be answered under answers."no-ground-a b", finding {finding(LAPSED, "SI")}' in said
    assert "Answers that no caution asks for: hunch<." in said


def test_the_checker_stands_beside_the_answers_alone(payloads, document):
    assert "Checker" not in cautions(payloads)
    before = [text.rpartition("Checker: ")[2] for _, text in items(cautions(payloads, ())) if "Checker" in text]
    assert before == ["\u2013"] * 4  # three that wait, one that is answered
    after = [text for _, text in items(cautions(payloads, ["target-not-reached-y"])) if "Checker: agrees" in text]
    assert [text[:13] for text in after] == ["In y as well."]


def test_a_job_without_cautions_says_so(payloads, document):
    payloads["card"]["cautions"] = payloads["modes"]["cautions"] = []
    assert document(cautions(payloads)).words.count("None.") == 2


def test_the_view_names_steps_that_are_not_calculated(payloads, document):
    view = VIEWS["cautions"]
    assert "Not calculated" not in view.render(payloads, "card", {}).html
    payloads["drift"] = {"kind": "drift", "state": "waiting", "cautions": []}
    said = document(view.render(payloads, "card", {}).html).words
    assert said.startswith("Not calculated at present, so raises none: \u201cdrift\u201d.")


def test_the_views_fingerprint_covers_the_cautions_of_all_steps(payloads):
    view = VIEWS["cautions"]
    before = repr(view.covers(payloads, "card"))
    payloads["modes"]["result"] = "another"
    assert repr(view.covers(payloads, "card")) == before
    payloads["modes"]["cautions"] = []
    assert repr(view.covers(payloads, "card")) != before
