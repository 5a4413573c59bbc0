"""A whole check: of records as issued, of forgeries, of an earlier format."""

from __future__ import annotations

import copy
import json
import shutil
from pathlib import Path

import pytest

from calcsheet.record.check.finding import AGREES, DIFFERS, NOT_ASSESSED
from calcsheet.record.check.report import checked, report_on
from calcsheet.record.document import settled
from calcsheet.record.errors import RecordError
from calcsheet.record.files import html_of, json_of
from calcsheet.record.fingerprints import covered, fingerprints_of
from calcsheet.record.recordfile import record_in

FORMAT_1 = Path(__file__).parents[1] / "data" / "format-1"


def reported(record):
    return report_on(record_in(json_of(record), "a.json"), "a.json")


def test_html_pdf_and_json_as_issued_agree(record, html, paged_record, pdf, written):
    for name, content in (("a.html", html), ("b.pdf", pdf), ("c.json", json_of(record))):
        report = checked(written(name, content))
        assert report.exit_code == 0, report.words()
        assert report.file == name
        assert report.title == f"LY-07 revision C, FOR CHECKING, made by {record['programme']}"
        agree = {part for part, verdict in report.as_json()["parts"].items() if verdict == AGREES}
        assert agree >= {"data", "replay", "second route", "signatures"}
        assert ("print" in agree) == (name != "c.json")


def test_the_file_alone_is_enough(html, tmp_path, monkeypatch):
    (tmp_path / "alone").mkdir()
    monkeypatch.chdir(tmp_path / "alone")
    Path("a.html").write_text(html, encoding="utf-8")
    assert checked(Path("a.html")).exit_code == 0
    assert [p.name for p in Path().iterdir()] == ["a.html"]


FORGED = (
    ("storeys", "inputs", "mass", 1),
    ("storeys", "inputs", "stiffness", 0, "lateral", "y", "storey", 2),
    ("storeys", "inputs", "gravity", 0),
    ("storeys", "inputs", "storey_height", 0),
    ("storeys", "result", "weight"),
    ("modes", "result", "models", 0, "modes", "omega", 0),
    ("modes", "result", "models", 1, "modes", "psi", 2, 2),
    ("modes", "result", "models", 0, "bounds", "rayleigh"),
    ("modes", "lines", 0, "result", "value"),
    ("modes", "evidence", 0, "limit"),
    ("participation", "result", "directions", 0, "share", 0),
    ("participation", "lines", 0, "numbers", 0, "value"),
    ("card", "inputs", "basis", "ground_acceleration"),
    ("basis", "inputs", "edition", "q_x"),
    ("demand", "result", "directions", 1, "curve", 50),
    ("demand", "result", "directions", 0, "ordinate", 2),
    ("peaks", "result", "directions", 0, "shear", 1, 1),
    ("peaks", "result", "directions", 1, "forces", "drift", 0),
    ("drift", "result", "directions", 0, "share", 1),
    ("actions", "result", "directions", 1, "design_base_shear"),
)


@pytest.mark.parametrize("path", FORGED, ids=lambda path: "/".join(map(str, path)))
def test_a_forger_who_makes_all_fingerprints_anew_is_found_by_recalculation(record, path):
    """One number changed, fingerprints, signatures and print made again from it: the steps run again don't give it.

    What can't be found: inputs changed together with everything that follows from them, which is another record, signed
    by nobody; inputs that nothing follows from, such as a lower bound that doesn't govern; evidence that stays as small.
    """
    new = copy.deepcopy(record)
    *way, last = ("payloads", *path)
    place = new
    for step in way:
        place = place[step]
    place[last] *= 1.001
    now = covered(fingerprints_of(new))
    new["signatures"] = [{**s, "covers": now} for s in new["signatures"]]
    report = reported(settled(new))
    found = report.as_json()["parts"]
    assert found["signatures"] == AGREES or "status" in report.words()
    assert report.exit_code == 1
    assert any(
        f.verdict == DIFFERS and (f.part in ("replay", "second route") or "inputs" in f.place) for f in report.findings
    )


def test_a_difference_names_its_step(record):
    new = copy.deepcopy(record)
    new["payloads"]["drift"]["result"]["directions"][0]["share"][1] *= 1.001
    found = [f for f in reported(new).findings if f.verdict == DIFFERS]
    assert {f.place for f in found if f.part == "replay"} == {"step drift"}
    assert {f.place for f in found if f.part == "data"} == {"/fingerprints/results"}


