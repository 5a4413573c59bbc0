"""Two versions of a table set side by side."""

from __future__ import annotations

from calcsheet.job.differences import NO_ROW, Difference, differences
from calcsheet.job.table import parse_table
from calcsheet.job.textfile import Encoding, Stamp, TextFile

HERE = "level,mass [t],height [m]\nRoof,100,3\n2,200,3\n1,300,4\n"


def table(text):
    return parse_table(TextFile(text, Encoding(), Stamp("")), "storeys.csv")


def told(there):
    return differences(table(HERE), table(there))


def test_cells_by_level_and_column():
    assert told(HERE) == ()
    assert told(HERE.replace("200,3", "210,3.5")) == (
        Difference("2", "mass [t]", "200", "210"),
        Difference("2", "height [m]", "3", "3.5"),
    )


def test_rows_that_one_side_lacks():
    assert told(HERE.replace("2,200,3\n", "")) == (Difference("2", "", "2, 200, 3", NO_ROW),)
    assert told(HERE + "0,50,2\n") == (Difference("0", "", NO_ROW, "0, 50, 2"),)


def test_a_level_renamed_is_one_cell():
    assert told(HERE.replace("2,200", "two,200")) == (Difference("2", "level", "2", "two"),)


def test_other_headings_are_said_before_all_else():
    (only,) = told(HERE.replace("height [m]", "height [ft]"))
    assert only == Difference("headings", "", "level, mass [t], height [m]", "level, mass [t], height [ft]")


def test_a_row_without_a_name_goes_by_its_number():
    text = HERE.replace("\n2,", "\n,")
    (only,) = differences(table(text), table(text.replace("200", "201")))
    assert only == Difference("row 3", "mass [t]", "200", "201")
