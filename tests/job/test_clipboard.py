"""Cells as spreadsheets put them on the clipboard."""

from __future__ import annotations

import pytest

from calcsheet.job.clipboard import mark_of, read_block


@pytest.mark.parametrize("end", ["\n", "\r\n", "\r"])
@pytest.mark.parametrize("last", [True, False])
def test_line_endings(end, last):
    text = f"1\t2{end}{end}3\t4" + (end if last else "")
    assert read_block(text) == [["1", "2"], [""], ["3", "4"]]


def test_quoted_cells_hold_tabs_line_endings_and_marks():
    assert read_block('"Plant\nroom"\t"a ""b"""\n"x\ty"\t2\n') == [["Plant\nroom", 'a "b"'], ["x\ty", "2"]]


def test_marks_that_do_not_pair_are_text():
    assert read_block('"A" wing\t1\n6" slab\t2\n') == [['"A" wing', "1"], ['6" slab', "2"]]
    assert read_block('"open\t1\n2\t3\n') == [['"open', "1"], ["2", "3"]]


@pytest.mark.parametrize(
    ("cells", "mark"),
    [
        (["3,5", "1,250"], ","),
        (["3.5 m", "1,250.5 t"], "."),
        (["1 234,5"], ","),
        (["1,250", "300", "roof"], None),
        (["3.5", "3,5"], None),
        ([], None),
    ],
)
def test_the_decimal_mark_that_a_block_agrees_on(cells, mark):
    assert mark_of([cells]) == mark
