"""The folder of issued records."""

from __future__ import annotations

import json
import re

import pytest

from calcsheet.job.errors import InputError
from calcsheet.job.issued import issued_record, issued_records, natural


@pytest.fixture
def issue(tmp_path):
    def write(revision, date, folder=None, name="record.json", **parts):
        job = {"revision": revision, "date": date}
        place = tmp_path / "issued" / (folder or revision)
        place.mkdir(parents=True, exist_ok=True)
        record = {"payloads": {"card": {"inputs": {"job": job}}}, **parts}
        (place / name).write_text(json.dumps(record), encoding="utf-8")
        return place / name

    return write


def names(folder):
    return [record.revision for record in issued_records(folder)]


def test_nothing_is_issued_yet(tmp_path):
    assert issued_records(tmp_path) == ()
    assert issued_record(tmp_path, "A") is None
    (tmp_path / "issued").mkdir()
    (tmp_path / "issued/register.csv").write_text("revision\n")
    assert issued_records(tmp_path) == ()


def test_the_order_is_by_date_then_by_revision(tmp_path, issue):
    for revision, date in (("10", "2026-05-01"), ("9", "2026-05-01"), ("A", "2026-06-01"), ("B", "2026-04-01")):
        issue(revision, date)
    assert names(tmp_path) == ["B", "9", "10", "A"]
    assert issued_record(tmp_path, "C").revision == "A"
    assert issued_record(tmp_path, "A").revision == "10"
    assert issued_record(tmp_path, "A", against="9").revision == "9"
    assert issued_record(tmp_path, "A", against="A").revision == "A"


def test_a_draft_is_held_against_only_where_nothing_else_is_issued(tmp_path, issue):
    issue("0", "2026-03-01", status="DRAFT")
    issue("1", "2026-03-02", status="DRAFT")
    assert (issued_record(tmp_path, "2").revision, issued_record(tmp_path, "2").drafts) == ("1", ())
    issue("A", "2026-04-01", status="CHECKED")
    issue("B", "2026-05-01", status="DRAFT")
    issue("C", "2026-06-01", status="DRAFT")
    found = issued_record(tmp_path, "D")
    assert (found.revision, found.drafts) == ("A", ("B", "C"))
    assert issued_record(tmp_path, "C").drafts == ("B",)  # the job's own revision is none of them
    asked = issued_record(tmp_path, "D", against="B")
    assert (asked.revision, asked.drafts) == ("B", ())


def test_names_in_natural_order():
    order = ["0", "2", "9", "10", "10a", "A", "b", "C2", "C10"]
    assert sorted(reversed(order), key=natural) == order
    assert sorted(["²", "1", "P٣"], key=natural)  # digits of other scripts are letters here


def test_of_a_revision_the_most_signed_record_counts(tmp_path, issue):
    issue("A", "2026-05-01", name="record-checked.json", signatures=[{}, {}], status="CHECKED")
    issue("A", "2026-05-01", name="record.json", signatures=[{}], status="FOR CHECKING")
    (record,) = issued_records(tmp_path)
    assert record.record["status"] == "CHECKED"
    assert record.path.name == "record-checked.json"


def test_what_is_being_built_is_not_issued(tmp_path, issue):
    issue("A", "2026-05-01", folder=".building-x1")
    (tmp_path / "issued/B").mkdir()
    assert names(tmp_path) == []


@pytest.mark.parametrize("given", [None, "A"])
def test_a_revision_that_is_not_there_is_refused(tmp_path, issue, given):
    if given:
        issue("A", "2026-05-01")
        issue("B", "2026-05-02")
    there = 'must be one of those issued: "A", "B"' if given else "nothing is issued yet"
    with pytest.raises(InputError, match=f'^against: got revision "Z"; {re.escape(there)}$'):
        issued_record(tmp_path, "C", "Z")


@pytest.mark.parametrize(
    ("content", "why"),
    [
        ("", "no plain JSON: "),
        ("{", "no plain JSON: "),
        ('{"a": NaN}', "no plain JSON: NaN is no finite number"),
        ('{"a": 1e999}', "no plain JSON: 1e999 is no finite number"),
        ('{"a": 1, "a": 2}', "no plain JSON: a key stands twice"),
        ("[" * 100_000, "nested too deeply"),
        (b"\xff\xfe\x00", "no plain JSON: 'utf-8' codec can't decode"),
        ("[]", "no record; must be"),
        ('{"payloads": []}', "no record; must be"),
        ('{"payloads": {"card": {"inputs": {"job": {"revision": 3, "date": "x"}}}}}', "no record; must be"),
        ('{"signatures": 3, "payloads": {"card": {"inputs": {"job": {"revision": "3", "date": "x"}}}}}', "no record; must be"),
    ],
    ids=str,
)  # fmt: skip
def test_what_is_no_record_is_named(tmp_path, issue, content, why):
    path = issue("A", "2026-05-01")
    path.write_bytes(content if isinstance(content, bytes) else content.encode())
    with pytest.raises(InputError) as caught:
        issued_records(tmp_path)
    assert str(caught.value).startswith(f"record.json: {why}")


def test_a_file_too_large_is_named(tmp_path, issue):
    with issue("A", "2026-05-01").open("ab") as file:
        file.truncate(32 * 1024**2 + 1)
    with pytest.raises(InputError, match=r"^record.json: too large; must be at most 32 MB$"):
        issued_records(tmp_path)
