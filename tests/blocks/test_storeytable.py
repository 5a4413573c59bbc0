"""The storey table as the page drives it: messages, answers, rows that keep their ids."""

from __future__ import annotations

import re

import pytest

from calcsheet.job import textfile


@pytest.fixture
def sheet(shell, in_folder, cells):
    for name, source in zip(("imports", "card", "storeys", "modes"), cells, strict=False):
        shell.run(source, name)
    return shell


@pytest.fixture
def link(sheet):
    return sheet.link("storeys")


@pytest.fixture
def file(sheet, in_folder):
    return in_folder / "storeys.csv"


def rows(link):
    return link.state["table"]["rows"]


def row(link, level):
    return next(r["id"] for r in rows(link) if r["cells"]["level"] == level)


def ids(link):
    return {r["cells"]["level"]: r["id"] for r in rows(link)}


def test_the_table_shows_the_file(link):
    table = link.state["table"]
    assert [(c["heading"], c["align"], c["editable"]) for c in table["columns"]] == [
        ("level", "left", True),
        ("storey height [m]", "right", True),
        ("mass [t]", "right", True),
        ("stiffness x [kN/m]", "right", True),
        ("stiffness y [kN/m]", "right", True),
        ("elevation [m]", "right", False),
        ("mass at and above [t]", "right", False),
        ("weight at and above [kN]", "right", False),
        ("mass / level below", "right", False),
    ]
    assert [r["cells"]["mass"] for r in table["rows"]] == ["141.5", "236", "244.25", "251", "268.75"]
    assert len({r["id"] for r in table["rows"]}) == 5
    assert all(r["errors"] == {} for r in table["rows"])
    assert "".join(table["totals"]["mass"].split()) == "1141.50"
    assert link.state["status"]["kind"] == "saved"


def test_a_cell_typed_is_saved_before_it_is_acknowledged(link, file):
    level = row(link, "3")
    reply = link.say(op="set", row=level, key="mass", text="250.5")
    assert reply == {"op": "ack", "seq": 0, "ok": True, "message": ""}
    assert "3,3.3,250.5,152000,141000" in file.read_text()
    assert rows(link)[2]["cells"]["mass"] == "250.5"
    state = next(i for i, m in enumerate(link.sent) if "250.5" in str(m.get("state")))
    answer = next(i for i, m in enumerate(link.sent) if m.get("method") == "custom")
    assert state < answer  # the page has the new state when it hears that it is done
    status = link.state["status"]
    assert status["kind"] == "saved"
    assert re.fullmatch(r"saved to storeys\.csv at \d\d:\d\d:\d\d", status["text"])


def test_a_wrong_cell_is_marked_and_never_reaches_the_solver(link, sheet, file):
    assert link.say(op="set", row=row(link, "3"), key="mass", text="-12")["ok"]
    sentence = 'storeys.csv, level "3": mass -12 t; must be above 0'
    marked = {r["cells"]["level"]: r["errors"] for r in rows(link) if r["errors"]}
    assert marked == {"3": {"mass": sentence}}
    assert link.state["status"]["kind"] == "waiting"
    assert link.state["status"]["text"].endswith("; the blocks below wait for the values marked here")
    assert link.state["table"]["totals"] == {}
    assert ",-12," in file.read_text()
    assert sheet.link("modes").state["note"]["kind"] == "waiting"
    link.say(op="set", row=row(link, "3"), key="mass", text="244.25")
    assert all(r["errors"] == {} for r in rows(link))
    assert link.state["status"]["kind"] == "saved"


def test_a_level_named_twice_is_marked_at_its_name(link):
    link.say(op="set", row=row(link, "3"), key="level", text="4")
    assert [sorted(r["errors"]) for r in rows(link)] == [[], [], ["level"], [], []]
    assert "named in rows" in rows(link)[2]["errors"]["level"]


