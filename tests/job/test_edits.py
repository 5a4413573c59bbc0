from __future__ import annotations

import pytest

from calcsheet.job import edits
from calcsheet.job.errors import InputError

COMMAS = "level;storey height [m];mass [t];stiffness x [kN/m];stiffness y [kN/m]\nRoof;3,4;200;5;5\n1;3;300;5;5\n"


def rows(table) -> list[str]:
    return table.content().decode().splitlines()[1:]


def refusal(call, *arguments) -> str:
    with pytest.raises(InputError) as caught:
        call(*arguments)
    return str(caught.value)


@pytest.mark.parametrize("row", ["3, upper", 1])
def test_a_cell_by_level_or_index(read, storeys_text, row):
    after = edits.set_text(read(), row, "mass", "half-typ").content().decode()
    assert after == storeys_text.replace("240", "half-typ")


def test_numbers_take_the_decimal_mark_of_the_table(read):
    assert rows(edits.set_number(read(), "2", "mass", 250.0))[2] == "2,3.6,250,163000,152500,"
    assert rows(edits.set_number(read(), "2", "mass", 250.5))[2] == "2,3.6,250.5,163000,152500,"
    assert rows(edits.set_number(read(text=COMMAS), "1", "mass", 250.5))[1] == "1;3;250,5;5;5"
    assert rows(edits.set_number(read(text=COMMAS), "1", "mass", 1.125))[1] == "1;3;1,1250;5;5"


def test_rows_by_hand(read, storeys_text):
    _head, roof, third, second, first = storeys_text.splitlines()
    assert rows(edits.insert_row(read(), None)) == [",,,,,", roof, third, second, first]
    assert rows(edits.insert_row(read(), "1")) == [roof, third, second, first, ",,,,,"]
    assert rows(edits.delete_row(read(), "2")) == [roof, third, first]
    assert rows(edits.move_row(read(), "Roof", 3)) == [third, second, first, roof]


def test_a_pasted_block_grows_the_table(read):
    after = edits.paste(read(), "1", "storey height", "4.5\t261\r\n4.25\t270,5\r\n")
    assert rows(after)[3:] == ["1,4.5,261,155000,140000,lobby", ',4.25,"270,5",,,']


def test_a_pasted_column_and_a_pasted_cell(read):
    after = edits.paste(read(), "Roof", "mass", "1\n\n3\n")
    assert [row.split(",")[-4] for row in rows(after)] == ["1", "", "3", "260"]
    assert rows(edits.paste(read(), 0, "mass", "7"))[0] == "Roof,3.40,7,148000,131000,plant"
    assert edits.paste(read(), 0, "mass", "").content() == read().table.content()


def test_a_pasted_cell_of_two_lines(read):
    assert '"new\nname"' in edits.paste(read(), 0, "level", '"new\nname"\t3.5').content().decode()


def test_refusals(read):
    got = read()
    keys = '"level", "storey height", "mass", "stiffness x", "stiffness y", "column 6"'
    assert refusal(edits.set_text, got, "7", "mass", "1") == (
        'storeys.csv: no level "7"; must be one of "Roof", "3, upper", "2", "1"'
    )
    assert refusal(edits.set_text, got, 4, "mass", "1") == "storeys.csv: no row 4; must be from 0 to 3"
    assert refusal(edits.set_text, got, 0, "weight", "1") == (f'storeys.csv: no column "weight"; must be one of {keys}')
    assert refusal(edits.set_number, got, 0, "mass", float("nan")) == (
        'storeys.csv, column "mass": got nan; must be a finite number'
    )
    assert refusal(edits.move_row, got, 0, 4) == "storeys.csv: no row 4; must be from 0 to 3"
    assert refusal(edits.paste, got, 0, "stiffness y", "1\t2\t3") == (
        "storeys.csv: 3 columns pasted from stiffness y; must be at most 2, the columns from there on"
    )


def test_whole_columns_in_core_units_to_six_digits(read):
    text = "level,storey height [m],mass [t],stiffness x [MN/m],stiffness y [kN/m]\nRoof,3.4,200,,5\n1,3,300,5,5\n"
    numbers = {"stiffness x": {"Roof": 123456.789, "1": 2e6 / 3.0}, "stiffness y": {"1": 250000.0}}
    assert rows(edits.set_columns(read(text=text), numbers)) == ["Roof,3.4,200,123.4570,5", "1,3,300,666.6670,250000"]
    told = (
        'storeys.csv: no column "mass x"; must be one of "level", "storey height", "mass", "stiffness x", "stiffness y"'
    )
    assert refusal(edits.set_columns, read(text=text), {"mass x": {"Roof": 1.0}}) == told
    text = text.replace("x [MN/m]", "x")
    told = 'storeys.csv, heading "stiffness x": no unit; must give one'
    assert refusal(edits.set_columns, read(text=text), numbers) == told
