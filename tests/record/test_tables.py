"""Tables as CSV: the payloads' numbers in the printed units, whatever spans and headings the tables have."""

from __future__ import annotations

import csv
import io
import json
from pathlib import Path

import pytest

from calcsheet.record.document import settled
from calcsheet.record.errors import RecordError
from calcsheet.record.files import html_of
from calcsheet.record.migrate import migrated
from calcsheet.record.tables import csv_files, tables_of, write_tables

EXAMPLES = Path(__file__).parents[2] / "example_notebooks"
FOOT, INCH = 0.3048, 0.0254
KIP = 0.45359237 * 9.80665
"""International foot and inch [m] and kip [kN]: exact by definition (NIST Special Publication 811, from memory)."""
PAYLOADS = {"s": {"result": {"mass": [251.0, 1 / 3, -4.0], "count": 3, "tiny": 3.14159e-15, "name": "x"}}}


def parsed(content):
    return list(csv.reader(io.StringIO(content.decode("utf-8-sig"), newline="")))


def rows(html, payloads=PAYLOADS):
    (table,) = tables_of(html, payloads)
    return [list(row) for row in table.rows]


def number(at, shown, unit=""):
    said = f' data-unit="{unit}"' if unit else ""
    return f'<data value="/s/result/{at}"{said}>{shown}</data>'


@pytest.fixture(scope="module", params=["alder-quay", "larch-street"])
def example(request):
    """An issued record of the examples, and the tables of its HTML, made here and now."""
    path = min((EXAMPLES / request.param / "issued").glob("*/*.json"))
    record = settled(migrated(json.loads(path.read_text(encoding="utf-8"))))
    return record, csv_files(html_of(record), record)


def columns(files, name):
    """Columns of the first table of this name, by heading."""
    found = min(file for file in files if file.endswith(f"-{name}.csv"))
    head, *body = parsed(files[found])
    return dict(zip(head, zip(*body, strict=True), strict=True))


def test_numbers_are_those_of_the_payloads_in_printed_units(example):
    record, files = example
    us = record["payloads"]["card"]["inputs"]["units"]["system"] == "US"
    storeys, modes = (
        record["payloads"]["storeys"]["inputs"],
        record["payloads"]["modes"]["result"]["models"][0]["modes"],
    )
    table, in_x = columns(files, "storeys-storey-table"), columns(files, "natural-modes-modes-in-x")
    for heading, payload, factor in (
        ("storey height [ft]" if us else "storey height [m]", storeys["storey_height"], FOOT if us else 1.0),
        ("mass [kip·s²/ft]" if us else "mass [t]", storeys["mass"], KIP / FOOT if us else 1.0),
    ):
        expected = [value / factor for value in reversed(payload)]
        assert [float(cell) for cell in table[heading]] == pytest.approx(expected, rel=1e-14, abs=0), heading
    assert [float(cell) for cell in in_x["period T [s]"]] == modes["period"]  # to the last bit
    assert [float(cell) for cell in in_x["frequency f [Hz]"]] == modes["frequency"]
    assert set(in_x["mode"]) == {str(i) for i in range(1, len(modes["period"]) + 1)}


def test_the_index_lists_every_table(example):
    _, files = example
    head, *listed = parsed(files["index.csv"])
    assert head == ["file", "section", "heading", "caption", "heading rows", "rows"]
    assert {row[0] for row in listed} == files.keys() - {"index.csv"}
    for file, *_, headings, count in listed:
        table = parsed(files[file])
        assert len(table) == int(headings) + int(count)
        assert len({len(row) for row in table}) == 1
    assert listed[0][:2] == ["01-cover.csv", "Cover"]
    assert all(file == file.encode("ascii", "replace").decode() and len(file) <= 64 for file in files)


def test_a_number_is_full_where_its_heading_has_the_unit():
    head = '<thead><tr><th>level</th><th>mass <span class="unit">[t]</span></th></tr></thead>'
    whole, part = number("mass/0", "251", "t"), number("mass/1", "0.3", "t")
    body = f"<tr><th>Roof</th><td>{whole}</td></tr><tr><th>1</th><td>{part}</td></tr>"
    assert rows(f"<table>{head}<tbody>{body}</tbody></table>") == [
        ["level", "mass [t]"],
        ["Roof", "251.0"],
        ["1", "0.3333333333333333"],
    ]


def test_units_that_stand_behind_numbers_get_a_column():
    body = (
        f"<tr><th>mass</th><td>{number('mass/2', '−4.00', 't')}\u00a0t</td></tr>"
        f"<tr><th>share</th><td>{number('mass/1', '33.3', '%')}\u00a0%</td></tr>"
        f"<tr><th>count</th><td>{number('count', '3')}</td></tr>"
        f"<tr><th>both</th><td>{number('count', '3')}, {number('mass/0', '251', 't')}\u00a0t</td></tr>"
        f"<tr><th>words</th><td>3\u202f326\u00a0t of <i>it</i></td></tr>"
    )
    assert rows(f"<table><tbody>{body}</tbody></table>") == [
        ["mass", "-4.0", "t"],
        ["share", "33.3333333333333", "%"],
        ["count", "3", ""],
        ["both", "3, 251 t", ""],
        ["words", "3 326 t of it", ""],
    ]