def test_rows_keep_their_ids(link):
    before = ids(link)
    link.say(op="insert", row=before["3"])
    assert [r["cells"]["level"] for r in rows(link)] == ["Roof", "4", "3", "", "2", "1"]
    fresh = rows(link)[3]["id"]
    assert fresh not in before.values()
    assert {level: i for level, i in ids(link).items() if level} == before
    link.say(op="set", row=fresh, key="level", text="2 upper")
    assert rows(link)[3]["id"] == fresh
    link.say(op="delete", row=before["4"])
    assert ids(link) == {level: i for level, i in (before | {"2 upper": fresh}).items() if level != "4"}
    link.say(op="set", row=before["Roof"], key="level", text="Top")
    assert rows(link)[0]["id"] == before["Roof"]


def test_a_row_at_the_top_and_ids_never_used_twice(link):
    before = ids(link)
    link.say(op="insert", row=None)
    first = rows(link)[0]["id"]
    link.say(op="delete", row=first)
    link.say(op="insert", row=None)
    assert rows(link)[0]["id"] not in {first, *before.values()}
    assert [r["id"] for r in rows(link)[1:]] == list(before.values())


def test_rows_of_one_name_are_told_apart(link):
    before = ids(link)
    link.say(op="set", row=before["3"], key="level", text="2")
    link.say(op="delete", row=before["3"])
    assert [r["id"] for r in rows(link)] == [before[level] for level in ("Roof", "4", "2", "1")]


def test_a_row_that_is_gone_is_answered_in_words(link, file):
    gone = row(link, "4")
    link.say(op="delete", row=gone)
    text = file.read_text()
    for op in ("set", "paste", "insert", "delete"):
        reply = link.say(op=op, row=gone, key="mass", text="1")
        assert reply["ok"] is False
        assert reply["message"] == "this row is no longer in the table; type into the table as it now stands"
    assert file.read_text() == text


def test_a_block_is_pasted_and_the_table_grows(link, file):
    before = ids(link)
    assert link.say(op="paste", row=before["2"], key="mass", text="1\t2\n3\t4\n5\t6\n7\t8\n")["ok"]
    assert [(r["cells"]["mass"], r["cells"]["stiffness x"]) for r in rows(link)[3:]] == [
        ("1", "2"),
        ("3", "4"),
        ("5", "6"),
        ("7", "8"),
    ]
    assert len(rows(link)) == 7
    assert [r["id"] for r in rows(link)[:5]] == list(before.values())
    assert len(file.read_text().splitlines()) == 8
    assert "level" in rows(link)[5]["errors"]  # new rows want their names


def test_a_paste_too_wide_changes_nothing(link, file):
    text = file.read_text()
    reply = link.say(op="paste", row=row(link, "2"), key="stiffness y", text="1\t2\t3")
    assert reply["ok"] is False
    assert "3 columns pasted from stiffness y; must be at most 1" in reply["message"]
    assert file.read_text() == text


def test_words_for_what_the_table_does_not_know(link):
    assert link.say(op="set", row=row(link, "2"), key="colour", text="1")["message"].startswith(
        'storeys.csv: no column "colour"'
    )
    assert link.say(op="sort", row=None)["message"] == "sort is not known to the storey table; must be an edit of a row"


def test_a_conflict_is_shown_and_answered(link, sheet, file):
    theirs = file.read_text().replace("Roof,2.95,141.5", "Roof,2.95,190")
    file.write_text(theirs)
    reply = link.say(op="set", row=row(link, "4"), key="mass", text="240")
    assert reply["ok"]  # it is in the table, though not in the file: the status says so
    assert link.state["status"]["kind"] == "conflict"
    assert rows(link)[1]["cells"]["mass"] == "240"
    assert file.read_text() == theirs
    assert sheet.link("modes").state["note"]["kind"] == "waiting"
    assert link.say(op="keep")["ok"]
    assert link.state["status"]["kind"] == "saved"
    assert "4,3.3,240," in file.read_text()
    assert "141.5" in file.read_text()


