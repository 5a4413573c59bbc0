"""The published schema of a record."""

from __future__ import annotations

import copy
import json
from importlib.resources import files

import pytest
from jsonschema import Draft202012Validator

from calcsheet.record.collect import Content
from calcsheet.record.document import record_of
from calcsheet.record.migrate import migrated
from calcsheet.record.parts import Shown, Words
from calcsheet.record.schema import FILE, as_text, published, refusal
from calcsheet.steps.registry import STEPS

DEMANDS = ["EN", "7-16", "7-22", "IS", "points"]


def record_from(job):
    assert {key: p["why"] for key, p in job.payloads().items() if p["state"] != "ok"} == {}
    parts = (Words("# Scope"), Shown("modes", "modes", {"energy": "hidden"}))
    return json.loads(json.dumps(record_of(Content(parts, job.payloads()))))


@pytest.fixture
def record(demand_job):
    return record_from(demand_job("EN"))


def test_the_published_schema_is_what_the_types_give():
    file = files("calcsheet.record") / FILE
    assert file.read_text(encoding="utf-8") == as_text(), "the module's docstring says how to write it anew"


def test_it_is_a_schema_and_all_its_references_lead_somewhere():
    Draft202012Validator.check_schema(published())
    text = json.dumps(published())
    names = {part.split('"')[0] for part in text.split('"#/$defs/')[1:]}
    assert names <= published()["$defs"].keys()
    kinds = [rule["if"]["properties"]["kind"]["const"] for rule in _payload()["allOf"]]
    assert kinds == list(STEPS)


def _payload():
    return published()["properties"]["payloads"]["additionalProperties"]


@pytest.mark.parametrize("basis", DEMANDS)
def test_records_of_every_edition_are_of_the_schema(demand_job, basis):
    assert refusal(record_from(demand_job(basis))) == ""


def test_records_of_matrices_and_of_other_units_are_of_the_schema(job_folder, chain):
    from calcsheet.steps.graph import Job

    assert refusal(record_from(chain(Job(job_folder(us=True))))) == ""


@pytest.mark.parametrize("name", ["alder-quay", "larch-street"])
def test_demo_records_are_of_the_schema(name):
    from pathlib import Path

    (path,) = sorted(Path(__file__).parents[2].glob(f"example_notebooks/{name}/issued/*/*.json"))[:1]
    assert refusal(migrated(json.loads(path.read_text(encoding="utf-8")))) == ""


def changed(record, *path, to):
    new = copy.deepcopy(record)
    place = new
    for step in path[:-1]:
        place = place[step]
    place[path[-1]] = to
    return new


MASS = ("payloads", "storeys", "inputs", "mass")


@pytest.mark.parametrize(
    ("path", "to", "said"),
    [
        (("status",), "SPLENDID", "/status"),
        (("format",), 3, "/format"),
        (("extra",), 1, "extra"),
        ((*MASS, 0), "heavy", "/payloads/storeys/inputs/mass/0"),
        ((*MASS, 0), True, "/payloads/storeys/inputs/mass/0"),
        ((*MASS, 0), None, "/payloads/storeys/inputs/mass/0"),
        (MASS, {"a": 1}, "/payloads/storeys/inputs/mass"),
        (("payloads", "modes", "result", "models"), None, "/payloads/modes/result/models"),
        (("payloads", "modes", "state"), "waiting", "/payloads/modes/state"),
        (("payloads", "../up"), {}, "../up"),
        (("payloads", "card"), [], "/payloads/card"),
        (("notebook", 0), {"words": "a", "view": "b"}, "/notebook/0"),
        (("fingerprints", "inputs"), "abc", "/fingerprints/inputs"),
        (("layout", "paper"), "a0", "/layout/paper"),
        (("signatures", 0, "date"), "2026-13-01", "/signatures/0/date"),
    ],
)
def test_what_is_not_of_the_schema_is_named_by_its_place(record, path, to, said):
    why = refusal(changed(record, *path, to=to))
    assert said in why
    assert len(why) < 600
    assert "\n" not in why


def test_long_arrays_of_numbers_are_looked_through_at_once(record):
    """Half a million numbers, and the one text among them."""
    import time

    numbers = [0.5] * 500_000
    start = time.perf_counter()
    assert refusal(changed(record, *MASS, to=numbers)) == ""
    assert time.perf_counter() - start < 10.0
    assert "/mass/3" in refusal(changed(record, *MASS, to=[1.0, 2.0, 3.0, "4"]))


def test_a_step_of_another_version_is_a_payload_alone(record):
    new = changed(record, "payloads", "modes", "version", to=99)
    new["payloads"]["modes"]["result"] = {"anything": [1, "a"]}
    assert refusal(new) == ""


def test_records_of_one_name_are_kept_apart():
    """The facts that an edition asks for, and those that two revisions are compared by."""
    definitions = published()["$defs"]
    assert "share_of_three" in definitions["Facts"]["properties"]
    assert "share_of_three" not in definitions["compare.Facts"]["properties"]
