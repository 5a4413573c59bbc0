from __future__ import annotations

import pytest

from calcsheet.job.errors import InputError
from calcsheet.job.spectrumfile import read_points

TEXT = "period [s],ordinate [g]\n0,0.3\n0.10,0.75\n\n0.6,0.75\n4,0\n"
READ = ((0.0, 0.3), (0.1, 0.75), (0.6, 0.75), (4.0, 0.0))


def test_points_are_read(table):
    assert read_points(table(TEXT, "sa.csv")) == READ


def test_ordinates_as_accelerations(table):
    text = "Ordinate [m/s2],Period [s]\n2.941995,0\n0.980665,2\n"
    period, ordinate = zip(*read_points(table(text, "sa.csv")), strict=True)
    assert period == (0.0, 2.0)
    assert ordinate == pytest.approx((0.3, 0.1), rel=1e-15)


def test_files_as_spreadsheets_write_them(table):
    text = "\ufeff" + TEXT.replace(",", ";").replace(".", ",").replace("\n\n", "\n;\n").replace("\n", "\r\n")
    assert read_points(table(text.encode(), "sa.csv")) == READ


COLUMNS = 'must be "period [s]" and "ordinate [g]" or "ordinate [m/s²]"'


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("period [s],", "", f'sa.csv: columns "ordinate [g]"; {COLUMNS}'),
        ("ordinate", "Sa", f'sa.csv: columns "period [s]", "Sa [g]"; {COLUMNS}'),
        ("[g]", "[g],note", f'sa.csv: columns "period [s]", "ordinate [g]", "note"; {COLUMNS}'),
        ("period [s]", "period", 'sa.csv, heading "period": no unit; must give its unit in square brackets: s'),
        (
            "[g]",
            "[s]",
            'sa.csv, heading "ordinate [s]": "s" is a unit of period, not of ordinate; must be g or m/s²',
        ),
        ("0.6,", "0.1,", "sa.csv, row 5: period 0.1 s; must be above 0.1 s, that of row 3"),
        ("0.6,", "0.05,", "sa.csv, row 5: period 0.05 s; must be above 0.1 s, that of row 3"),
        ("0,0.3", "-1,0.3", "sa.csv, row 2: period -1 s; must be 0 or above"),
        ("0.3", "-0.3", "sa.csv, row 2: ordinate -0.3 g; must be 0 or above"),
        ("0.3", "nan", 'sa.csv, row 2: ordinate "nan"; must be a number in g'),
        ("0.3", "", "sa.csv, row 2: ordinate is blank; must be a number in g, 0 or above"),
        ("0.10,0.75", "0.10,0.75,1", "sa.csv, row 3: 3 cells; must be 2, one for each heading"),
    ],
)
def test_refusals(table, old, new, message):
    assert old in TEXT
    with pytest.raises(InputError) as caught:
        read_points(table(TEXT.replace(old, new, 1), "sa.csv"))
    assert str(caught.value) == message


@pytest.mark.parametrize(("rows", "found"), [("", "no points"), ("1,2\n", "1 point")])
def test_too_few_points(table, rows, found):
    with pytest.raises(InputError) as caught:
        read_points(table(f"period [s],ordinate [g]\n{rows}", "sa.csv"))
    assert str(caught.value) == f"sa.csv: {found}; must have a row for each point, at least two"
