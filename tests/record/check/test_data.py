"""Fingerprints, stored and in print."""

from __future__ import annotations

import copy

import pytest

from calcsheet.record.check.data import data_findings
from calcsheet.record.check.finding import AGREES, DIFFERS
from calcsheet.record.files import json_of
from calcsheet.record.fingerprints import fingerprints_of
from calcsheet.record.recordfile import record_in


def leaves(value, at=()):
    """Paths to every number; of long arrays the first, the last and one between."""
    if isinstance(value, dict):
        for key, item in value.items():
            yield from leaves(item, (*at, key))
    elif isinstance(value, list):
        few = range(len(value)) if len(value) < 20 else (0, len(value) // 2, len(value) - 1)
        for i in few:
            yield from leaves(value[i], (*at, i))
    elif type(value) in (int, float):
        yield at


def change(data, path, to=lambda value: value + 1):
    *way, last = path
    for step in way:
        data = data[step]
    before = data[last]
    data[last] = to(before)
    return before


def data_of(record):
    return list(data_findings(record_in(json_of(record), "a.json"), record))


def test_a_record_as_issued_agrees(record, html):
    assert [f.verdict for f in data_findings(record_in(html.encode(), "a.html"), record)] == [AGREES, AGREES]
    assert [f.verdict for f in data_of(record)] == [AGREES]


def test_the_cover_of_a_pdf_is_read(paged_record, pdf):
    assert [f.verdict for f in data_findings(record_in(pdf, "a.pdf"), paged_record)] == [AGREES, AGREES]


def test_each_embedded_number_changed_in_turn_is_found(record):
    """By the fingerprint of inputs or results, or of what an earlier revision said (the notebook's)."""
    payloads, paths = copy.deepcopy(record["payloads"]), list(leaves(record["payloads"]))
    assert len(paths) > 600
    small = {**record, "layout": {}, "versions": {}, "notebook": [], "signatures": [], "comments": []}
    stored = fingerprints_of(small)
    for path in paths:
        if path[1] in ("version",):
            continue
        before = change(payloads, path)
        now = fingerprints_of({**small, "payloads": payloads})
        assert now["inputs"] != stored["inputs"] or now["results"] != stored["results"], path
        change(payloads, path, to=lambda _, before=before: before)


@pytest.mark.parametrize(
    ("path", "name"),
    [
        (("payloads", "storeys", "inputs", "mass", 0), "inputs"),
        (("payloads", "modes", "result", "models", 0, "modes", "omega", 0), "results"),
        (("layout", "engine"), "layout"),
        (("versions", "numpy"), "versions"),
        (("notebook", 0, "words"), "notebook"),
        (("payloads", "card", "inputs", "people", "checked", "name"), "people"),
        (("fingerprints", "results"), "results"),
    ],
)
def test_the_fingerprint_that_differs_is_named(record, path, name):
    new = copy.deepcopy(record)
    change(new, path, to=lambda v: "0" * 64 if path[0] == "fingerprints" else v + ("x" if isinstance(v, str) else 1))
    (finding,) = data_of(new)
    assert (finding.verdict, finding.place) == (DIFFERS, f"/fingerprints/{name}")


def test_fingerprints_on_the_cover_are_those_of_the_data(record, html):
    digits = record["fingerprints"]["inputs"][:12]
    forged = html.replace(f">inputs {digits}", ">inputs 0123456789ab", 1)
    found = list(data_findings(record_in(forged.encode(), "a.html"), record))
    assert [f.verdict for f in found] == [AGREES, DIFFERS]
    assert digits in found[1].text
