"""Whatever is pasted or done in the storey table: nothing raises in a callback, and rows not asked for stay as they were."""

from __future__ import annotations

import shutil
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calcsheet.blocks import JobCard, StoreyTable
from calcsheet.job.clipboard import read_block
from calcsheet.job.storeycells import FILE
from calcsheet.job.table import parse_table
from calcsheet.job.textfile import read
from calcsheet.resources import DEMO, folder

KEYS = ["level", "storey height", "mass", "stiffness x", "stiffness y"]
NUMBERS = st.sampled_from(
    ["12,5 t", "1.250,75", "1,250.75", "1 234", "12 in", "12 kg", "-3", "1e400", "0", ".5", "1e-3 MN/m"]
)
CELLS = st.one_of(NUMBERS, st.text(max_size=12), st.floats().map(repr), st.just(""))
ENDS = st.sampled_from(["\n", "\r\n", "\r"])
BLOCKS = st.one_of(
    st.text(max_size=60),
    st.builds(
        lambda rows, end, last: end.join("\t".join(cells) for cells in rows) + last,
        st.lists(st.lists(CELLS, min_size=1, max_size=7), max_size=12),
        ENDS,
        st.sampled_from(["", "\n", "\r\n"]),
    ),
)


@pytest.fixture(scope="module")
def job(tmp_path_factory: pytest.TempPathFactory) -> StoreyTable:
    """The demo's storeys in a folder of their own."""
    path = tmp_path_factory.mktemp("job")
    for name in ("job.toml", FILE):
        shutil.copy(folder(DEMO) / name, path)
    return StoreyTable(JobCard(path))


def opened(job: StoreyTable, start: bytes):
    """A display of the table as at the start."""
    (job.job.folder.path / FILE).write_bytes(start)
    job.job.load()
    shown = job.shown()
    shown.widget = shown.make_widget()
    shown.show_numbers()
    return shown


def rows_of(path: Path) -> list[tuple[str, ...]]:
    """Cells of the file as it now is on disk."""
    return list(parse_table(read(path), FILE).rows)


@given(BLOCKS, st.integers(0, 8), st.sampled_from(KEYS), st.integers(1, 4), st.integers(1, 3))
def test_a_paste_changes_its_own_rows_alone(job, block, at, key, high, wide):
    path = job.job.folder.path / FILE
    start = (folder(DEMO) / FILE).read_bytes()
    shown = opened(job, start)
    before = rows_of(path)
    row = shown.widget.table["rows"][at]["id"]
    why_not = shown.answer({"op": "paste", "row": row, "key": key, "text": block, "rows": high, "columns": wide})
    after = rows_of(path)
    if why_not:
        assert path.read_bytes() == start
    assert after[:at] == before[:at]
    left = KEYS.index(key)
    assert [cells[:left] for cells in after[at : len(before)]] == [cells[:left] for cells in before[at:]]
    deep = len(read_block(block))
    below = at + (high if deep and high % deep == 0 else deep)
    assert after[below : len(before)] == before[below:]
    shown.show_numbers()
    shown.answer({"op": "undo"})
    assert path.read_bytes() == start


@settings(deadline=None)
@given(
    st.lists(
        st.tuples(
            st.sampled_from(["set", "clear", "fill", "insert", "delete", "move", "paste", "undo", "redo"]),
            st.integers(0, 12),
            st.integers(0, 3),
            st.sampled_from(KEYS),
            CELLS,
            st.sampled_from([-1, 1]),
        ),
        max_size=8,
    )
)
def test_any_run_of_edits_is_undone_step_by_step(job, edits):
    path = job.job.folder.path / FILE
    start = (folder(DEMO) / FILE).read_bytes()
    shown = opened(job, start)
    for op, at, more, key, text, by in edits:
        rows = shown.widget.table["rows"]
        if not rows:
            break
        ids = [row["id"] for row in rows]
        assert len({*ids}) == len(ids)
        row, last = ids[at % len(ids)], ids[min(at % len(ids) + more, len(ids) - 1)]
        message = {
            "op": op,
            "row": row,
            "last": last,
            "key": key,
            "keys": [key],
            "text": text,
            "by": by,
            "count": more + 1,
        }
        assert shown.answer(message) is None or op in ("undo", "redo", "paste", "set")
        shown.show_numbers()
        kept = {row["id"] for row in shown.widget.table["rows"]}
        if op in ("set", "clear", "fill", "move"):
            assert kept == {*ids}
    assert job.job.status.kind == "saved"
    while job.job.history.undoes and path.read_bytes() != start:
        job.undo()
    assert path.read_bytes() == start
