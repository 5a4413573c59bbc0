"""Whole or absent: builds killed at every stage, and many who want one revision at once."""

from __future__ import annotations

import errno
import json
import os
import subprocess
import sys
import time
from pathlib import Path

import pytest

import calcsheet
from calcsheet.record import place
from calcsheet.record.errors import RecordError
from calcsheet.record.place import BUILDING, placed, placed_beside

FILES = {"r.html": b"<p>", "r.json": b"{}", "tables/index.csv": b"file\r\n"}
SIGNED = {"s.html": b"<b>", "s.pdf": b"%PDF", "s.json": b'{"signed": 1}'}
KILLED = 9
RACERS = 40

BEGIN = """
import os, sys
from pathlib import Path
from calcsheet.record import place
def die(*_): os._exit(9)
"""
"""A process that dies at a stage which the lines after this choose."""
STAGES = {
    "before the first file": "place._write = die",
    "after the first file": "write = Path.write_bytes; Path.write_bytes = lambda p, b: (write(p, b), die())",
    "within a file": "Path.write_bytes = lambda p, b: (p.open('wb').write(b[:1]), die())",
    "before the move": "os.rename = die",
    "after the move": "move = os.rename; os.rename = lambda *a: (move(*a), die())",
}
SIGNING = {
    "before the first file": ("place._write = die", []),
    "before the move": ("place._move = die", []),
    "after the data": ("move = place._move; place._move = lambda *a: (move(*a), die())", ["s.json"]),
    "before the last": (
        "move = place._move; place._move = lambda s, p: die() if p.suffix == '.pdf' else move(s, p)",
        ["s.html", "s.json"],
    ),
}


def python(code: str, *arguments: object) -> subprocess.Popen[str]:
    path = str(Path(calcsheet.__file__).parents[1])
    return subprocess.Popen(
        [sys.executable, "-c", code, *map(str, arguments)],
        text=True,
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        env={**os.environ, "PYTHONPATH": path},
    )


def visible(folder: Path) -> list[str]:
    return sorted(p.name for p in folder.iterdir() if not p.name.startswith(BUILDING))


def content(folder: Path) -> dict[str, bytes]:
    return {p.relative_to(folder).as_posix(): p.read_bytes() for p in folder.rglob("*") if p.is_file()}


def test_a_revision_is_its_files_and_nothing_else(tmp_path):
    target = tmp_path / "issued" / "A"
    assert placed(target, FILES) == tuple(target / name for name in FILES)
    assert content(tmp_path) == {f"issued/A/{name}": data for name, data in FILES.items()}
    if os.name == "posix":
        assert target.stat().st_mode & 0o777 == 0o755


def test_a_revision_that_is_there_is_refused_with_the_remedy(tmp_path):
    placed(tmp_path / "A", FILES)
    with pytest.raises(RecordError) as caught:
        placed(tmp_path / "A", {"r.json": b"other"})
    assert str(caught.value) == (
        f'revision "A" is issued already, in {tmp_path / "A"}; raise job.revision in job.toml to issue the next'
    )
    assert content(tmp_path / "A") == FILES
    assert visible(tmp_path) == ["A"]


@pytest.mark.parametrize("name", ["../out.json", "/out.json", "a/../../out.json", "..\\out.json", "c:out.json"])
def test_a_name_never_leads_out_of_the_folder(tmp_path, name):
    with pytest.raises(ValueError, match="must lead into the folder"):
        placed(tmp_path / "issued" / "A", {name: b""})
    assert content(tmp_path) == {}


@pytest.mark.parametrize("stage", STAGES)
def test_killed_at_any_stage_it_is_whole_or_absent_and_the_next_succeeds(tmp_path, stage):
    target = tmp_path / "issued" / "A"
    call = f"place.placed(Path(sys.argv[1]), {FILES!r})"
    process = python(f"{BEGIN}{STAGES[stage]}\n{call}", target)
    assert process.wait(60) == KILLED, process.stderr.read()
    if stage == "after the move":
        assert content(target) == FILES
    else:
        assert visible(tmp_path / "issued") == []
        placed(target, FILES)
    placed(target.with_name("B"), FILES)
    assert content(target) == content(target.with_name("B")) == FILES


def test_what_a_killed_build_left_goes_after_a_day(tmp_path):
    old, young = tmp_path / f"{BUILDING}old", tmp_path / f"{BUILDING}young"
    for folder, age in ((old, 25 * 3600), (young, 23 * 3600)):
        folder.mkdir()
        (folder / "r.json").write_bytes(b"{")
        os.utime(folder, (time.time() - age,) * 2)
    placed(tmp_path / "A", FILES)
    assert sorted(p.name for p in tmp_path.iterdir()) == [young.name, "A"]


