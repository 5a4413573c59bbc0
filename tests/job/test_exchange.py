"""A job's tables from and to spreadsheet files: headings mapped, levels matched, errors by cell address."""

from __future__ import annotations

import openpyxl
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from calcsheet.job import headings, storeycells
from calcsheet.job.errors import InputError
from calcsheet.job.exchange import export_file, import_file
from calcsheet.job.folder import JobFolder
from calcsheet.job.importing import find_table, merged
from calcsheet.job.numbers import parse_number
from calcsheet.job.workbook import Cell, Sheet

ROWS = [["level", "mass [t]"], ["Roof", 150.25], [4, 240], [3, 251.125], [2, 252], [1, 270]]


@pytest.fixture
def folder(job_folder):
    return JobFolder(job_folder())


@pytest.fixture
def book(tmp_path):
    def write(name="masses.xlsx", **sheets):
        made = openpyxl.Workbook()
        made.remove(made.active)
        for title, rows in sheets.items():
            sheet = made.create_sheet(title)
            for row in rows:
                sheet.append(row)
        made.save(tmp_path / name)
        return tmp_path / name

    return write


def storeys(folder) -> list[list[str]]:
    return [line.split(",") for line in (folder.path / "storeys.csv").read_text(encoding="utf-8").splitlines()]


def refusal(*arguments, **how) -> str:
    with pytest.raises(InputError) as caught:
        import_file(*arguments, **how)
    return str(caught.value)


def with_cell(row, column, value):
    rows = [list(cells) for cells in ROWS]
    rows[row][column] = value
    return rows


def test_masses_are_set_level_by_level_and_nothing_else(folder, book):
    before = storeys(folder)
    done = import_file(folder, book(Masses=[ROWS[0], *ROWS[:0:-1]]))  # base first: levels are matched by name
    after = storeys(folder)
    assert [row[2] for row in after] == ["mass [t]", "150.25", "240", "251.1250", "252", "270"]
    assert [row[:2] + row[3:] for row in after] == [row[:2] + row[3:] for row in before]
    assert (done.place, done.table, done.columns) == ('masses.xlsx, sheet "Masses"', "storeys.csv", ("mass [t]",))
    assert (done.levels, done.changed, done.notices) == (5, 5, ())
    assert "imports" not in folder.load().card_text


def test_another_unit_is_converted(folder, book):
    import_file(folder, book(M=[["level", "mass [kg]"], *[[level, 1000 * mass] for level, mass in ROWS[1:]]]))
    assert folder.load().reading.storeys.mass.tolist() == [270, 252, 251.125, 240, 150.25]


def test_headings_are_mapped_once_and_kept(folder, book):
    rows = [["Lateral model"], [], ["Floor", "Seismic\n mass", "Note"], *[[*row, "x"] for row in ROWS[1:]]]
    path = book(Loads=[["nothing"]], Masses=rows)
    mapping = {"Floor": "level", "Seismic mass": "mass [t]"}
    done = import_file(folder, path, mapping=mapping)
    assert done.notices == ('masses.xlsx, sheet "Masses", cell C3: "Note" isn\'t known, its column is left out',)
    assert dict(folder.load().card.imports.storeys["masses.xlsx"].columns) == mapping
    text = folder.load().card_text
    again = import_file(folder, path)
    assert (again.changed, folder.load().card_text) == (0, text)


def test_a_sheet_is_chosen_and_kept(folder, book):
    path = book(A=with_cell(1, 1, 160), B=ROWS)
    assert refusal(folder, path) == 'masses.xlsx: tables of levels in sheets "A", "B"; choose one with --sheet'
    assert refusal(folder, path, sheet="C") == 'masses.xlsx: no sheet "C"; must be one of "A", "B"'
    import_file(folder, path, sheet="A")
    assert folder.load().card.imports.storeys["masses.xlsx"].sheet == "A"
    assert import_file(folder, path).place == 'masses.xlsx, sheet "A"'


def test_what_follows_a_blank_row_is_left_out(folder, book):
    done = import_file(folder, book(M=[*ROWS, [], ["Total", 1163.375]]))
    assert done.notices == ('masses.xlsx, sheet "M", rows 8 to 8: below a blank row, left out',)
    rows = [*ROWS, ["Total", 1163.375]]
    assert refusal(folder, book(M=rows)).startswith(
        'masses.xlsx, sheet "M", cell A7: level "Total" is not in storeys.csv; must have the levels of storeys.csv'
    )


