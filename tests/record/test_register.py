"""The register: rebuilt from records, in order, whatever lies beside them."""

from __future__ import annotations

import csv
import json
import multiprocessing
import os

import pytest

from calcsheet.job.errors import NotSavedError
from calcsheet.record import register
from calcsheet.record.errors import RecordError
from calcsheet.record.place import placed
from calcsheet.record.register import lines, note_of, rebuilt, rows_of

PRINTS = {"inputs": "a" * 64, "results": "b" * 64, "notebook": "c" * 64, "people": "d" * 64}


def record(revision="A", date="2026-03-09", status="FOR CHECKING", signatures=(), reason="First issue"):
    card = {
        "job": {"revision": revision, "date": date, "reason": reason},
        "people": {"prepared": {"name": "Odile Quist"}},
    }
    signed = [{"role": role, "name": name} for role, name in signatures]
    return {
        "format": 2,
        "status": status,
        "payloads": {"card": {"inputs": card}},
        "signatures": signed,
        "fingerprints": PRINTS,
    }


@pytest.fixture
def put(tmp_path):
    """Puts a record's JSON under issued/."""

    def write(data, file="r.json", folder=""):
        place = tmp_path / "issued" / (folder or data["payloads"]["card"]["inputs"]["job"]["revision"])
        place.mkdir(parents=True, exist_ok=True)
        (place / file).write_text(data if isinstance(data, str) else json.dumps(data), encoding="utf-8")

    return write


def read(folder):
    with (folder / "issued" / "register.csv").open(encoding="utf-8-sig", newline="") as file:
        return list(csv.DictReader(file))


def test_a_row_tells_what_the_record_says(tmp_path, put):
    put(record(signatures=[("prepared", "O. Quist"), ("checked", "Remy Aalto")], status="CHECKED"))
    assert rebuilt(tmp_path) == tmp_path / "issued" / "register.csv"
    assert read(tmp_path) == [
        {
            "revision": "A",
            "date": "2026-03-09",
            "status": "CHECKED",
            "fingerprint of inputs": "a" * 12,
            "fingerprint of results": "b" * 12,
            "fingerprint of notebook": "c" * 12,
            "prepared by": "O. Quist",
            "checked by": "Remy Aalto",
            "approved by": "",
            "reason for issue": "First issue",
            "superseded by": "",
            "files": "r.json",
        }
    ]


def test_revisions_are_in_order_and_each_names_the_next(tmp_path, put):
    for revision, date in (("P10", "2026-03-09"), ("P9", "2026-03-09"), ("A", "2026-04-01"), ("Z", "2026-01-05")):
        put(record(revision, date))
    assert [(r.revision, r.superseded_by) for r in rows_of(tmp_path)] == [
        ("Z", "P9"),
        ("P9", "P10"),
        ("P10", "A"),
        ("A", ""),
    ]


def test_the_highest_of_a_revisions_files_counts(tmp_path, put):
    put(record())
    put(record(status="APPROVED", signatures=[("checked", "R"), ("approved", "S")]), "r-approved.json")
    put(record(status="CHECKED", signatures=[("checked", "R")]), "r-checked.json")
    (row,) = rows_of(tmp_path)
    assert (row.status, row.checked_by, row.approved_by) == ("APPROVED", "R", "S")
    assert row.files == "r-approved.json; r-checked.json; r.json"


def test_a_record_of_the_first_format_has_no_signatures_and_two_fingerprints(tmp_path, put):
    old = record()
    del old["signatures"]
    old["fingerprints"] = {"inputs": "a" * 64, "results": "b" * 64}
    put(old)
    (row,) = rows_of(tmp_path)
    assert (row.prepared_by, row.checked_by, row.fingerprint_of_notebook) == ("Odile Quist", "", "")


@pytest.mark.parametrize(
    "data", ["", "{", "[]", "null", "{}", '{"payloads": []}', '{"payloads": {"card": null}}', "\x00", "[" * 100_000]
)
def test_what_can_not_be_read_is_listed(tmp_path, put, data):
    put(record("B"))
    put(data, folder="A")
    assert [(r.revision, r.status, r.files) for r in rows_of(tmp_path)] == [
        ("B", "FOR CHECKING", "r.json"),
        ("A", "unreadable", "r.json"),
    ]
    assert rows_of(tmp_path)[0].superseded_by == ""


