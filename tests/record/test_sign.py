"""Signing: a new file beside the first, in order, by another person, over a record that agrees with itself."""

from __future__ import annotations

import datetime as dt
import json

import nbformat
import pytest

from calcsheet.job.comment import Named, closed, raised
from calcsheet.job.comments import edited
from calcsheet.job.errors import InputError
from calcsheet.record.check.report import checked
from calcsheet.record.document import settled
from calcsheet.record.errors import RecordError
from calcsheet.record.issue import issue
from calcsheet.record.rules import same_person
from calcsheet.record.sign import sign

CHECKER = {"name": "Remy Aalto", "registration": "RA-7"}
ANSWER = """\
[answers."no-ground-cracked"]
text = "Beams at 0.35 of gross, as in HR/S 12."
by = "Odile Quist"
date = 2026-03-09
finding = "{}"
"""


@pytest.fixture
def issued(quick_kernel, job_folder, calculation, new_notebook):
    """Issue an invented job's record; its HTML."""

    def make(*card):
        made = job_folder(card)
        nbformat.write(new_notebook(calculation), made / "calc.ipynb")
        return issue(made, to=["html"]).files[0]

    return make


def data(path):
    return json.loads(path.with_suffix(".json").read_text(encoding="utf-8"))


def refusal(*args, **how):
    with pytest.raises((RecordError, InputError)) as caught:
        sign(*args, **how)
    return str(caught.value)


def test_two_signatures_bring_a_record_from_for_checking_to_approved(issued, document):
    first = issued()
    before = first.read_bytes()
    one = sign(first, "checked", **CHECKER, scope="All by hand for mode 1", agree=["all"])
    assert one.status == "CHECKED"
    assert [path.name for path in one.files] == ["HR-S-21-rev-A-checked.html", "HR-S-21-rev-A-checked.json"]
    two = sign(one.files[0], "approved", name="Ilse Quon", remark="for construction")
    assert two.status == "APPROVED"
    assert [path.name for path in two.files] == ["HR-S-21-rev-A-approved.html", "HR-S-21-rev-A-approved.json"]
    assert first.read_bytes() == before
    old, new = data(first), data(two.files[0])
    for part in ("payloads", "notebook", "layout", "versions"):
        assert old[part] == new[part]
    assert {k for k in old["fingerprints"] if old["fingerprints"][k] != new["fingerprints"][k]} == {"people"}
    seen = document(two.files[0].read_text(encoding="utf-8")).words
    for words in ("APPROVED", "Remy Aalto", "RA-7", "All by hand for mode 1", "for construction", "not cryptographic"):
        assert words in seen


def test_the_status_stands_on_the_cover_alone(issued):
    first = issued()
    done = sign(first, "checked", **CHECKER, agree=["all"])
    assert (
        done.files[0].read_text(encoding="utf-8").count("CHECKED")
        - done.files[0].read_text(encoding="utf-8").count('"CHECKED"')
        == 1
    )  # the other is the data's


def test_the_order_is_kept(issued):
    first = issued()
    assert (
        refusal(first, "approved", name="Ilse Quon")
        == "out of order: approved comes after checked, which nobody has signed"
    )
    done = sign(first, "checked", **CHECKER, agree=["all"])
    assert refusal(done.files[0], "checked", name="Another Person", agree=["all"]).startswith(
        "it is signed already: checked by Remy Aalto"
    )
    assert "is there already" in refusal(first, "checked", name="Another Person", agree=["all"])


@pytest.mark.parametrize("name", ["Odile Quist", " odile  QUIST"])
def test_who_prepared_it_does_not_check_it(issued, name):
    assert "prepared it; the checker must be another person" in refusal(issued(), "checked", name=name, agree=["all"])


def test_unless_the_job_allows_it(issued):
    first = issued(("[units]", "[people]\nsame_person_may_check = true\n[units]"))
    assert sign(first, "checked", name="Odile Quist", agree=["all"]).status == "CHECKED"


