"""The layout: what two records must share to print alike."""

from __future__ import annotations

import subprocess
import sys
from importlib.resources import files

from calcsheet.record import layout
from calcsheet.record.layout import NOT_PRINTING, layout_of


def test_it_names_paper_engine_and_libraries():
    found = layout_of("letter", "Engine 1")
    assert found["paper"] == "letter"
    assert found["engine"] == "Engine 1"
    assert {"matplotlib", "jinja2", "fonttools"} <= found["libraries"].keys()
    assert len(found["code"]) == 64


def test_what_is_said_to_print_nothing_is_loaded_by_no_page():
    code = "import calcsheet.record.files, sys; print(*(m for m in sys.modules if m.startswith('calcsheet.')))"
    loaded = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stdout.split()
    for path in NOT_PRINTING:
        assert files("calcsheet").joinpath(path).is_file() or files("calcsheet").joinpath(path).is_dir(), path
        assert f"calcsheet.{path.removesuffix('.py').replace('/', '.')}" not in loaded


def test_a_change_of_what_prints_changes_it(tmp_path, monkeypatch):
    for name in ("units.py", "steps/a.py", "render/b.py", "record/page/c.css", "record/check/d.py"):
        (tmp_path / name).parent.mkdir(parents=True, exist_ok=True)
        (tmp_path / name).write_text("x = 1\n")
    monkeypatch.setattr(layout, "files", lambda _: tmp_path)

    def code():
        layout.code.cache_clear()
        return layout.code()

    before = code()
    (tmp_path / "record/check/d.py").write_text("x = 2\n")
    (tmp_path / "steps/a.py").write_bytes(b"x = 1\r\n")
    assert code() == before
    (tmp_path / "record/page/c.css").write_text("x = 3\n")
    assert code() != before
    layout.code.cache_clear()