def test_a_conflict_ended_by_loading(link, sheet, file):
    file.write_text(file.read_text().replace("Roof,2.95,141.5", "Roof,2.95,190"))
    assert link.say(op="look")["ok"]
    assert link.state["status"]["kind"] == "conflict"
    assert link.say(op="load")["ok"]
    assert link.state["status"]["kind"] == "saved"
    assert rows(link)[0]["cells"]["mass"] == "190"
    assert sheet.link("modes").state["note"] == {}


def test_what_cannot_be_saved_is_kept_and_said(link, file, monkeypatch):
    before = file.read_text()
    with monkeypatch.context() as patch:
        patch.setattr(textfile.os, "access", lambda *_: False)
        link.say(op="set", row=row(link, "2"), key="mass", text="255")
    assert link.state["status"]["kind"] == "error"
    assert "not saved, the file is read-only or held open by another program" in link.state["status"]["text"]
    assert rows(link)[3]["cells"]["mass"] == "255"
    assert file.read_text() == before
    link.say(op="set", row=row(link, "2"), key="mass", text="256")
    assert link.state["status"]["kind"] == "saved"
    assert "256" in file.read_text()


def test_the_api_edits_rows_and_columns(sheet, file):
    storeys = sheet["storeys"]
    storeys.insert("1")
    storeys.paste(5, "level", "Pit\t2.4\t90\t300000\t310000")
    assert file.read_text().splitlines()[-1] == "Pit,2.4,90,300000,310000"
    storeys.remove("Pit")
    storeys.set("Roof", "mass", "142,5")  # as typed: one number only, whatever the decimal mark
    assert "Roof,2.95,142.5," in file.read_text()
    storeys.set(0, "mass", 143.25)
    assert "Roof,2.95,143.25," in file.read_text()
    storeys.undo()
    storeys.undo()
    assert "Roof,2.95,141.5," in file.read_text()
    storeys.redo()
    assert "Roof,2.95,142.5," in file.read_text()


# ---- ranges, undo, calculated columns ----------------------------------------------------------------------------------


def computed(link, name):
    return [r["cells"].get(f"={name}", "") for r in rows(link)]


def test_ranges_are_cleared_filled_deleted_and_moved(link):
    before = ids(link)
    assert link.say(op="fill", row=before["Roof"], last=before["3"], keys=["mass"])["ok"]
    assert [r["cells"]["mass"] for r in rows(link)] == ["141.5", "141.5", "141.5", "251", "268.75"]
    assert link.say(op="move", row=before["4"], last=before["3"], by=1)["ok"]
    assert ids(link) == before
    assert [r["cells"]["level"] for r in rows(link)] == ["Roof", "2", "4", "3", "1"]
    assert link.say(op="clear", row=before["4"], last=before["3"], keys=["mass", "stiffness x"])["ok"]
    assert [r["cells"]["mass"] for r in rows(link)] == ["141.5", "251", "", "", "268.75"]
    assert link.say(op="delete", row=before["4"], last=before["3"])["ok"]
    assert [r["cells"]["level"] for r in rows(link)] == ["Roof", "2", "1"]
    assert link.say(op="insert", row=before["Roof"], count=2)["ok"]
    assert [r["cells"]["level"] for r in rows(link)] == ["Roof", "", "", "2", "1"]


def test_every_edit_is_undone_in_one_step_and_done_again(link, file):
    texts = [file.read_text()]
    before = ids(link)
    for message in (
        {"op": "set", "row": before["4"], "key": "mass", "text": "240"},
        {"op": "paste", "row": before["2"], "key": "mass", "text": "1\t2\n3\t4\n5\t6\n"},
        {"op": "fill", "row": before["Roof"], "last": before["3"], "keys": ["storey height", "mass"]},
        {"op": "clear", "row": before["Roof"], "last": before["1"], "keys": ["mass"]},
        {"op": "move", "row": before["Roof"], "last": before["4"], "by": 1},
        {"op": "delete", "row": before["3"], "last": before["2"]},
        {"op": "insert", "row": None},
    ):
        assert link.say(**message)["ok"]
        texts.append(file.read_text())
    assert len({*texts}) == len(texts)
    for text in texts[-2::-1]:
        assert link.say(op="undo")["ok"]
        assert file.read_text() == text
    assert link.state["history"] == {"undo": "", "redo": "mass typed"}
    assert link.say(op="undo")["message"] == "nothing to undo; no further edit is remembered"
    for text in texts[1:]:
        assert link.say(op="redo")["ok"]
        assert file.read_text() == text
    assert link.say(op="redo")["ok"] is False
    assert link.state["history"] == {"undo": "rows inserted", "redo": ""}