def test_a_column_that_the_table_lacks_is_added(folder, book):
    rows = [[row[0], 10 * row[1]] for row in ROWS[1:]]
    import_file(folder, book(M=[["level", "gravity load [kN]"], *rows]))
    assert folder.load().reading.storeys.gravity.tolist() == [2700, 2520, 2511.25, 2400, 1502.5]
    assert storeys(folder)[0][-1] == "gravity load [kN]"


@pytest.mark.parametrize(
    ("row", "column", "value", "message"),
    [
        (3, 1, -12, 'cell B4: level "3": mass -12 t; must be above 0'),
        (3, 1, None, 'cell B4: level "3": mass is blank; must be a number in t, above 0'),
        (3, 1, "12 or so", 'cell B4: mass "12 or so"; must be a number in t'),
        (3, 1, "1,250", "cell B4: mass 1,250 can be read in two ways; must be a number, not a text"),
        (3, 1, True, "cell B4: TRUE; must be a number or a text"),
        (3, 1, "=B3", "cell B4: a formula without a stored value; open the file in a spreadsheet program and save it"),
        (3, 1, "#DIV/0!", "cell B4: the error #DIV/0!; must be a number or a text"),
        (3, 0, None, "cell A4: level is blank; must have a name, or a blank row before what is no level"),
        (3, 0, "4", 'cell A4: level "4" stands in A3 as well; must stand in one row'),
        (3, 0, "3a", 'cell A4: level "3a" is not in storeys.csv; must have the levels of storeys.csv; --replace'),
        (0, 1, "mass", 'cell B1, heading "mass": no unit; must give its unit in square brackets: t, kg'),
        (0, 1, "mass [kN]", 'cell B1, heading "mass [kN]": "kN" is a unit of weight, not of mass'),
        (0, 0, "storey", None),
    ],
)
def test_refusals_name_the_cell_and_change_nothing(folder, book, row, column, value, message):
    before = (folder.path / "storeys.csv").read_bytes()
    found = refusal(folder, book(M=with_cell(row, column, value)))
    expected = message and f'masses.xlsx, sheet "M", {message}'
    missing = 'masses.xlsx, sheet "M": no row with the heading "level" and another that is known in the first 50 rows'
    assert found.startswith(expected or missing)
    assert (folder.path / "storeys.csv").read_bytes() == before


def test_other_refusals(folder, book):
    assert refusal(folder, book(M=ROWS[:-1])).startswith('masses.xlsx, sheet "M": no row for level "1"; must have')
    assert refusal(folder, book(M=ROWS[:1])) == (
        'masses.xlsx, sheet "M": no row below the headings in row 1; must have one for each level'
    )
    twice = [[*row, row[1]] for row in ROWS]
    assert refusal(folder, book(M=twice)) == (
        'masses.xlsx, sheet "M", cell C1: "mass [t]" is given in B1 as well; must be given once'
    )
    assert refusal(folder, book(M=ROWS), mapping={"Note": "remarks"}) == (
        'job.toml, imports.storeys."masses.xlsx".columns.Note: got "remarks"; '
        "must be a heading of the job's table, with its unit"
    )
    both = [["level", "weight [kN]"], *[[level, 10 * mass] for level, mass in ROWS[1:]]]
    assert 'columns "mass [t]" and "weight [kN]"; must have exactly one of them' in refusal(folder, book(M=both))


def test_a_problem_that_was_there_already_does_not_stop_an_import(job_folder, book):
    folder = JobFolder(job_folder(storeys=[("Roof,2.95,141.5,88000", "Roof,2.95,141.5,x")]))
    import_file(folder, book(M=ROWS))
    assert len(folder.load().problems) == 1