def test_strange_records_and_folders_are_listed(tmp_path, put):
    put(record(status="SUPERB"), folder="A")  # no status of a record
    put(record("B"), folder="C")  # another revision's
    put(record("D", reason=7))
    put(record("E"))
    put("{", "broken.json", folder="E")
    (tmp_path / "issued" / "F").mkdir()
    (tmp_path / "issued" / ".building-x").mkdir()
    assert [(r.revision, r.status, r.files) for r in rows_of(tmp_path)] == [
        ("E", "FOR CHECKING", "r.json"),
        ("A", "unreadable", "r.json"),
        ("C", "unreadable", "r.json"),
        ("D", "unreadable", "r.json"),
        ("E", "unreadable", "broken.json"),
        ("F", "unreadable", ""),
    ]


def test_no_cell_is_a_formula(tmp_path, put):
    put(record(reason="=1+1", signatures=[("checked", "@sum")]))
    rebuilt(tmp_path)
    assert (read(tmp_path)[0]["reason for issue"], read(tmp_path)[0]["checked by"]) == ("'=1+1", "'@sum")


def test_the_register_in_words(tmp_path, put):
    put(record(signatures=[("checked", "Remy\x1b[2J")], status="CHECKED"))
    put(record("B", "2026-05-01"))
    assert lines(tmp_path) == [
        "A · 2026-03-09 · CHECKED · prepared by Odile Quist · checked by Remy [2J · First issue · inputs aaaaaaaaaaaa · "
        "superseded by B · r.json",
        "B · 2026-05-01 · FOR CHECKING · prepared by Odile Quist · First issue · inputs aaaaaaaaaaaa · r.json",
    ]


def test_nothing_issued(tmp_path):
    with pytest.raises(RecordError) as caught:
        rebuilt(tmp_path)
    assert str(caught.value) == f"nothing is issued in {tmp_path}; `calcsheet issue {tmp_path}` issues a record"


def test_it_is_written_again_until_it_tells_what_is_there(tmp_path, put, monkeypatch):
    put(record())
    write = register.textfile.write
    late = iter(["B", "C"])

    def another_issues(*arguments):
        done = write(*arguments)
        if revision := next(late, ""):
            put(record(revision, "2026-05-01"))
        return done

    monkeypatch.setattr(register.textfile, "write", another_issues)
    rebuilt(tmp_path)
    assert [row["revision"] for row in read(tmp_path)] == ["A", "B", "C"]


def test_a_register_held_open_is_a_note_and_not_the_end(tmp_path, put, monkeypatch):
    put(record())
    assert note_of(tmp_path) == ""

    def held(*_):
        raise NotSavedError("register.csv", "", "not saved, held open by another program", "close it there")

    monkeypatch.setattr(register.textfile, "write", held)
    assert note_of(tmp_path) == (
        "register.csv: not saved, held open by another program; close it there; "
        f"then `calcsheet register {tmp_path}` writes it"
    )


def race(folder, revisions):
    """A process for each revision: place its record, write the register; what each was told, empty where it won."""
    context = multiprocessing.get_context("fork")  # none of them loads anything anew: all start at once
    gate, told = context.Barrier(len(revisions)), context.SimpleQueue()

    def issue(me, revision):
        data = json.dumps(record(revision, reason=f"of {me}")).encode()
        gate.wait(60)
        try:
            placed(folder / "issued" / revision, {"r.json": data, "r.html": data})
            rebuilt(folder)
        except Exception as error:  # whatever it is, the test is to see it
            told.put((me, str(error)))
        else:
            told.put((me, ""))

    racers = [context.Process(target=issue, args=racer) for racer in enumerate(revisions)]
    for racer in racers:
        racer.start()
    said = dict(told.get() for _ in racers)
    for racer in racers:
        racer.join(60)
    return said


@pytest.mark.skipif(os.name != "posix", reason="needs fork")
def test_of_many_who_issue_at_once_none_loses_a_row(tmp_path):
    names = [f"P{i}" for i in range(1, 13)]
    assert set(race(tmp_path, names).values()) == {""}
    assert [row["revision"] for row in read(tmp_path)] == names
    assert sorted(os.listdir(tmp_path / "issued")) == sorted([*names, "register.csv"])


@pytest.mark.skipif(os.name != "posix", reason="needs fork")
def test_of_forty_who_issue_one_revision_one_wins_and_stands_in_the_register(tmp_path):
    said = race(tmp_path, ["A"] * 40)
    (winner,) = (me for me, sentence in said.items() if not sentence)
    refused = f'revision "A" is issued already, in {tmp_path / "issued" / "A"}; raise job.revision in job.toml to issue the next'
    assert [said[me] for me in range(40) if me != winner] == [refused] * 39
    assert [(row["revision"], row["reason for issue"]) for row in read(tmp_path)] == [("A", f"of {winner}")]
    assert sorted(os.listdir(tmp_path / "issued")) == ["A", "register.csv"]
