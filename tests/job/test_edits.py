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
    blank = ",,,,,"
    assert rows(edits.insert_rows(read(), None)) == [blank, roof, third, second, first]
    assert rows(edits.insert_rows(read(), "1", 2)) == [roof, third, second, first, blank, blank]
    assert rows(edits.delete_rows(read(), "2", "2")) == [roof, third, first]
    assert rows(edits.delete_rows(read(), 1, 2)) == [roof, first]
    assert rows(edits.move_rows(read(), "3, upper", "2", -1)) == [third, second, roof, first]
    assert rows(edits.move_rows(read(), "3, upper", "2", 1)) == [roof, first, third, second]
    assert edits.move_rows(read(), 0, 1, -1).content() == read().table.content()
    assert edits.move_rows(read(), 2, 3, 1).content() == read().table.content()


def test_a_range_cleared_and_filled_down(read):
    assert rows(edits.clear(read(), "3, upper", "2", ["storey height", "mass"]))[1:3] == [
        '"3, upper",,,160000,150000,',
        "2,,,163000,152500,",
    ]
    after = rows(edits.fill_down(read(), "3, upper", "1", ["mass", "stiffness y"]))
    assert after[1:] == [
        '"3, upper",3.6,240,160000,150000,',
        "2,3.6,240,163000,150000,",
        "1,4.75,240,155000,150000,lobby",
    ]


@pytest.mark.parametrize(
    ("typed", "column", "written"),
    [  # exact by definition: 1 in = 25.4 mm, 1 ft = 12 in; 1 MN/m = 1000 kN/m
        ("12 in", "storey height", "0.3048"),
        ("11 ft", "storey height", "3.3528"),
        ("3,5 m", "storey height", "3.5"),
        ("3600mm", "storey height", "3.6"),
        ("240 500 kg", "mass", "240.5"),
        ("1e2 t", "mass", "1e2"),
        ("1.250 t", "mass", "1.250"),
        ("1,250.5", "mass", "1,250.5"),
        ("1.250,5", "mass", "1250.5"),
        ("162.5 MN/m", "stiffness x", "162500"),
        ("12 kg", "storey height", "12 kg"),
        ("12 parsec", "storey height", "12 parsec"),
        ("level 3", "storey height", "level 3"),
        ("1e999 in", "storey height", "1e999 in"),
        ("12 in", "level", "12 in"),
        ("-", "mass", "-"),
        ("", "mass", ""),
    ],
)
def test_an_amount_is_written_as_its_column_writes_numbers(read, typed, column, written):
    got = read()
    after = edits.set_text(got, "2", column, typed)
    assert after.rows[2][edits.column_index(got, column)] == written


def test_a_unit_of_another_quantity_is_refused_in_words(read):
    got = read(text=edits.set_text(read(), "2", "storey height", "12 kg").content().decode())
    assert [problem.message for problem in got.problems] == [
        'storeys.csv, level "2": storey height "12 kg"; must be a number in m, and "kg" is a unit of mass'
    ]


def test_a_pasted_block_with_decimal_commas_and_units(read):
    after = edits.paste(read(), "3, upper", "storey height", "3,45 m\t1.240,5 t\n360 cm\t251,125 t\n")
    assert rows(after)[1:3] == ['"3, upper",3.45,1240.5,160000,150000,', "2,3.6,251.1250,163000,152500,"]
    commas = edits.paste(read(text=COMMAS), "Roof", "mass", "200.25\n1,250.5\n")
    assert rows(commas) == ["Roof;3,4;200,25;5;5", "1;3;1250,5;5;5"]


def test_the_block_decides_what_a_group_of_three_means(read):
    marked = edits.paste(read(), "3, upper", "storey height", "3,5\t1,250\n3,5\t2,500\n")
    assert [row.split(",")[-4] for row in rows(marked)[1:3]] == ["1.25", "2.5"]
    alone = edits.paste(read(), "2", "mass", "1,250")
    assert rows(alone)[2] == '2,3.6,"1,250",163000,152500,'  # the column's decimal point makes it 1250


def test_a_block_fills_a_range_that_it_fits_into(read):
    assert [row.split(",")[-4] for row in rows(edits.paste(read(), 0, "mass", "7", rows=4))] == ["7"] * 4
    after = rows(edits.paste(read(), 0, "stiffness x", "1\n2", rows=4, columns=2))
    assert [row.split(",")[-3:-1] for row in after] == [["1", "1"], ["2", "2"]] * 2
    assert rows(edits.paste(read(), 1, "mass", "7\n8", rows=3))[3].split(",")[2] == "260"


def test_a_pasted_block_grows_the_table(read):
    after = edits.paste(read(), "1", "storey height", "4.5\t261\r\n4.25\t270,5\r\n")
    assert rows(after)[3:] == ["1,4.5,261,155000,140000,lobby", ",4.25,270.5,,,"]


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
    assert refusal(edits.delete_rows, got, 0, 4) == "storeys.csv: no row 4; must be from 0 to 3"
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
