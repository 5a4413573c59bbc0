"""Factors put into the files: what changes, in words and in the cells."""

from __future__ import annotations

import pytest

from calcsheet.job.adopt import adoption, multiplied_columns
from calcsheet.job.folder import JobFolder
from calcsheet.job.rewrite import with_value

TABLE = """\
level,storey height [m],mass [t],stiffness x [kN/m],stiffness y [kN/m],gravity load [kN]
Roof,3.1,"1,250.5",88000,97000,1900
1,4.2,402,"171,000.0",158500,2700
"""


@pytest.fixture
def files(tmp_path, card_text):
    """The files of a job whose card has pieces replaced, with a storey table."""

    def of(*changes, table=TABLE):
        text = card_text
        for old, new in changes:
            assert old in text
            text = text.replace(old, new)
        (tmp_path / "job.toml").write_text(text, encoding="utf-8")
        (tmp_path / "storeys.csv").write_text(table, encoding="utf-8")
        found = JobFolder(tmp_path).load()
        assert found.problems == ()
        return found

    return of


def cells(table, column):
    return [row[column] for row in table.rows]


def test_a_column_is_multiplied_to_ten_digits_and_blank_cells_stay_blank(files):
    found = files(('effective_base = ""', 'effective_base = "Ground"'), table=TABLE + "Ground,3,600,,,\n")
    table = multiplied_columns(found.reading, {"mass": 1.1, "stiffness x": 0.5})
    assert cells(table, 2) == ["1375.55", "442.2", "660"]  # 402 × 1.1 is 442.20000000000005 in double precision
    assert cells(table, 3) == ["44000", "85500", ""]
    assert cells(table, 4) == cells(found.reading.table, 4)


def test_the_decimal_mark_of_the_table_is_kept(files):
    text = "level;storey height [m];mass [t];stiffness x [kN/m];stiffness y [kN/m]\nRoof;3,1;402;88000;97000\n"
    table = multiplied_columns(files(table=text).reading, {"mass": 1.1})
    assert cells(table, 2) == ["442,2"]
    assert files(table=table.content().decode()).reading.storeys.mass == pytest.approx([442.2])


def test_nothing_asked_leaves_the_very_table(files):
    found = files()
    assert multiplied_columns(found.reading, {}) is found.reading.table
    assert adoption(found, "uncracked", 1.0, {"x": 1.0, "y": 1.0}).changes == ""


def test_one_factor_for_both_directions_stays_one(files):
    found = adoption(files(), "uncracked", 1.0, {"x": 0.9, "y": 0.9})
    assert found.values == {("stiffness", "uncracked", "factor"): 0.9}
    assert found.changes == "stiffness.uncracked.factor of job.toml from 1 to 0.9"


def test_one_factor_gives_way_to_two_where_the_directions_differ(files):
    found = adoption(files(), "uncracked", 1.1, {"x": 0.9, "y": 1.0})
    names = {keys[-1]: value for keys, value in found.values.items()}
    assert names == {"factor": None, "factor_x": 0.9, "factor_y": 1.0}
    assert found.columns == {"mass": 1.1}
    assert found.changes == (
        'column "mass [t]" of storeys.csv by a factor of 1.1, stiffness.uncracked.factor of job.toml from 1 to none, '
        "stiffness.uncracked.factor_x of job.toml from none to 0.9 and stiffness.uncracked.factor_y of job.toml from none "
        'to 1; column "gravity load [kN]" stays as it is'
    )


def test_factors_by_direction_are_multiplied_each(files):
    card = ("[stiffness.uncracked]\nfactor = 1.0", "[stiffness.uncracked]\nfactor_x = 0.55\nfactor_y = 0.5")
    found = adoption(files(card), "uncracked", 1.0, {"x": 0.9, "y": 1.0})
    assert found.values == {("stiffness", "uncracked", "factor_x"): 0.495}


def test_a_set_of_own_values_has_its_columns_multiplied(files):
    card = ("[stiffness.uncracked]\nfactor = 1.0", "[stiffness.uncracked]\nown = true")
    more = (",stiffness x uncracked [kN/m],stiffness y uncracked [kN/m]", ",9e4,8e4", ",2e5,1e5")
    lines = map("".join, zip(TABLE.splitlines(), more, strict=True))
    found = adoption(files(card, table="\n".join(lines)), "uncracked", 1.0, {"x": 0.9, "y": 1.0})
    assert found.values == {}
    assert found.columns == {"stiffness x uncracked": 0.9}
    assert found.changes == 'column "stiffness x uncracked [kN/m]" of storeys.csv by a factor of 0.9'


def test_weights_are_multiplied_where_the_table_gives_weights(files):
    found = adoption(files(table=TABLE.replace("mass [t]", "weight [kN]")), "uncracked", 0.5, {"x": 1.0, "y": 1.0})
    assert found.columns == {"weight": 0.5}


def test_the_card_with_its_new_values_is_read_again(files):
    found = files()
    text = found.card_text
    for key, value in adoption(found, "uncracked", 1.0, {"x": 0.9, "y": 0.8}).values.items():
        text = with_value(text, key, value)
    assert "# card of the calculation" in text
    basis = files((found.card_text, text)).card.stiffness["uncracked"]
    assert (basis.factor_of("x"), basis.factor_of("y")) == (0.9, 0.8)