def test_a_draft_for_want_of_the_originators_signature_is_signed_by_the_originator(issued):
    first = issued(('initials = "OQ"\ndate = 2026-03-09', 'initials = "OQ"'))
    assert data(first)["status"] == "DRAFT"
    assert "out of order" in refusal(first, "checked", **CHECKER)
    assert sign(first, "prepared", name="Odile Quist").status == "FOR CHECKING"


def test_what_holds_a_record_back_keeps_everyone_from_signing(issued):
    first = issued(('source = "take-off"', 'source = " "'))
    assert refusal(first, "checked", **CHECKER, agree=["all"]).startswith(
        "it is a draft: cautions that need an answer: no-origin-storeys.csv"
    )


def test_data_that_were_changed_are_not_signed(issued):
    first = issued()
    record = first.with_suffix(".json")
    record.write_text(record.read_text(encoding="utf-8").replace("141.5", "142.5", 1), encoding="utf-8")
    assert "does not agree with itself" in refusal(record, "checked", **CHECKER, agree=["all"])


def test_an_open_comment_keeps_it_from_approval(issued):
    first = issued()
    folder = first.parents[2]
    edited(folder / "comments.csv", lambda all: raised(all, "A", "Which drawing?", "Remy Aalto", "2026-03-10"))
    done = sign(first, "checked", **CHECKER, agree=["all"])
    assert data(done.files[0])["comments"][0]["comment"] == "Which drawing?"
    assert refusal(done.files[0], "approved", name="Ilse Quon") == "open comments: 1; close them before approval"
    people = Named("Odile Quist", ("Remy Aalto",))
    edited(folder / "comments.csv", lambda all: closed(all, 1, "Remy Aalto", "2026-03-12", people))
    assert sign(done.files[0], "approved", name="Ilse Quon").status == "APPROVED"


def test_the_checker_agrees_to_each_answer(issued, monkeypatch):
    unanswered = issued(('ground = "cracked beams"', 'ground = ""'))
    (caution,) = [c for p in data(unanswered)["payloads"].values() for c in p["cautions"] if c["kind"] == "no-ground"]
    assert caution["subject"] == "cracked"


@pytest.mark.parametrize(
    ("role", "who", "said"),
    [
        ("checked", {"name": "O. Quist"}, "prepared it; the checker must be another person"),
        ("checked", {"name": "Remy Aalto", "date": dt.date(2026, 3, 8)}, "must not be before 2026-03-09"),
        ("checked", {"name": "Remy Aalto", "date": dt.date(2999, 1, 1)}, "must not be after today"),
        ("checked", {"name": " "}, "must be the signer's name"),
    ],
    ids=["initial", "before", "after", "blank"],
)
def test_who_and_when_are_held_to_the_rules(issued, role, who, said):
    assert said in refusal(issued(), role, agree=["all"], **who)


def test_who_prepared_it_does_not_approve_it(issued):
    one = sign(issued(), "checked", **CHECKER, agree=["all"])
    assert "the approver must be another person" in refusal(one.files[0], "approved", name="Odile Quist")


@pytest.mark.parametrize(
    "forged",
    [
        {"name": "Odile Quist", "registration": ""},
        {"date": "1900-01-01"},
        {"name": " "},
        {"role": "prepared"},
    ],
    ids=["originator", "date", "blank", "role"],
)
def test_a_signature_changed_with_its_fingerprint_is_found(issued, forged):
    one = sign(issued(), "checked", **CHECKER, agree=["all"])
    path = one.files[0].with_suffix(".json")
    record = json.loads(path.read_text(encoding="utf-8"))
    assert not checked(path).differs
    record["signatures"][1] |= forged
    path.write_text(json.dumps(settled(record)), encoding="utf-8")
    found = [str(f) for f in checked(path).findings if f.verdict == "differs"]
    assert any("breaks the rules of signing" in text for text in found)


def test_a_brother_is_another_person():
    one = {"name": "Ines Brandvik", "registration": "SE 1"}
    assert not same_person(one, {"name": "Ivar Brandvik", "registration": "SE 2"})
    assert same_person(one, {"name": "I. Brandvik", "registration": ""})
    assert same_person(one, {"name": "Somebody Else", "registration": "se 1"})
