"""Tables: columns of one quantity, escaped, aligned on the decimal point."""

from __future__ import annotations

import pytest

from calcsheet.render.table import Column, facts, table, values, words

HOSTILE = "<b>\"'&{0}{x}</td>"


def shown(column):
    return [cell.partition(">")[2].removesuffix("</data>") for cell in column.cells]


def test_a_column_has_one_number_of_decimals():
    column = values("mass", [9.5, 240.25, 1000.0], "mass", "SI", "/s/mass")
    assert column.heading == "mass [t]"
    assert [c.replace("\u202f", "") for c in shown(column)] == ["10", "240", "1000"]
    given = values("mass", [9.5, 240.25, 1000.0], "mass", "SI", "/s/mass", as_given=True)
    assert [c.replace("\u202f", "") for c in shown(given)] == ["9.50", "240.25", "1000.00"]


def test_rows_in_another_order_keep_their_places():
    column = values("T", [0.5, 0.25], "period", "SI", "/m/period", order=[1, 0])
    assert column.cells == (
        '<data value="/m/period/1" data-unit="s">0.2500</data>',
        '<data value="/m/period/0" data-unit="s">0.5000</data>',
    )
    nested = values("k", [1.0], "share", "SI", "/m/kinetic/{}/2")
    assert nested.cells == ('<data value="/m/kinetic/0/2" data-unit="%">100.0</data>',)


def test_a_blank_cell_is_blank():
    assert values("T", [None, 0.5], "period", "SI", "/m").cells == (
        "",
        '<data value="/m/1" data-unit="s">0.5000</data>',
    )


def test_text_is_escaped_wherever_it_stands(document):
    html = table([words(HOSTILE, [HOSTILE]), Column(HOSTILE, ("1",))], kind="values", caption=HOSTILE)
    html += facts([(HOSTILE, "1")])
    seen = document(html)
    assert not any(tag == "b" for tag, _ in seen.tags)
    assert seen.words.count(HOSTILE) == 5
    assert [tag for tag, _ in seen.tags].count("td") == 2


def test_a_tables_head_and_first_column_name_what_they_head(document):
    seen = document(table([words("level", ["Roof", "1"]), Column("m", ("2", "3"))], kind="values", marked=[1]))
    assert [a.get("scope") for tag, a in seen.tags if tag == "th"] == ["col", "col", "row", "row"]
    assert [a.get("class") for tag, a in seen.tags if tag == "tr"] == [None, None, "marked"]


def test_an_unknown_quantity_is_an_error():
    with pytest.raises(KeyError):
        values("x", [1.0], "colour", "SI", "/a")
