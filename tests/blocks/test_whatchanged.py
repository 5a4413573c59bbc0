"""The block that holds the job against an issued revision."""

from __future__ import annotations

import json
import re

import pytest

from calcsheet.blocks import WhatChanged
from calcsheet.blocks.twin import MIME
from calcsheet.job.errors import InputError
from calcsheet.record.collect import collect


@pytest.fixture
def sheet(static, in_folder, cells):
    """The cells up to the modes, as they are run when a record is issued."""
    for source in cells[:4]:
        static.run(source)
    static.run("from calcsheet import WhatChanged")
    return static


@pytest.fixture
def issued(sheet, plain_record, in_folder):
    """Issues what the job holds now."""

    def write(revision, date="2026-03-09"):
        record = plain_record(sheet["job"].job)
        record["payloads"]["card"]["inputs"]["job"] |= {"revision": revision, "date": date}
        place = in_folder / "issued" / revision
        place.mkdir(parents=True)
        (place / "record.json").write_text(json.dumps(record), encoding="utf-8")

    return write


def words(sheet):
    return " ".join(re.sub(r"<[^>]*>", " ", sheet.twin("changes")["text/html"]).split())


def test_the_first_issue(sheet):
    sheet.run("WhatChanged(job)", "changes")
    assert words(sheet) == "First issue: nothing to compare."


def test_it_follows_every_step(sheet, issued):
    issued("0")
    sheet.run("WhatChanged(job)", "changes")
    assert "No input changed." in words(sheet)
    before = sheet.twin("changes")[MIME]["fingerprint"]
    sheet.run('storeys.set("3", "mass", 300)')
    assert "3 244.25 → 300.00" in words(sheet)
    assert "Mass above the effective base 1 142 t 1 197 t +4.9 %" in words(sheet).replace("\u202f", " ").replace(
        "\xa0", " "
    )
    assert sheet.twin("changes")[MIME]["fingerprint"] != before
    sheet.run('storeys.set("3", "mass", "abc")')
    assert words(sheet).startswith("Not compared: storeys is refused: ")
    sheet.run('storeys.set("3", "mass", 244.25)')
    assert "No input changed." in words(sheet)


def test_it_follows_the_jobs_own_revision(sheet, issued):
    issued("A")
    sheet.run("changes = WhatChanged(job)\nchanges", "changes")
    assert words(sheet) == "First issue: nothing to compare."
    sheet.run('job.set("job.revision", "B")')
    assert words(sheet).startswith("Against revision A of 2026-03-09")
    issued("B", "2026-04-01")
    sheet.run('job.set("job.revision", "C")')
    assert words(sheet).startswith("Against revision B of 2026-04-01")


def test_a_record_spoilt_meanwhile_is_named_where_the_numbers_would_stand(sheet, issued, in_folder):
    sheet.run("changes = WhatChanged(job)\nchanges", "changes")
    issued("A")
    (in_folder / "issued/A/record.json").write_text("{", encoding="utf-8")
    sheet.run('job.set("job.revision", "B")')
    assert words(sheet).startswith("record.json: no plain JSON")
    (in_folder / "issued/A/record.json").unlink()
    sheet.run('job.set("job.revision", "C")')
    assert words(sheet) == "First issue: nothing to compare."


def test_a_named_revision(sheet, issued):
    issued("0", "2026-01-01")
    issued("1", "2026-02-01")
    sheet.run('WhatChanged(job, against="0")', "changes")
    assert words(sheet).startswith("Against revision 0 of 2026-01-01")
    with pytest.raises(InputError, match=r'^against: got revision "7"; must be one of those issued: "0", "1"$'):
        WhatChanged(sheet["job"], against="7")
    with pytest.raises(TypeError, match=r"^WhatChanged: got a StoreyTable; must be a JobCard$"):
        WhatChanged(sheet["storeys"])


def test_a_record_can_be_collected_from_it(sheet, issued, cells):
    issued("0")
    notebook = sheet.executed([*cells[:4], "from calcsheet import WhatChanged", "WhatChanged(job)"])
    content = collect(notebook)
    assert content.payloads["earlier"]["inputs"]["revision"] == "0"
    assert content.parts[-1].view == "what changed"


def test_the_live_view_shows_the_same(shell, in_folder, cells):
    for source in cells[:4]:
        shell.run(source)
    shell.run("from calcsheet import WhatChanged\nWhatChanged(job)", "changes")
    assert shell.link("changes").state["html"] == "<p>First issue: nothing to compare.</p>"
