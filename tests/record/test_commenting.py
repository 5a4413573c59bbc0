"""Where comments are kept: in the job, beside a record that stands alone, and from there into the job."""

from __future__ import annotations

import json
import shutil
from pathlib import Path

import pytest

from calcsheet.job.comment import Comment, Named
from calcsheet.job.comments import comments_of
from calcsheet.job.errors import InputError
from calcsheet.record import commenting
from calcsheet.record.commenting import done, lines, place_of
from calcsheet.record.document import settled
from calcsheet.record.errors import RecordError
from calcsheet.record.opened import opened

EXAMPLE = Path(__file__).parents[2] / "example_notebooks" / "alder-quay"
DAY = "2026-04-02"
OUTSIDER = "T. Adeyemi"


@pytest.fixture(scope="module")
def record():
    """A record of the examples, in the present format."""
    return opened(min((EXAMPLE / "issued").glob("*/*.json")))


@pytest.fixture
def job(tmp_path, record):
    """A job with one revision issued and its card raised to the next."""
    folder = tmp_path / "quay"
    (folder / "issued" / "A").mkdir(parents=True)
    shutil.copy(EXAMPLE / "storeys.csv", folder)
    revision = record["payloads"]["card"]["inputs"]["job"]["revision"]
    text = (EXAMPLE / "job.toml").read_text(encoding="utf-8")
    assert f'revision = "{revision}"' in text
    (folder / "job.toml").write_text(text.replace(f'revision = "{revision}"', 'revision = "NEXT"', 1), encoding="utf-8")
    (folder / "issued" / "A" / "r.json").write_text(json.dumps(record), encoding="utf-8")
    return folder


@pytest.fixture
def alone(tmp_path, record):
    """The record's file alone, on a checker's desk."""
    path = tmp_path / "desk" / "r.json"
    path.parent.mkdir()
    path.write_text(json.dumps(record), encoding="utf-8")
    return path


@pytest.fixture
def author(record):
    return record["payloads"]["card"]["inputs"]["people"]["prepared"]["name"]


@pytest.fixture
def revision(record):
    return record["payloads"]["card"]["inputs"]["job"]["revision"]


def refusal(act, *arguments, **how):
    with pytest.raises((RecordError, InputError)) as caught:
        act(*arguments, **how)
    return str(caught.value)


def test_a_job_is_commented_on_at_its_newest_issued_revision(job, record, revision):
    assert done(job) == [f"No comments on revision {revision} or before."]
    said = done(job, "Which edition?", by=OUTSIDER, where="Demand", date=DAY)
    assert said == [f"1  revision {revision}, Demand, {OUTSIDER}, {DAY}: Which edition?", "    open"]
    assert comments_of(job) == (Comment(1, revision, OUTSIDER, DAY, "Demand", "Which edition?"),)
    assert done(job) == said
    shutil.rmtree(job / "issued")
    assert place_of(job).revision == "NEXT"


def test_an_issued_record_and_its_job_share_their_comments(job, revision):
    path = job / "issued" / "A" / "r.json"
    done(path, "Which edition?", by=OUTSIDER, date=DAY)
    assert [p.name for p in path.parent.iterdir()] == ["r.json"]
    assert [c.comment for c in comments_of(job)] == ["Which edition?"]
    assert done(path) == done(job)


def test_a_record_alone_is_commented_on_beside_it(alone, revision):
    done(alone, "Which edition?", by=OUTSIDER, date=DAY)
    assert sorted(p.name for p in alone.parent.iterdir()) == ["comments.csv", "r.json"]
    assert [c.revision for c in comments_of(alone.parent)] == [revision]