def test_powers_of_ten_and_superscripts():
    tiny = number("tiny", "3.1\u00b710<sup>\u221215</sup>")
    body = f"<tr><td>{tiny}</td><td>m<sup>2</sup>, T<sub>1</sub></td></tr>"
    assert rows(f"<table>{body}</table>") == [["3.14159e-15", "m^2, T1"]]


def test_spans_are_repeated_in_every_cell():
    html = (
        "<table><thead><tr><th rowspan=2>level</th><th colspan=2>shear [kN]</th></tr><tr><th>x</th><th>y</th></tr></thead>"
        "<tbody><tr><td rowspan=2>1</td><td>a</td><td>b</td></tr><tr><td colspan=2>c</td></tr>"
        "<tr><td colspan=3>d</td></tr></tbody><tfoot><tr><th>sum</th><td>e</td></tr></tfoot></table>"
    )
    (table,) = tables_of(html, {})
    assert table.headings == 2
    assert [list(row) for row in table.rows] == [
        ["level", "shear [kN]", "shear [kN]"],
        ["level", "x", "y"],
        ["1", "a", "b"],
        ["1", "c", "c"],
        ["d", "d", "d"],
        ["sum", "e", ""],
    ]


@pytest.mark.parametrize("span", ["0", "-1", "x", "99999999", "1000000"])
def test_hostile_spans_stay_small(span):
    html = f"<table><tr><td colspan={span} rowspan={span}>a</td></tr><tr><td>b</td></tr></table>"
    assert 2 <= sum(map(len, rows(html))) <= 2002


def test_a_heading_over_two_columns_gives_both_its_unit():
    html = (
        "<table><thead><tr><th colspan=2>mass [t]</th></tr><tr><th>x</th><th>y</th></tr></thead>"
        f"<tr><td>{number('mass/0', '251', 't')}</td><td>{number('mass/2', '−4', 't')}</td></tr></table>"
    )
    assert rows(html)[2] == ["251.0", "-4.0"]


@pytest.mark.parametrize(
    ("cell", "sentence"),
    [
        (number("nothing", "3"), 'printed "3", and /s/result/nothing leads to no number in ""'),
        (number("name", "3"), 'printed "3", and /s/result/name leads to no number in ""'),
        (number("count", "3", "furlong"), 'printed "3", and /s/result/count leads to no number in "furlong"'),
        (number("count", "4"), 'printed "4", and /s/result/count leads to 3'),
        (number("mass/0", "252.0", "t"), 'printed "252.0", and /s/result/mass/0 leads to 251.0 t'),
        (number("count", "three"), 'printed "three", and /s/result/count leads to 3'),
    ],
)
def test_what_is_printed_otherwise_is_refused(cell, sentence):
    html = f"<h2>Totals</h2><table><caption>Masses</caption><tr><td>{cell}</td></tr></table>"
    with pytest.raises(RecordError) as caught:
        tables_of(html, PAYLOADS)
    assert str(caught.value) == f'table "Masses": {sentence}'


def test_names_come_from_section_and_caption_or_heading():
    html = (
        "<header><table><tr><td>a</td></tr></table></header><nav><h2>Contents</h2></nav><h3>View</h3><table></table>"
        "<h2>Größe &amp; ../Maß</h2><table></table><h3>Worked lines</h3><table></table>"
        f"<table><caption>{'ten words ' * 20}</caption></table>"
    )
    assert [(t.file, t.section, t.heading) for t in tables_of(html, {})] == [
        ("01-cover.csv", "Cover", ""),
        ("02-view.csv", "", "View"),
        ("03-groe-ma.csv", "Größe & ../Maß", ""),
        ("04-groe-ma-worked-lines.csv", "Größe & ../Maß", "Worked lines"),
        ("05-groe-ma-ten-words-ten-words-ten-words-ten-words-ten-words.csv", "Größe & ../Maß", "Worked lines"),
    ]


def test_a_text_is_no_formula_and_a_number_stays_one():
    html = f"<table><tr><td>=1+1</td><td>{number('mass/2', '−4', 't')}</td></tr></table>"
    files = csv_files(html, {"payloads": PAYLOADS})
    assert parsed(files["01-cover.csv"]) == [["'=1+1", "-4.0", "t"]]


def test_tables_are_written_into_a_new_folder(tmp_path):
    html = "<table><tr><td>a</td></tr></table>"
    folder = tmp_path / "new" / "tables"
    files = write_tables(html, {"payloads": {}}, folder)
    assert (
        sorted(path.name for path in files) == sorted(p.name for p in folder.iterdir()) == ["01-cover.csv", "index.csv"]
    )
    with pytest.raises(RecordError) as caught:
        write_tables(html, {"payloads": {}}, folder)
    assert str(caught.value) == f"{folder} is there already and not empty; name a new folder"
