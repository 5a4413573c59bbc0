"""What a record keeps of the revision before it."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from calcsheet.job.errors import InputError
from calcsheet.steps.compare import compared, facts_of
from calcsheet.steps.earlier import EARLIER, NOTHING, Earlier, earlier_of, earlier_payload, last_issued
from calcsheet.steps.replay import replay
from calcsheet.steps.serial import from_json
from calcsheet.steps.step import calculated

FIRST_FORMAT = next((Path(__file__).parents[1] / "record/data/format-1").glob("*.json"))
SIGNED = [
    {"role": "prepared", "name": "Odile Quist", "date": "2026-03-09"},
    {"role": "checked", "name": "Remy {Aalto}", "date": "2026-03-20"},
]


@pytest.fixture
def issued(plain_record):
    """Issues what a job holds now, as a revision."""

    def write(job, revision, date="2026-03-09", **parts):
        record = plain_record(job, **parts)
        record["payloads"]["card"]["inputs"]["job"] |= {"revision": revision, "date": date}
        folder = job.folder.path / "issued" / revision
        folder.mkdir(parents=True)
        (folder / f"record-rev-{revision}.json").write_text(json.dumps(record), encoding="utf-8")

    return write


@pytest.mark.parametrize("status", ["CHECKED", "APPROVED"])
def test_signatures_of_the_earlier_revision_lapse(demand_job, plain_record, status):
    earlier = earlier_of(plain_record(demand_job("EN"), status, signatures=SIGNED))
    payload = calculated(EARLIER, {}, earlier, ())
    (caution,) = payload["cautions"]
    assert caution["kind"] == "lapsed-signatures"
    assert caution["text"].format() == (
        f"Revision A was {status} (prepared by Odile Quist, 2026-03-09; checked by Remy {{Aalto}}, 2026-03-20): "
        "its signatures do not cover this revision."
    )


@pytest.mark.parametrize("status", ["DRAFT", "FOR CHECKING"])
def test_there_is_nothing_to_lapse_before_the_check(demand_job, plain_record, status):
    payload = calculated(EARLIER, {}, earlier_of(plain_record(demand_job("EN"), status)), ())
    assert payload["cautions"] == []
    assert payload["result"]["first"] is False


def test_the_payload_is_replayed(demand_job, plain_record):
    earlier = earlier_of(plain_record(demand_job("EN"), "CHECKED", signatures=SIGNED))
    payload = json.loads(json.dumps(calculated(EARLIER, {}, earlier, ())))
    assert from_json(Earlier, payload["inputs"]) == earlier
    assert replay({"earlier": payload}) == []
    assert payload["result"]["inputs"] == len(earlier.facts.inputs) > 20
    payload["result"]["headlines"] += 1
    assert [d.field for d in replay({"earlier": payload})] == ["result/headlines"]


def test_what_changed_follows_from_the_record_alone(demand_job, plain_record):
    record = plain_record(demand_job("EN"))
    now = demand_job("EN", ("q_x = 3", "q_x = 2"), name="now")
    now.attach("earlier", earlier_of(record))
    stored = json.loads(json.dumps(now.payloads()))
    changes = compared(from_json(Earlier, stored["earlier"]["inputs"]).facts, facts_of(stored))
    assert [c.one.key for c in changes.inputs] == ["basis.q_x"]


def test_a_record_of_the_first_format():
    record = json.loads(FIRST_FORMAT.read_text(encoding="utf-8"))
    assert record["format"] == 1
    earlier = earlier_of(record)
    assert (earlier.revision, earlier.status, earlier.signatures) == ("A", "FOR CHECKING", ())
    assert earlier.fingerprints.keys() == {"inputs", "results"}
    assert len(earlier.facts.headlines) > 10
    assert compared(earlier.facts, facts_of(record["payloads"])).same


def test_the_newest_other_revision_is_held(demand_job, issued):
    job = demand_job("EN")
    assert last_issued(job.folder.path, "A") is NOTHING
    assert earlier_payload(job.folder.path, "A") is None
    issued(job, "A", "2026-03-09")
    assert earlier_payload(job.folder.path, "A") is None
    assert earlier_payload(job.folder.path, "B")["inputs"]["revision"] == "A"
    issued(job, "B", "2026-04-01")
    assert last_issued(job.folder.path, "C").revision == "B"
    assert last_issued(job.folder.path, "C", "A").revision == "A"


def test_signatures_before_a_draft_lapse(demand_job, issued):
    job = demand_job("EN")
    issued(job, "A", "2026-03-09", status="CHECKED", signatures=SIGNED)
    issued(job, "B", "2026-04-01", status="DRAFT")
    payload = earlier_payload(job.folder.path, "C")
    assert (payload["inputs"]["revision"], list(payload["inputs"]["drafts"])) == ("A", ["B"])
    assert [c["kind"] for c in payload["cautions"]] == ["lapsed-signatures"]


def test_the_first_issue_holds_nothing():
    payload = calculated(EARLIER, {}, NOTHING, ())
    assert payload["state"] == "ok"
    assert payload["result"] == {"first": True, "inputs": 0, "headlines": 0, "conclusions": 0}
    assert payload["cautions"] == []


def leaves(value, path=()):
    if isinstance(value, dict | list):
        for key, item in value.items() if isinstance(value, dict) else enumerate(value):
            yield (*path, key)
            yield from leaves(item, (*path, key))


def test_a_record_that_holds_anything_is_read_or_refused_in_one_sentence(demand_job, plain_record):
    """Every ninth node of a record replaced in turn by values of other types."""
    record = plain_record(demand_job("EN"), "CHECKED", signatures=SIGNED)
    for payload in record["payloads"].values():  # what this step doesn't read
        payload["lines"] = payload["evidence"][1:] = []
    record["payloads"].pop("peaks")
    text, refused = json.dumps(record), []
    for i, (*path, last) in enumerate(leaves(record)):
        if i % 9:
            continue
        broken = json.loads(text)
        node = broken
        for key in path:
            node = node[key]
        node[last] = (None, "\u001b[1m", -1e308, [], {"a": [1]}, True, 10**400)[i % 7]
        try:
            payload = calculated(EARLIER, {}, earlier_of(broken, "some.json"), ())
            assert payload["state"] == "ok"
        except InputError as error:
            refused.append(str(error))
    assert len(refused) > 10
    assert all(why.startswith("some.json: no record that can be compared; must be") for why in refused)
