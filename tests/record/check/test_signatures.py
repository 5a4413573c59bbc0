"""Signatures and status."""

from __future__ import annotations

import copy
import json

import pytest

from calcsheet.record.check.finding import AGREES, DIFFERS, NOT_ASSESSED
from calcsheet.record.check.signatures import signature_findings
from calcsheet.record.document import settled
from calcsheet.record.fingerprints import covered, fingerprints_of
from calcsheet.record.recordfile import record_in
from calcsheet.record.signature import signature


def signed(record, role, name="Ilse Brandt"):
    made = signature(record, role, name=name, date="2026-04-28")
    return settled({**record, "signatures": [*record["signatures"], made]})


def signatures_of(record):
    return list(signature_findings(record_in(json.dumps(record).encode(), "a"), record))


def test_signatures_and_status_of_a_record_agree(record):
    assert record["status"] == "FOR CHECKING"
    for new in (record, signed(record, "checked"), signed(signed(record, "checked"), "approved")):
        assert {f.verdict for f in signatures_of(new)} == {AGREES}
    assert signed(signed(record, "checked"), "approved")["status"] == "APPROVED"


def test_a_signature_on_other_data_holds_no_longer(record):
    new = copy.deepcopy(signed(record, "checked"))
    new["payloads"]["storeys"]["inputs"]["mass"][0] += 1.0
    new["fingerprints"] = fingerprints_of(new)
    found = signatures_of(new)
    assert [f.place for f in found if f.verdict == DIFFERS] == ["/signatures/0", "/signatures/1", "/status"]
    assert "holds no longer" in found[0].text


def test_a_remark_and_a_comment_void_no_signature(record):
    new = copy.deepcopy(signed(record, "checked"))
    new["signatures"][1]["remark"] = "seen on site"
    assert {f.verdict for f in signatures_of(new)} == {AGREES}


@pytest.mark.parametrize("status", ["CHECKED", "APPROVED", "DRAFT"])
def test_a_status_without_its_ground_is_found(record, status):
    found = signatures_of({**record, "status": status})
    assert found[-1].verdict == DIFFERS
    assert f"the status is {status}" in found[-1].text
    other = {**record, "status": status, "layout": {**record["layout"], "code": "0" * 64}}
    made = signature(other, "prepared", name="Maud Ferreira", date="2026-04-21")
    found = signatures_of({**other, "signatures": [made]})
    assert found[-1].verdict == (NOT_ASSESSED if status == "DRAFT" else DIFFERS)


def test_covers_is_of_inputs_notebook_and_results(record):
    assert record["signatures"][0]["covers"] == covered(fingerprints_of(record))
