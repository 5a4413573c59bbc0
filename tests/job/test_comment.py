"""Comments: numbers that stay, replies, and who may close them."""

from __future__ import annotations

from dataclasses import replace

import pytest

from calcsheet.job.comment import Comment, Named, brought, closed, open_ones, raised, replied
from calcsheet.job.errors import InputError

DAY, LATER = "2026-04-02", "2026-04-09"
NAMED = Named("Odile Quist", ("Remy Aalto", "Ana Sobol"))


@pytest.fixture
def asked():
    return raised((), "A", "Which edition?", "Remy Aalto", DAY, "Demand")


def refusal(act, *arguments):
    with pytest.raises(InputError) as caught:
        act(*arguments)
    return str(caught.value)


def test_a_comment_gets_the_next_number(asked):
    assert asked == (Comment(1, "A", "Remy Aalto", DAY, "Demand", "Which edition?"),)
    two = raised((replace(asked[0], number=7),), "A", " Masses?\r\nOf which date? ", "Remy Aalto", DAY)
    assert (two[1].number, two[1].comment, two[1].where) == (8, "Masses?\nOf which date?", "")


@pytest.mark.parametrize(
    ("text", "by", "sentence"),
    [(" ", "R", "comment: is blank; must be filled in"), ("x", "", "name: is blank; must be filled in")],
)
def test_blank_words_and_names_are_refused(text, by, sentence):
    assert refusal(raised, (), "A", text, by, DAY) == sentence


def test_a_reply_stands_with_its_author_and_may_be_mended_by_them(asked):
    once = replied(asked, 1, "2016", "Odile Quist", LATER)
    assert (once[0].reply, once[0].replied_by, once[0].replied_on) == ("2016", "Odile Quist", LATER)
    assert replied(once, 1, "7-16", " odile  quist", LATER)[0].reply == "7-16"
    assert refusal(replied, once, 1, "no", "Ana Sobol", LATER) == (
        "comment 1: has a reply by Odile Quist; raise a new one"
    )
    done = closed(once, 1, "Remy Aalto", LATER, NAMED)
    assert (
        refusal(replied, done, 1, "no", "Odile Quist", LATER) == "comment 1: is closed by Remy Aalto; raise a new one"
    )
    assert refusal(replied, asked, 4, "no", "Odile Quist", LATER) == "no comment 4; must be one of 1"
    assert refusal(replied, (), 4, "no", "Odile Quist", LATER) == "no comment 4; there are none yet"


@pytest.mark.parametrize("by", ["Remy Aalto", "remy  AALTO", "Ana Sobol"])
def test_who_raised_it_or_another_checker_closes_it(asked, by):
    after = closed(replied(asked, 1, "2016", "Odile Quist", LATER), 1, by, LATER, NAMED)
    assert (after[0].closed_by, after[0].closed_on) == (by, LATER)
    assert open_ones(asked) == asked
    assert open_ones(after) == ()


def test_who_prepared_the_calculation_closes_no_comment_of_another(asked):
    assert refusal(closed, asked, 1, "odile quist", LATER, NAMED) == (
        "comment 1: odile quist, who prepared the calculation, may not close a comment raised by Remy Aalto; "
        "must be closed by Remy Aalto or Ana Sobol"
    )
    own = raised((), "A", "A note", "Odile Quist", DAY)
    assert closed(own, 1, "Odile Quist", DAY, NAMED)[0].closed_by == "Odile Quist"


def test_who_replied_closes_no_comment_of_another(asked):
    answered = replied(asked, 1, "It is 2016", "Ana Sobol", LATER)
    assert refusal(closed, answered, 1, "Ana Sobol", LATER, NAMED) == (
        "comment 1: Ana Sobol, who replied to it, may not close a comment raised by Remy Aalto; "
        "must be closed by Remy Aalto"
    )


def test_strangers_and_nobody_close_nothing(asked):
    assert refusal(closed, asked, 1, "Zed", LATER, NAMED).startswith(
        "comment 1: Zed neither raised it nor is named as a checker; must be closed by"
    )
    assert refusal(closed, asked, 1, "  ", LATER, NAMED) == "name: is blank; must be filled in"
    done = closed(asked, 1, "Remy Aalto", LATER, NAMED)
    assert refusal(closed, done, 1, "Ana Sobol", LATER, NAMED) == (
        "comment 1: is closed by Remy Aalto; there is nothing to close"
    )


def test_who_is_named_comes_from_card_and_signatures():
    people = {"prepared": {"name": "P"}, "checked": {"name": "C"}, "approved": {"name": " "}}
    signatures = [
        {"role": "prepared", "name": "P"},
        {"role": "checked", "name": "D"},
        {"role": "approved", "name": "C"},
    ]
    assert Named.of(people, signatures) == Named("P", ("C", "D"))


def test_comments_brought_in_are_numbered_anew_and_not_doubled(asked):
    theirs = (
        replace(asked[0], number=5, comment=" which  edition? "),  # the same, spaced otherwise
        Comment(6, "A", "Remy Aalto", DAY, "", "Masses?"),
        Comment(1, "A", "Ana Sobol", DAY, "", "Periods?"),
    )
    after, added, completed = brought(asked, theirs, NAMED)
    assert [(c.number, c.comment) for c in after] == [(1, "Which edition?"), (6, "Masses?"), (7, "Periods?")]
    assert (added, completed) == ((6, 7), ())
    assert brought(after, theirs, NAMED) == (after, (), ())


def test_what_is_brought_in_completes_and_never_replaces(asked):
    here = replied(asked, 1, "2016", "Odile Quist", LATER)
    theirs = (replace(here[0], number=3, reply="other", closed_by="Remy Aalto", closed_on="2026-04-11"),)
    after, added, completed = brought(here, theirs, NAMED)
    assert after == (replace(here[0], closed_by="Remy Aalto", closed_on="2026-04-11"),)
    assert (added, completed) == ((), (1,))


def test_a_closing_by_the_originator_is_not_brought_in(asked):
    theirs = (replace(asked[0], number=9, closed_by="Odile Quist", closed_on=LATER),)
    assert refusal(brought, (), theirs, NAMED) == (
        "comment 9 of the file brought in: Odile Quist, who prepared the calculation, may not close a comment raised by "
        "Remy Aalto; must be closed by Remy Aalto"
    )