def test_of_forty_who_want_one_revision_one_wins_and_the_others_are_told(tmp_path):
    code = (
        "import sys, time\nfrom pathlib import Path\nfrom calcsheet.record.place import placed\n"
        "from calcsheet.record.errors import RecordError\n"
        "target, me, gate = Path(sys.argv[1]), sys.argv[2], Path(sys.argv[3])\n"
        "(gate / me).touch()\n"
        f"while len(list(gate.iterdir())) < {RACERS}: time.sleep(0.01)\n"
        "try: placed(target, {'r.json': me.encode(), 'r.html': me.encode()}); print('won')\n"
        "except RecordError as error: print(error)\n"
    )
    gate = tmp_path / "gate"
    gate.mkdir()
    target = tmp_path / "issued" / "A"
    racers = [python(code, target, me, gate) for me in range(RACERS)]
    told = [racer.communicate(timeout=120) for racer in racers]
    assert [wrong for _, wrong in told if wrong] == []
    (winner,) = (me for me, (said, _) in enumerate(told) if said == "won\n")
    sentence = f'revision "A" is issued already, in {target}; raise job.revision in job.toml to issue the next\n'
    assert [said for me, (said, _) in enumerate(told) if me != winner] == [sentence] * (RACERS - 1)
    assert content(target) == {"r.json": str(winner).encode(), "r.html": str(winner).encode()}
    assert os.listdir(tmp_path / "issued") == ["A"]


# ---- beside a record -------------------------------------------------------------------------------------------------


@pytest.fixture
def folder(tmp_path):
    placed(tmp_path / "A", FILES)
    return tmp_path / "A"


def test_signed_files_lie_beside_those_that_were_issued(folder):
    assert placed_beside(folder, SIGNED) == tuple(folder / name for name in SIGNED)
    assert content(folder) == FILES | SIGNED
    assert visible(folder) == sorted(os.listdir(folder))


@pytest.mark.parametrize("there", ["s.html", "s.json"])
def test_nothing_is_overwritten_and_nothing_half_placed(folder, there):
    (folder / there).write_bytes(b"somebody's")
    with pytest.raises(RecordError) as caught:
        placed_beside(folder, SIGNED)
    assert str(caught.value) == (
        f"{there} is there already, in {folder}; an issued file is never overwritten: read who signed it first"
    )
    assert content(folder) == FILES | {there: b"somebody's"}


def test_one_who_comes_second_between_look_and_move_is_told(folder, monkeypatch):
    move = place._move

    def after_another(source, path):
        path.write_bytes(b"another's")
        move(source, path)

    monkeypatch.setattr(place, "_move", after_another)
    with pytest.raises(RecordError, match=r"^s\.json is there already"):
        placed_beside(folder, SIGNED)
    assert content(folder) == FILES | {"s.json": b"another's"}


def test_a_set_has_one_data_file(folder):
    with pytest.raises(ValueError, match="values to unpack"):
        placed_beside(folder, {"s.html": b""})


@pytest.mark.parametrize("stage", SIGNING)
def test_a_signing_killed_leaves_no_print_without_its_data_and_is_completed(folder, stage):
    patch, left = SIGNING[stage]
    process = python(f"{BEGIN}{patch}\nplace.placed_beside(Path(sys.argv[1]), {SIGNED!r})", folder)
    assert process.wait(60) == KILLED, process.stderr.read()
    assert [name for name in visible(folder) if name in SIGNED] == left
    assert all((folder / name).read_bytes() == SIGNED[name] for name in left)
    placed_beside(folder, SIGNED)
    assert {name: (folder / name).read_bytes() for name in FILES | SIGNED} == FILES | SIGNED
    with pytest.raises(RecordError, match="is there already"):  # complete: no second time
        placed_beside(folder, SIGNED)


def test_another_signature_does_not_complete_a_set(folder):
    (folder / "s.json").write_bytes(b'{"signed": 2}')
    with pytest.raises(RecordError, match=r"^s\.json is there already"):
        placed_beside(folder, SIGNED)


@pytest.mark.skipif(os.name != "posix", reason="links are not used there")
def test_a_file_system_without_links_is_exclusive_too(folder, monkeypatch):
    def none(*_):
        raise OSError(errno.EPERM, "no links here")

    monkeypatch.setattr(place.os, "link", none)
    placed_beside(folder, SIGNED)
    assert content(folder) == FILES | SIGNED
    with pytest.raises(FileExistsError):
        place._move(folder / "s.json", folder / "s.html")
    assert content(folder) == FILES | SIGNED


def test_of_many_who_sign_at_once_one_wins_wholly(folder):
    code = (
        "import sys, time, json\nfrom pathlib import Path\nfrom calcsheet.record.place import placed_beside\n"
        "from calcsheet.record.errors import RecordError\n"
        "folder, me, gate = Path(sys.argv[1]), sys.argv[2], Path(sys.argv[3])\n"
        "(gate / me).touch()\n"
        "while len(list(gate.iterdir())) < 8: time.sleep(0.01)\n"
        "try: placed_beside(folder, {'s.html': me.encode(), 's.json': me.encode()}); print('won')\n"
        "except RecordError as error: print(error)\n"
    )
    gate = folder.parent / "gate"
    gate.mkdir()
    signers = [python(code, folder, me, gate) for me in range(8)]
    told = [signer.communicate(timeout=60) for signer in signers]
    assert [wrong for _, wrong in told if wrong] == []
    (winner,) = (me for me, (said, _) in enumerate(told) if said == "won\n")
    assert all("is there already" in said for me, (said, _) in enumerate(told) if me != winner)
    assert json.loads((folder / "s.json").read_bytes()) == json.loads((folder / "s.html").read_bytes()) == winner
    assert sorted(os.listdir(folder)) == ["r.html", "r.json", "s.html", "s.json", "tables"]