def test_from_an_outsiders_desk_into_the_job_and_back(job, alone, record, author, revision):
    done(job, "An earlier one", by="Someone", date=DAY)
    done(alone, "Which edition?", by=OUTSIDER, date=DAY)
    brought = done(job, bring=alone.parent / "comments.csv")
    assert brought == [
        "Brought in: 1 new, 0 completed.",
        f"2  revision {revision}, {OUTSIDER}, {DAY}: Which edition?",
        "    open",
    ]
    assert done(job, bring=alone.parent / "comments.csv") == ["Brought in: 0 new, 0 completed."]
    done(job, "That of 2016.", by=author, reply=2, date="2026-04-03")
    assert f"{author}, who prepared the calculation, may not close" in refusal(done, job, by=author, close=2, date=DAY)
    # the next record prints them; its reader closes number 2 as printed
    there = alone.parent.parent / "desk 2" / "r.json"
    there.parent.mkdir()
    held = settled({**record, "comments": [vars(c) for c in comments_of(job)]})
    there.write_text(json.dumps(held), encoding="utf-8")
    assert done(there) == done(job)
    done(there, by=OUTSIDER, close=2, date="2026-04-05")
    assert done(job, bring=there.parent / "comments.csv")[0] == "Brought in: 0 new, 1 completed."
    assert [(c.closed_by, c.reply) for c in comments_of(job)] == [("", ""), (OUTSIDER, "That of 2016.")]


def test_who_signed_as_a_checker_may_close(tmp_path, record, author):
    signature = {
        **dict.fromkeys(("initials", "qualification", "registration", "scope", "remark"), ""),
        "role": "checked",
        "name": "Ana Sobol",
        "date": DAY,
        "agreed": [],
        "covers": "0" * 64,
    }
    path = tmp_path / "r.json"
    path.write_text(json.dumps({**record, "signatures": [signature]}), encoding="utf-8")
    assert place_of(path).named.originator == author
    assert "Ana Sobol" in place_of(path).named.checkers
    done(path, "Why?", by=OUTSIDER, date=DAY)
    assert done(path, by="Ana Sobol", close=1, date=DAY)[-1] == f"    closed by Ana Sobol, {DAY}"


def test_what_is_no_place(tmp_path):
    assert refusal(place_of, tmp_path) == f"no job.toml in {tmp_path}; name a job folder or a record's file"
    other = tmp_path / "r.json"
    for text in (
        "{}",
        '{"payloads": 3, "format": 1}',
        '{"payloads": {}, "format": 2}',
        "[]",
        '{"payloads": {}, "format": 9}',
    ):
        other.write_text(text, encoding="utf-8")
        assert refusal(place_of, other)


@pytest.mark.parametrize(
    ("asked", "sentence"),
    [
        ({"text": "x"}, 'nobody is named; say --by "NAME"'),
        ({"close": 1}, 'nobody is named; say --by "NAME"'),
        ({"reply": 1, "text": "x", "by": " "}, 'nobody is named; say --by "NAME"'),
        ({"reply": 1, "close": 1, "by": "R"}, "--reply and --close: one thing at a time"),
        ({"close": 1, "text": "x", "by": "R"}, "--close takes no text; raise a comment or reply to one first"),
        ({"reply": 1, "by": "R", "date": DAY}, "no comment 1; there are none yet"),
    ],
)
def test_what_is_asked_wrongly(job, asked, sentence):
    assert refusal(done, job, **asked) == sentence
    assert not (job / "comments.csv").exists()


def test_what_is_brought_in_is_bounded(job, tmp_path, monkeypatch):
    other = tmp_path / "other.csv"
    assert refusal(done, job, bring=other) == f"no file {other}; name the comments.csv that came with the record"
    other.write_bytes(b"x" * 2000)
    assert refusal(done, job, bring=other).startswith('other.csv: no column "number"')
    monkeypatch.setattr(commenting, "LARGEST", 1000)
    assert refusal(done, job, bring=other) == "other.csv: more than 0 MB; no file of comments is as large"


def test_a_terminal_obeys_no_comment():
    comment = Comment(1, "A", "R\x1b[31m", DAY, "\x07", "two\nlines", "a\rb", "O", DAY, "R", DAY)
    assert lines([comment, Comment(2, "A", "R", DAY, "", "x")]) == [
        "1  revision A,  , R [31m, 2026-04-02: two lines",
        "    reply, O, 2026-04-02: a b",
        "    closed by R, 2026-04-02",
        "2  revision A, R, 2026-04-02: x",
        "    open",
    ]


def test_named_people_are_those_of_card_and_signatures(job, author):
    assert isinstance(place_of(job).named, Named)
    assert place_of(job).named.originator == author
