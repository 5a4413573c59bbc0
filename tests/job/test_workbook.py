"""Sheets of spreadsheet files as cells, and tables written to workbooks."""

from __future__ import annotations

import datetime as dt
import zipfile

import openpyxl
import pytest

from calcsheet.job import workbook
from calcsheet.job.errors import InputError
from calcsheet.job.workbook import address, read_sheets, write_workbook


@pytest.fixture
def book(tmp_path):
    """Writes a workbook: rows of each sheet, and what else is done to it."""

    def write(name="masses.xlsx", change=None, **sheets):
        made = openpyxl.Workbook()
        made.remove(made.active)
        for title, rows in sheets.items():
            sheet = made.create_sheet(title)
            for row in rows:
                sheet.append(row)
        if change:
            change(made)
        made.save(tmp_path / name)
        return tmp_path / name

    return write


def with_stored(path, formula: str, value: str) -> None:
    """Store a value beside a formula, as a spreadsheet program does; the library that writes the file can't."""
    with zipfile.ZipFile(path) as packed:
        parts = {part.filename: packed.read(part) for part in packed.infolist()}
    sheet = parts["xl/worksheets/sheet1.xml"].decode()
    empty = f"<f>{formula}</f><v />"
    assert empty in sheet
    parts["xl/worksheets/sheet1.xml"] = sheet.replace(empty, f"<f>{formula}</f><v>{value}</v>").encode()
    with zipfile.ZipFile(path, "w") as packed:
        for name, content in parts.items():
            packed.writestr(name, content)


def refusal(action, *arguments) -> str:
    with pytest.raises(InputError) as caught:
        action(*arguments)
    return str(caught.value)


def test_addresses_are_those_of_spreadsheets():
    assert [address(0, 0), address(6, 3), address(9, 25), address(0, 26)] == ["A1", "D7", "Z10", "AA1"]


def test_cells_are_numbers_texts_or_blank(book):
    (sheet,) = read_sheets(book(Masses=[["level", "mass [t]"], [3, 212.125], [" Roof\n deck ", None]]))
    assert sheet.place == 'masses.xlsx, sheet "Masses"'
    assert [[cell.text for cell in row] for row in sheet.rows] == [
        ["level", "mass [t]"],
        ["3", "212.125"],
        ["Roof deck", ""],
    ]
    assert sheet.rows[1][1].value == 212.125
    assert sheet.rows[2][1].blank


def test_a_formula_gives_its_stored_value_or_says_that_it_has_none(book):
    path = book(M=[["=1.1*3", "=2+2"]])
    with_stored(path, "1.1*3", "3.3000000000000003")
    first, second = read_sheets(path)[0].rows[0]
    assert first.value == 3.3000000000000003
    assert second.problem.startswith("a formula without a stored value; open the file in a spreadsheet program")
    assert not second.blank


@pytest.mark.parametrize(
    ("value", "problem"),
    [
        (dt.date(2026, 3, 1), "a date or time, 2026-03-01 00:00:00; must be a number or a text, formatted as one"),
        (dt.time(3, 1), "a date or time, 03:01:00; must be a number or a text, formatted as one"),
        (True, "TRUE; must be a number or a text"),
        ("#REF!", "the error #REF!; must be a number or a text"),
    ],
)
def test_what_is_neither_a_number_nor_a_text_says_so(book, value, problem):
    assert read_sheets(book(M=[[value]]))[0].rows[0][0].problem == problem


def test_merged_cells_name_their_area(book):
    rows = [["level", "mass [t]"], ["Roof", 1.0], [None, 2.0]]
    (sheet,) = read_sheets(book(M=rows, change=lambda made: made["M"].merge_cells("A2:A3")))
    assert sheet.rows[1][0].text == "Roof"
    assert sheet.rows[2][0].problem == "merged with others in A2:A3; must be a cell of its own"


def test_a_csv_file_is_one_sheet(tmp_path):
    (tmp_path / "m.csv").write_text("level;mass [t]\n3;212,5\n", encoding="utf-8")
    (sheet,) = read_sheets(tmp_path / "m.csv")
    assert (sheet.place, sheet.delimiter) == ("m.csv", ";")
    assert sheet.rows[1][1].value == "212,5"


def test_other_kinds_and_broken_files_are_refused(tmp_path, monkeypatch):
    for name in ("m.xlsm", "m.xls", "m.ods"):
        assert refusal(read_sheets, tmp_path / name) == f"{name}: of another kind; must be an .xlsx or a .csv file"
    assert refusal(read_sheets, tmp_path / "m.xlsx").startswith("m.xlsx: can't be read (No such file")
    (tmp_path / "m.xlsx").write_bytes(b"level,mass\n")
    assert refusal(read_sheets, tmp_path / "m.xlsx") == "m.xlsx: can't be read (BadZipFile); must be an XLSX file"
    with zipfile.ZipFile(tmp_path / "m.xlsx", "w") as packed:
        packed.writestr("note.txt", "no workbook")
    assert refusal(read_sheets, tmp_path / "m.xlsx").startswith("m.xlsx: can't be read (")


def test_large_files_are_refused_before_they_are_unpacked(book, tmp_path, monkeypatch):
    path = book(M=[["level"]])
    with zipfile.ZipFile(path, "a", zipfile.ZIP_DEFLATED) as packed:
        packed.writestr("xl/zeros", bytes(3_000_000))
    monkeypatch.setattr(workbook, "UNPACKED", 2_000_000)
    assert refusal(read_sheets, path) == "masses.xlsx: 3 MB unpacked; must be at most 2 MB"
    monkeypatch.setattr(workbook, "LARGEST", 1000)
    assert refusal(read_sheets, path).endswith("; must be at most 0 MB")


def test_a_table_is_written_with_numbers_as_numbers(table, tmp_path):
    text = 'level;mass [t];stiffness x [kN/m];remarks\nRoof;212,12;1,5e5;=1+1\n"3";;n/a;12\n'
    write_workbook(tmp_path / "out.xlsx", {"storeys": table(text)})
    sheet = openpyxl.load_workbook(tmp_path / "out.xlsx")["storeys"]
    assert [[cell.value for cell in row] for row in sheet.iter_rows()] == [
        ["level", "mass [t]", "stiffness x [kN/m]", "remarks"],
        ["Roof", 212.12, 150000.0, "=1+1"],
        ["3", None, "n/a", "12"],
    ]
    assert sheet["D2"].data_type == "s"  # no formula
    assert sheet.freeze_panes == "B2"
    assert sheet["A1"].font.bold


def test_a_number_that_may_be_two_stays_a_text(table, tmp_path):
    write_workbook(tmp_path / "out.xlsx", {"storeys": table("level;mass [t]\nRoof;212,125\n")})
    assert openpyxl.load_workbook(tmp_path / "out.xlsx")["storeys"]["B2"].value == "212,125"


def test_what_can_not_be_written_is_refused(table, tmp_path):
    (tmp_path / "old.xlsx").write_bytes(b"")
    given = {"storeys": table("level\nRoof\n")}
    assert refusal(write_workbook, tmp_path / "old.xlsx", given) == "old.xlsx: is there already; name a new file"
    assert refusal(write_workbook, tmp_path / "t.csv", given) == "t.csv: of another kind; must be an .xlsx file"
    bell = {"storeys": table("level,remarks\nRoof,a\x07b\n")}
    assert refusal(write_workbook, tmp_path / "t.xlsx", bell) == (
        "storeys.csv, cell B2: characters that XLSX can't hold; must be printable"
    )
