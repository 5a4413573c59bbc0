"""A record opened: of the present format and its schema, or refused in a sentence."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from calcsheet.record.errors import RecordError
from calcsheet.record.migrate import FORMAT
from calcsheet.record.opened import opened

ISSUED = Path(__file__).parents[2] / "example_notebooks" / "alder-quay" / "issued"


@pytest.mark.parametrize("kind", ["html", "pdf", "json"])
def test_every_kind_of_file_gives_the_same_record(kind):
    path = min(ISSUED.glob(f"*/*.{kind}"))
    assert opened(path) == opened(path.with_suffix(".json"))
    assert opened(path)["format"] == FORMAT


@pytest.mark.parametrize(
    "data",
    [
        {},
        {"payloads": {}},
        {"payloads": {}, "format": 1},
        {"payloads": {"card": []}, "format": 1, "notebook": []},
        {"payloads": {}, "format": 2},
        {"payloads": {}, "format": 99},
        {"payloads": {}, "format": "2"},
        {"payloads": {}, "format": None},
        {"payloads": {}, "format": [2]},
    ],
)
def test_what_is_no_record_is_refused(tmp_path, data):
    path = tmp_path / "r.json"
    path.write_text(json.dumps(data), encoding="utf-8")
    with pytest.raises(RecordError) as caught:
        opened(path)
    assert "\n" not in str(caught.value)


def test_one_member_of_another_kind_is_named(tmp_path):
    data = opened(min(ISSUED.glob("*/*.json")))
    data["comments"] = [{"number": "one"}]
    path = tmp_path / "r.json"
    path.write_text(json.dumps(data), encoding="utf-8")
    with pytest.raises(RecordError, match=r"^r\.json: its data are no record: /comments/0"):
        opened(path)