def test_words_of_this_version_are_run_again_too(record):
    new = copy.deepcopy(record)
    new["payloads"]["modes"]["lines"][0]["reference"] = "hearsay"
    assert "hearsay" in reported(new).words()
    new["layout"]["code"] = "0" * 64
    report = reported(settled(new))
    assert [f.verdict for f in report.findings if f.part == "replay"] == [AGREES, NOT_ASSESSED]


def test_numbers_in_words_of_another_version_must_stand_in_the_result(record):
    new = copy.deepcopy(record)
    new["layout"]["code"] = "0" * 64
    new["payloads"]["modes"]["lines"][0]["result"]["value"] *= 1.001
    found = [f for f in reported(settled(new)).findings if f.part == "replay" and f.verdict == DIFFERS]
    assert [f.place for f in found] == ["step modes"]
    assert "must be what stands at its place" in found[0].text


def test_a_step_of_another_version_is_not_assessed(record):
    new = copy.deepcopy(record)
    new["payloads"]["actions"]["version"] = 99
    found = [f for f in reported(settled(new)).findings if f.part == "replay"]
    assert (found[0].verdict, found[0].place) == (NOT_ASSESSED, "step actions")
    assert f"install {record['programme']}" in found[0].text


@pytest.mark.parametrize("kind", ["json", "html"])
def test_records_of_format_1_stay_checkable(kind):
    (path,) = FORMAT_1.glob(f"*.{kind}")
    report = checked(path)
    assert report.exit_code == 0, report.words()
    parts = report.as_json()["parts"]
    assert parts["data"] == parts["replay"] == parts["second route"] == AGREES
    assert parts["signatures"] == NOT_ASSESSED
    if kind == "html":
        assert "730 printed numbers are those of the data" in report.words()
    assert "not everything was assessed" in report.words()


def test_a_digit_changed_in_print_or_data_of_format_1_is_found(tmp_path):
    (path,) = FORMAT_1.glob("*.html")
    html = path.read_text(encoding="utf-8")
    start = html.index("<data", html.index('id="inputs"'))
    digit = html.index(">", start) + 1
    assert html[digit].isdigit()
    forged = tmp_path / "a.html"
    forged.write_text(f"{html[:digit]}{(int(html[digit]) + 1) % 10}{html[digit + 1 :]}", encoding="utf-8")
    found = [f for f in checked(forged).findings if f.verdict == DIFFERS]
    assert [f.part for f in found] == ["print"]
    (path,) = FORMAT_1.glob("*.json")
    record = json.loads(path.read_text(encoding="utf-8"))
    record["payloads"]["storeys"]["inputs"]["mass"][0] += 1
    assert {"data", "replay", "second route"} <= {f.part for f in reported(record).findings if f.verdict == DIFFERS}


@pytest.mark.parametrize("form", [0, 3, "2", None, [], 1.5])
def test_unknown_formats_are_refused(record, form):
    with pytest.raises(RecordError, match=r"^a.json: "):
        reported({**record, "format": form})


def test_work_is_bounded(record):
    new = copy.deepcopy(record)
    new["payloads"]["storeys"]["inputs"]["level"] = ["x"] * 2001
    with pytest.raises(RecordError, match="2001 levels in 9 steps; at most 2000"):
        reported(new)
    new["payloads"]["storeys"]["inputs"]["level"] = ["x"] * 1900
    new["payloads"] |= {f"modes {i}": new["payloads"]["modes"] for i in range(60)}
    with pytest.raises(RecordError, match="1900 levels in 69 steps"):
        reported(new)
    new["payloads"] |= {f"modes {i}": new["payloads"]["modes"] for i in range(100)}
    with pytest.raises(RecordError, match="schema"):
        reported(new)


def test_a_copy_under_another_name_is_the_same_record(html, tmp_path):
    path = tmp_path / "sent by post (2).txt"
    path.write_text(html, encoding="utf-8")
    shutil.copy(path, tmp_path / "b")
    assert checked(tmp_path / "b").exit_code == 0


def test_the_print_of_a_forged_record_made_again_agrees_but_nothing_else(record):
    """The whole file forged with care: the print is true to the data, the data are not true to themselves."""
    new = copy.deepcopy(record)
    new["payloads"]["modes"]["result"]["models"][0]["modes"]["period"][0] *= 1.01
    now = covered(fingerprints_of(new))
    new["signatures"] = [{**s, "covers": now} for s in new["signatures"]]
    new = settled(new)
    parts = report_on(record_in(html_of(new).encode(), "a.html"), "a.html").as_json()["parts"]
    assert (parts["print"], parts["data"], parts["replay"]) == (AGREES, AGREES, DIFFERS)