def test_undo_works_after_the_cell_was_run_again_and_over_all_views(link, sheet, file):
    text = file.read_text()
    link.say(op="set", row=row(link, "4"), key="mass", text="240")
    other = sheet.run("storeys", "second view") and sheet.link("second view")
    sheet.run("storeys = StoreyTable(job)\nstoreys", "storeys")
    again = sheet.link("storeys")
    assert again is not link
    assert again.state["history"]["undo"] == "mass typed"
    assert again.say(op="undo")["ok"]
    assert file.read_text() == text
    assert [r["cells"]["mass"] for r in rows(other)] == [r["cells"]["mass"] for r in rows(again)]
    assert other.say(op="redo")["ok"]
    assert rows(again)[1]["cells"]["mass"] == "240"


def test_what_a_conflict_gave_up_is_brought_back_by_undoing(link, file):
    theirs = file.read_text().replace("Roof,2.95,141.5", "Roof,2.95,190")
    file.write_text(theirs)
    link.say(op="set", row=row(link, "4"), key="mass", text="240")
    assert link.state["differences"] == {
        "cells": [
            {"row": "Roof", "column": "mass [t]", "here": "141.5", "there": "190"},
            {"row": "4", "column": "mass [t]", "here": "240", "there": "236"},
        ],
        "more": 0,
    }
    link.say(op="load")
    assert link.state["history"]["undo"] == "storeys.csv loaded from disk"
    assert link.state["differences"] == {"cells": [], "more": 0}
    link.say(op="undo")
    assert "4,3.3,240," in file.read_text()
    file.write_text(theirs)
    link.say(op="look")
    link.say(op="keep")
    assert link.state["history"]["undo"] == "keeping what was here"
    assert "4,3.3,240," in file.read_text()
    link.say(op="undo")
    assert file.read_text() == theirs


def test_calculated_columns_against_sums_by_hand(link):
    # base 1.2 m; heights 4.4, 3.65, 3.3, 3.3, 2.95; masses 268.75, 251, 244.25, 236, 141.5 (base up)
    assert computed(link, "elevation") == ["18.80", "15.85", "12.55", "9.25", "5.60"]
    assert computed(link, "mass at and above") == ["141.50", "377.50", "621.75", "872.75", "1\u202f141.50"]
    assert computed(link, "mass / level below") == ["0.600", "0.966", "0.973", "0.934", ""]
    weights = [141.5 * 9.80665, 1141.5 * 9.80665]
    shown = [float(text.replace("\u202f", "")) for text in computed(link, "weight at and above")]
    assert [shown[0], shown[-1]] == pytest.approx(weights, abs=0.5)
    totals = link.state["table"]["totals"]
    assert float(totals["=weight at and above"].replace("\u202f", "")) == pytest.approx(weights[1], abs=0.5)


def test_a_wrong_cell_leaves_open_what_depends_on_it_and_nothing_else(link):
    link.say(op="set", row=row(link, "3"), key="mass", text="heavy")
    link.say(op="set", row=row(link, "4"), key="storey height", text="")
    assert computed(link, "elevation") == ["", "", "12.55", "9.25", "5.60"]
    assert computed(link, "mass at and above") == ["141.5", "377.5", "", "", ""]
    assert computed(link, "mass / level below") == ["0.600", "", "", "0.934", ""]
    assert link.state["table"]["totals"] == {}
