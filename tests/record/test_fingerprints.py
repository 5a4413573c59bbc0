"""Fingerprints: what moves each of them, and what must not."""

from __future__ import annotations

import copy
import hashlib
import json

import pytest

from calcsheet.record.collect import Content
from calcsheet.record.document import record_of, settled
from calcsheet.record.fingerprints import covered, fingerprints_of, short, sparse
from calcsheet.record.parts import Shown, Words
from calcsheet.record.signature import signature
from calcsheet.steps.graph import Job
from calcsheet.steps.modes import ModesOptions


@pytest.fixture
def record(job_folder):
    job = Job(job_folder())
    job.attach("modes", ModesOptions())
    return record_of(Content((Words("# Scope"), Shown("modes", "modes", {"energy": "hidden"})), job.payloads()))


def moved(record, change):
    """Names of the fingerprints that a change of the record moves."""
    other = copy.deepcopy(record)
    change(other)
    before, after = fingerprints_of(record), fingerprints_of(other)
    return {name for name in before if before[name] != after[name]}


def test_each_has_its_own_cause(record):
    payloads = "payloads"
    assert moved(record, lambda r: r[payloads]["storeys"]["inputs"]["mass"].__setitem__(0, 268.76)) == {"inputs"}
    assert moved(record, lambda r: r[payloads]["card"]["inputs"]["job"].update(reason="Second issue")) == {"inputs"}
    assert moved(record, lambda r: r[payloads]["modes"]["evidence"][0].update(value=1e-3)) == {"results"}
    assert moved(record, lambda r: r["notebook"][0].update(words="# Aim")) == {"notebook"}
    assert moved(record, lambda r: r["layout"].update(paper="letter")) == {"layout"}
    assert moved(record, lambda r: r["versions"].update(numpy="99")) == {"versions"}
    assert moved(record, lambda r: r[payloads]["card"]["inputs"]["people"]["checked"].update(name="B")) == {"people"}


def test_a_remark_or_a_comment_voids_no_signature(record):
    (signed,) = record["signatures"]
    assert signed["covers"] == covered(record["fingerprints"])
    assert moved(record, lambda r: r["signatures"][0].update(remark="seen")) == {"people"}
    assert moved(record, lambda r: r["comments"].append({"number": 1})) == {"people"}
    second = signature(record, "checked", name="Remy Aalto", date="2026-03-11", remark="by hand")
    assert settled({**record, "signatures": [signed, second]})["status"] == "CHECKED"
    assert second["covers"] == signed["covers"]


def test_a_change_of_the_calculation_voids_every_signature(record):
    assert record["status"] == "FOR CHECKING"
    other = copy.deepcopy(record)
    other["payloads"]["storeys"]["inputs"]["mass"][0] *= 1.01
    assert settled(other)["status"] == "DRAFT"


def test_another_programs_save_changes_nothing(record):
    text = json.dumps(record, indent=3, sort_keys=True, ensure_ascii=True)
    again = json.loads(text.replace("141.5", "1.415e2").replace("236.0,", "236,"))
    assert fingerprints_of(again) == record["fingerprints"]


def test_an_option_that_a_later_version_adds_empty_is_no_change_of_inputs(record):
    def upgraded(r):
        r["payloads"]["card"]["inputs"] |= {
            "towers": [],
            "site": None,
            "note": "",
            "wings": {"east": False, "west": {}},
        }
        r["payloads"]["modes"]["inputs"]["damped"] = False

    assert moved(record, upgraded) == set()
    assert sparse({"a": {"b": [{"c": ""}]}, "d": 0, "e": [None, False]}) == {
        "a": {"b": [{}]},
        "d": 0,
        "e": [None, False],
    }


def test_the_canonical_form_is_the_documented_one(record):
    """SHA-256 of JSON without blanks, keys sorted, as RFC 8785 has it for records without fractions."""
    versions = json.dumps(record["versions"], sort_keys=True, separators=(",", ":"))
    assert record["fingerprints"]["versions"] == hashlib.sha256(versions.encode()).hexdigest()


def test_the_short_form_names_what_it_is_of(record):
    prints = record["fingerprints"]
    assert short(prints) == f"inputs {prints['inputs'][:12]}, results {prints['results'][:12]}"