def test_the_whole_table_is_taken_where_levels_change(folder, book):
    named = ["level", "storey height [m]", "mass [t]", "stiffness x [kN/m]", "stiffness y [kN/m]"]
    rows = [named, ["Top", 3, 100.5, 50000, 60000], ["Low", 4.125, 210, 90000, 91000]]
    path = book(M=rows)
    assert 'level "Top" is not in storeys.csv' in refusal(folder, path)
    import_file(folder, path, take_whole=True)
    read = folder.load().reading.storeys
    assert (read.level, read.mass.tolist(), read.storey_height.tolist()) == (("Low", "Top"), [210, 100.5], [4.125, 3])
    partial = [[row[0], row[2]] for row in rows]
    assert 'no column "storey height [m]"' in refusal(folder, book(M=partial), take_whole=True)


def test_columns_lost_with_the_old_table_are_told(job_folder, book):
    folder = JobFolder(job_folder(files={"storeys.csv": "level,storey height [m],mass [t],stiffness x [kN/m],"
                                         "stiffness y [kN/m],remarks\nRoof,3,100,5e4,6e4,a\n"}))  # fmt: skip
    whole = [
        ["level", "storey height [m]", "mass [t]", "stiffness x [kN/m]", "stiffness y [kN/m]"],
        ["R", 3, 1, 5e4, 6e4],
    ]
    done = import_file(folder, book(M=whole), take_whole=True)
    assert done.notices == ("storeys.csv had columns that it has no longer: remarks",)


def test_csv_files_with_decimal_commas(folder, tmp_path):
    text = "level;mass [t]\n" + "".join(f"{level};{str(mass).replace('.', ',')}\n" for level, mass in ROWS[1:])
    (tmp_path / "m.csv").write_text("\ufeff" + text.replace("\n", "\r\n"), encoding="utf-8")
    import_file(folder, tmp_path / "m.csv")
    assert folder.load().reading.storeys.mass.tolist() == [270, 252, 251.125, 240, 150.25]
    (tmp_path / "m.csv").write_text(text.replace("240", "24o"), encoding="utf-8")
    assert refusal(folder, tmp_path / "m.csv") == 'm.csv, cell B3: mass "24o"; must be a number in t'


def test_the_jobs_own_decimal_comma_is_kept(job_folder, book):
    path = job_folder()
    text = (path / storeycells.FILE).read_text(encoding="utf-8").replace(",", ";").replace(".", ",")
    (path / storeycells.FILE).write_text(text, encoding="utf-8")
    import_file(JobFolder(path), book(M=ROWS))
    assert (path / storeycells.FILE).read_text(encoding="utf-8").splitlines()[1].split(";")[2] == "150,25"


def test_headings_two_rows_high(folder, tmp_path, book):
    path = book(M=[ROWS[0], [None, None], *ROWS[1:]])
    made = openpyxl.load_workbook(path)
    made["M"].merge_cells("A1:A2")
    made["M"].merge_cells("B1:B2")
    made.save(path)
    assert import_file(folder, path).levels == 5
    made["M"].merge_cells("B4:B5")
    made.save(path)
    assert (
        refusal(folder, path)
        == 'masses.xlsx, sheet "M", cell B5: merged with others in B4:B5; must be a cell of its own'
    )


FLOORS = [["level", "floor area [m²]", "plan x [m]", "plan y [m]", "slab [m²]"]]
FLOORS += [[level, 300.5, 20, 15, 300] for level in ("Roof", 4, 3, 2, 1)]
LOADS = "load,kind,place,load per area [kN/m²]\nslab,permanent,floor,7.2\n"


def test_floors_are_made_and_then_set(job_folder, book):
    folder = JobFolder(job_folder(files={"loads.csv": LOADS}))
    done = import_file(folder, book("areas.xlsx", F=FLOORS), table="floors")
    assert (done.table, done.levels) == ("floors.csv", 5)
    assert folder.load().floors.floors.area.tolist() == [300.5] * 5
    less = [["level", "slab [m²]"], *[[row[0], 280.25] for row in FLOORS[1:]]]
    assert import_file(folder, book("areas.xlsx", F=less), table="floors").changed == 5
    assert folder.load().floors.floors.amount[:, 0].tolist() == [280.25] * 5
    less[2][1] = -1
    assert refusal(folder, book("areas.xlsx", F=less), table="floors") == (
        'areas.xlsx, sheet "F", cell B3: level "4": slab -1 m²; must be 0 or above'
    )


