"""The three workflows as an engineer, a checker and an outsider do them from the shell."""

from __future__ import annotations

import csv
import json
import os
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

from calcsheet.record.pdf import FULL, engines

COMMAND = (sys.executable, "-c", "from calcsheet.cli import main; main()")


@pytest.fixture
def shell(tmp_path, monkeypatch):
    """Run a command line in a folder of its own; its exit code, output and errors."""
    monkeypatch.chdir(tmp_path)

    def run(*words, code=0):
        done = subprocess.run([*COMMAND, *words], capture_output=True, text=True, encoding="utf-8", timeout=240)
        assert done.returncode == code, done.stdout + done.stderr
        assert "Traceback" not in done.stderr
        return done.stdout if code == 0 else done.stdout + done.stderr

    return run


def revised(folder, revision, *changes):
    """Raise the revision and type new masses, as in a text editor."""
    card = folder / "job.toml"
    text = card.read_text(encoding="utf-8")
    text = text.replace('revision = "A"', f'revision = "{revision}"', 1).replace(
        "date = 2026-11-16", "date = 2026-11-30", 2
    )
    card.write_text(
        text.replace("First issue, for checking", "Masses revised after the plant was chosen"), encoding="utf-8"
    )
    table = folder / "storeys.csv"
    rows = list(csv.reader(table.read_text(encoding="utf-8").splitlines()))
    mass = next(i for i, heading in enumerate(rows[0]) if heading.startswith("mass"))
    for level, factor in changes:
        (row,) = [row for row in rows if row[0] == level]
        row[mass] = f"{float(row[mass]) * factor:.1f}"
    table.write_text("\n".join(",".join(row) for row in rows) + "\n", encoding="utf-8")


def test_build_revise_issue_check_comment_and_sign(shell, tmp_path):
    if FULL not in {engine.name for engine in engines()}:
        assert not os.environ.get("CALCSHEET_REQUIRE_TOOLS"), FULL
        pytest.skip(f"needs {FULL}")
    # build and issue
    assert "status FOR CHECKING" in shell("demo", "quay")
    (first,) = Path("quay/issued/A").glob("*.pdf")
    # an outsider with the file alone
    for kind in (".pdf", ".html", ".json"):
        outside = tmp_path / f"outside{kind}"
        outside.mkdir()
        shutil.copy(first.with_suffix(kind), outside / f"received{kind}")
        said = shell("check", str(outside / f"received{kind}"))
        assert "\nNothing differs" in said  # a JSON file has no print to be assessed
        assert [path.name for path in outside.iterdir()] == [f"received{kind}"]
    # the checker comments on it
    shell("comment", str(first), "Which plant is this mass for?", "--by", "Tomas Adeyemi", "--where", "Storeys, Plant")
    # the masses change, and a new revision is issued with the comment in it
    revised(Path("quay"), "B", ("Plant", 1.4), ("Roof", 1.1), ("4", 0.9))
    said = shell("issue", "quay")
    assert "status FOR CHECKING" in said
    assert "is issued already" in shell("issue", "quay", code=2)
    (second,) = Path("quay/issued/B").glob("*.pdf")
    record = json.loads(second.with_suffix(".json").read_text(encoding="utf-8"))
    assert [c["comment"] for c in record["comments"]] == ["Which plant is this mass for?"]
    # what changed
    said = shell("compare", str(first.with_suffix(".json")), str(second), code=1)
    for words in ("Plant", "Roof", "4", "First period T₁ in x"):
        assert words in said
    assert "level 2:" not in said
    # reply, close, sign twice
    shell("comment", "quay", "The chiller, 12 t.", "--reply", "1", "--by", "Ines Brandvik")
    assert "out of order" in shell("sign", str(second), "--role", "approved", "--name", "Ruth Oduya", code=2)
    assert "prepared it" in shell("sign", str(second), "--role", "checked", "--name", "Ines Brandvik", code=2)
    checker = ("--name", "Tomas Adeyemi", "--registration", "SE 11890", "--scope", "Mode 1 by hand", "--agree", "all")
    assert "status CHECKED" in shell("sign", str(second), "--role", "checked", *checker)
    signed = second.with_name(f"{second.stem}-checked.pdf")
    assert "open comments: 1" in shell("sign", str(signed), "--role", "approved", "--name", "Ruth Oduya", code=2)
    shell("comment", "quay", "--close", "1", "--by", "Tomas Adeyemi")
    assert "status APPROVED" in shell("sign", str(signed), "--role", "approved", "--name", "Ruth Oduya")
    approved = second.with_name(f"{second.stem}-approved.pdf")
    assert "\nNothing differs." in shell("check", str(approved))
    # the register
    with open("quay/issued/register.csv", encoding="utf-8-sig", newline="") as file:
        rows = list(csv.DictReader(file))
    assert [(r["revision"], r["status"], r["superseded by"]) for r in rows] == [
        ("A", "FOR CHECKING", "B"),
        ("B", "APPROVED", ""),
    ]
    assert rows[1]["checked by"] == "Tomas Adeyemi"
    # a digit changed by hand
    page = approved.with_suffix(".html")
    text = page.read_text(encoding="utf-8")
    place = text.index(">", text.index("/modes/result/models/0/modes/period/0")) + 1
    digit = text[place]
    page.write_text(text[:place] + str((int(digit) + 1) % 10) + text[place + 1 :], encoding="utf-8")
    assert "/modes/result/models/0/modes/period/0" in shell("check", str(page), code=1)
