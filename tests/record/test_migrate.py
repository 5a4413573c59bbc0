"""Records of earlier formats."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from calcsheet.record.document import page_of, settled
from calcsheet.record.errors import RecordError
from calcsheet.record.migrate import FORMAT, migrated
from calcsheet.record.page import render_page

KEPT = sorted((Path(__file__).parent / "data").glob("format-*/*.json"))


def kept(path):
    return json.loads(path.read_text(encoding="utf-8"))


def test_one_record_of_each_earlier_format_is_kept():
    assert {kept(path)["format"] for path in KEPT} == set(range(1, FORMAT))


@pytest.mark.parametrize("path", KEPT, ids=lambda path: path.parent.name)
def test_it_reads_as_one_of_today(path):
    old = kept(path)
    new = migrated(old)
    assert new["format"] == FORMAT
    assert new["fingerprints"] == old["fingerprints"]
    assert {k: p["result"] for k, p in new["payloads"].items()} == {k: p["result"] for k, p in old["payloads"].items()}
    # the wording of an older record's cautions stays
    texts = [c["text"] for p in old["payloads"].values() for c in p["cautions"]]
    assert [c["text"] for p in new["payloads"].values() for c in p["cautions"]] == texts
    assert migrated(new) == new


def test_an_old_record_still_prints():
    html = render_page(page_of(settled(migrated(kept(KEPT[0]))), "html"), "html", "a4")
    assert "Alder Quay" in html


@pytest.mark.parametrize("form", [0, 3, "2", None, [1]])
def test_a_format_that_is_not_known_is_refused(form):
    with pytest.raises(RecordError, match="this version reads 1 to 2"):
        migrated({"format": form})
