from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcsheet.job.errors import InputError
from calcsheet.job.table import add_column, delete_row, insert_row, move_row, set_cell

TEXT = 'level;mass [t]\r\n"Dach; oben";212,50\r\n\r\n2;240\r\n1;"260"\r\n\r\n\r\n'


def lines_changed(before: bytes, after: bytes) -> list[tuple[bytes, bytes]]:
    pairs = zip(before.splitlines(keepends=True), after.splitlines(keepends=True), strict=True)
    return [pair for pair in pairs if pair[0] != pair[1]]


@pytest.mark.parametrize("mark", [b"", b"\xef\xbb\xbf"])
def test_rows_and_headings(table, mark):
    got = table(mark + TEXT.encode())
    assert got.headings == ("level", "mass [t]")
    assert got.rows == (("Dach; oben", "212,50"), ("2", "240"), ("1", "260"))
    assert [got.row_number(row) for row in range(3)] == [2, 4, 5]
    assert got.content() == mark + TEXT.encode()


@pytest.mark.parametrize(
    ("text", "delimiter"),
    [
        ("level,mass [t]\n", ","),
        ("level;mass [t], gross\n", ";"),
        ("level\tmass [t]\n", "\t"),
        ('\n  \n"a;b;c";level,mass\n', ";"),
        ('"a;b;c",level,mass\n', ","),
        ("level\n", ","),
    ],
)
def test_the_heading_shows_the_delimiter(table, text, delimiter):
    assert table(text).delimiter == delimiter


def test_a_changed_cell_changes_its_line_alone(table):
    got = table(TEXT)
    assert set_cell(got, 1, 1, "240") is got
    after = set_cell(got, 1, 1, "241,5").content()
    assert lines_changed(got.content(), after) == [(b"2;240\r\n", b"2;241,5\r\n")]
    after = set_cell(got, 0, 1, "213").content()
    assert lines_changed(got.content(), after) == [(b'"Dach; oben";212,50\r\n', b'"Dach; oben";213\r\n')]


def test_a_line_of_quoted_cells_stays_quoted(table):
    got = table('"level","mass [t]"\n"1","20"\n')
    got = insert_row(set_cell(got, 0, 1, "21"), 1, ["0", "3"])
    assert got.content() == b'"level","mass [t]"\n"1","21"\n"0","3"\n'


@pytest.mark.parametrize("text", ["two\nlines", 'with "marks"', "a;b", "\r", " spaced "])
def test_any_text_can_stand_in_a_cell(table, text):
    after = set_cell(table(TEXT), 2, 0, text)
    assert table(after.content()).rows[2] == (text, "260")


def test_a_cell_over_two_lines_is_one_row(table):
    got = table('level,mass\n"top\nroof",3\n2,4\n')
    assert got.rows == (("top\nroof", "3"), ("2", "4"))
    assert got.row_number(1) == 3
    assert set_cell(got, 1, 1, "5").content() == b'level,mass\n"top\nroof",3\n2,5\n'


def test_rows_are_inserted_deleted_and_moved(table):
    got = table(TEXT)
    top, middle, last = b'"Dach; oben";212,50\r\n\r\n', b"2;240\r\n", b'1;"260"\r\n'
    head, tail = b"level;mass [t]\r\n", b"\r\n\r\n"
    assert got.content() == head + top + middle + last + tail
    assert insert_row(got, 0).content() == head + b";\r\n" + top + middle + last + tail
    assert insert_row(got, 3, ["0", "9"]).content() == head + top + middle + last + b"0;9\r\n" + tail
    assert delete_row(got, 1).content() == head + top + last + tail
    assert move_row(got, 2, 1).content() == head + top + last + middle + tail
    assert move_row(got, 1, 2).content() == head + top + last + middle + tail
    assert move_row(move_row(got, 1, 2), 2, 1).content() == got.content()


def test_a_file_that_ends_without_a_line_ending(table):
    got = table("level,mass\n2,4\n1,5")
    assert set_cell(got, 1, 1, "6").content() == b"level,mass\n2,4\n1,6"
    assert insert_row(got, 2, ["0", "7"]).content() == b"level,mass\n2,4\n1,5\n0,7\n"
    assert move_row(got, 1, 0).content() == b"level,mass\n1,5\n2,4\n"
    assert insert_row(table("level,mass"), 0).content() == b"level,mass\n,\n"


def test_short_and_long_rows(table):
    got = table("a,b,c\n1\n1,2,3,4\n")
    assert got.rows == (("1", "", ""), ("1", "2", "3", "4"))
    assert set_cell(got, 0, 2, "x").content() == b"a,b,c\n1,,x\n1,2,3,4\n"


def test_a_column_is_added_on_the_right(table):
    got = add_column(table('level;"a;b"\r\n\r\n3;1\r\n"2";"x"\r\n1\r\n'), "mass [t]", ["7", "8;5", "9"])
    assert got.content().decode() == 'level;"a;b";mass [t]\r\n\r\n3;1;7\r\n"2";"x";"8;5"\r\n1;;9\r\n'
    assert got.headings == ("level", "a;b", "mass [t]")
    assert [row[2] for row in got.rows] == ["7", "8;5", "9"]


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("", "storeys.csv: the file is empty; must have a line of headings"),
        ("\n \n", "storeys.csv: the file is empty; must have a line of headings"),
        (
            'level,mass\n2,3\n"1,4\n',
            "storeys.csv, line 3: can't be read as cells (unexpected end of data); "
            'must have its quotation marks (") in pairs',
        ),
        (
            'level,mass\n"1"st,4\n',
            "storeys.csv, line 2: can't be read as cells (',' expected after '\"'); "
            'must have its quotation marks (") in pairs',
        ),
    ],
)
def test_refusals(table, text, message):
    with pytest.raises(InputError) as caught:
        table(text)
    assert str(caught.value) == message


@given(st.text(alphabet=st.sampled_from('ab1,;\t"\r\n ψ\x0b\u2028'), max_size=60))
def test_any_text_is_written_back_as_it_was(table, text):
    try:
        got = table(text)
    except InputError:
        return
    assert got.content() == text.encode()
    for row in range(len(got.rows)):
        assert set_cell(got, row, 0, got.rows[row][0]) is got
        assert table(set_cell(got, row, 0, "x").content()).rows[row][0] == "x"


@given(st.binary(max_size=80))
def test_any_bytes_are_read_or_refused(table, content):
    try:
        got = table(content)
    except InputError:
        return
    assert got.content() == content