def test_a_file_has_a_sheet_and_headings_for_each_table(job_folder, book):
    folder = JobFolder(job_folder(files={"loads.csv": LOADS}))
    path = book("all.xlsx", F=[["Floor", *FLOORS[0][1:]], *FLOORS[1:]], M=[["Floor", "m"], *ROWS[1:]])
    import_file(folder, path, sheet="M", mapping={"Floor": "level", "m": "mass [t]"})
    import_file(folder, path, table="floors", mapping={"Floor": "level"})
    imports = folder.load().card.imports
    assert (imports.storeys["all.xlsx"].sheet, imports.floors["all.xlsx"].sheet) == ("M", "")
    assert import_file(folder, path).changed == import_file(folder, path, table="floors").changed == 0


def test_floors_need_the_loads_that_name_their_columns(folder, book):
    assert refusal(folder, book(F=FLOORS), table="floors") == (
        "no loads.csv in the job folder; make it first: the columns of floors.csv are named after its loads"
    )


def test_tables_are_exported_and_come_back_to_the_fifteenth_digit(job_folder, tmp_path):
    third = 33.3333333333333
    files = {
        "loads.csv": LOADS,
        "floors.csv": "level,floor area [m²],plan x [m],plan y [m],slab [m²]\n"
        + "".join(f"{level},{third!r},20,15,0.1\n" for level in ("Roof", 4, 3, 2, 1)),
    }
    folder = JobFolder(job_folder(storeys=[("141.5", repr(third))], files=files))
    before = folder.load()
    assert export_file(folder, tmp_path / "out.xlsx") == ("storeys", "floors", "loads")
    import_file(folder, tmp_path / "out.xlsx", sheet="storeys", take_whole=True)
    import_file(folder, tmp_path / "out.xlsx", sheet="floors", table="floors", take_whole=True)
    after = folder.load()
    assert after.reading.storeys.mass.tolist() == before.reading.storeys.mass.tolist()
    assert after.floors.floors.area.tolist() == [third] * 5
    for d in "xy":
        chains = [files.reading.storeys.stiffness[0].lateral[d].storey.tolist() for files in (before, after)]
        assert chains[0] == chains[1]


cells = st.one_of(
    st.floats(allow_nan=False, allow_infinity=False),
    st.text(st.sampled_from("level mas[t]0123456789.,-eE="), max_size=8),
    st.sampled_from(["level", "mass [t]", "mass", "Roof", "4", "3", "2", "1", ""]),
)


@pytest.fixture
def target(job_folder):
    """The storey table, and what its headings stand for."""
    files = JobFolder(job_folder()).load()
    return files.reading.table, lambda name: headings.known(name, name, files.card, files.reading.ways)


QUIET = settings(suppress_health_check=[HealthCheck.function_scoped_fixture], deadline=None, max_examples=150)


@QUIET
@given(st.lists(st.lists(cells.map(Cell), max_size=4).map(tuple), max_size=9), st.sampled_from(["", ",", ";"]))
def test_any_sheet_is_read_or_refused(target, rows, delimiter):
    """Cells of any kind: a table of the same rows and levels, or a refusal; never another error."""
    table, knows = target
    for body in (tuple(rows), ((Cell("level"), Cell("mass [t]")), *rows)):
        try:
            new = merged(find_table((Sheet("m.xlsx", "M", delimiter, body),), "", {}, knows), table, knows)
        except InputError:
            continue
        assert [row[0] for row in new.rows] == [row[0] for row in table.rows]


@QUIET
@given(st.permutations(["Roof", "4", "3", "2", "1"]), st.lists(st.floats(1e-3, 1e9), min_size=5, max_size=5))
def test_numbers_of_the_same_unit_are_carried_over_to_the_last_bit(target, levels, masses):
    table, knows = target
    rows = tuple((Cell(level), Cell(mass)) for level, mass in zip(levels, masses, strict=True))
    sheet = Sheet("m.xlsx", "M", "", ((Cell("Level"), Cell("Mass [t]")), *rows))
    new = merged(find_table((sheet,), "", {}, knows), table, knows)
    held = {row[0]: parse_number(row[2], ".") for row in new.rows}
    assert held == dict(zip(levels, masses, strict=True))
