from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.matrix import FlexibilityMatrix, StiffnessMatrix
from calcsheet.job.matrixfile import read_matrix

LEVELS = ("1", "2", "Roof, top")
K = np.array([[5.0, -2.0, 0.0], [-2.0, 4.5, -2.5], [0.0, -2.5, 2.5]])
ROOF_FIRST = '[MN/m],"Roof, top",2,1\n"Roof, top",2.5,-2.5,0\n2,-2.5,4.5,-2\n1,0,-2,5\n\n,,,\n'
BASE_FIRST = '[MN/m];1;2;Roof, top\n1;5;-2;0\n2;-2;"4,5";-2,5\nRoof, top;0;-2,5;2,5\n'


@pytest.mark.parametrize("text", [ROOF_FIRST, BASE_FIRST])
def test_either_order_is_turned_base_up(table, text):
    matrix, problems = read_matrix(table(text, "kx.csv"), LEVELS, "stiffness")
    assert problems == []
    np.testing.assert_allclose(matrix, 1000.0 * K)


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        (
            "[MN/m]",
            "[MN]",
            'heading "[MN]": "MN" is a unit of weight, not of stiffness; '
            "must be kN/m, kN/mm, MN/m, N/mm, N/m, kip/in, kip/ft or lbf/in",
        ),
        (
            "[MN/m]",
            "level",
            'heading "level": no unit; must give its unit in square brackets: '
            "kN/m, kN/mm, MN/m, N/mm, N/m, kip/in, kip/ft or lbf/in",
        ),
        ("4.5", "x", 'row "2", column "2": stiffness "x"; must be a number in MN/m'),
        ("4.5", "", 'row "2", column "2": stiffness is blank; must be a number in MN/m, a finite number'),
        (
            "1,0,",
            "G,0,",
            'rows: named "Roof, top", "2", "G"; '
            'must be the levels of the model, "Roof, top", "2", "1", in this order or its reverse',
        ),
        (
            ",2,1\n",
            ",1,2\n",
            'columns: named "Roof, top", "1", "2"; '
            'must be the levels of the model, "Roof, top", "2", "1", in this order or its reverse',
        ),
        (
            "2,-2.5,4.5,-2\n1,0,-2,5\n",
            "",
            'rows: named "Roof, top"; '
            'must be the levels of the model, "Roof, top", "2", "1", in this order or its reverse',
        ),
        (
            '"Roof, top",2,1\n',
            '1,2,"Roof, top"\n',
            "rows and columns: in opposite orders; must be in the same order",
        ),
        (
            "-2.5,0\n",
            "-2.5,0,7\n",
            'columns: named "Roof, top", "2", "1", ""; '
            'must be the levels of the model, "Roof, top", "2", "1", in this order or its reverse',
        ),
    ],
)
def test_refusals(table, old, new, message):
    assert old in ROOF_FIRST
    _, problems = read_matrix(table(ROOF_FIRST.replace(old, new, 1), "kx.csv"), LEVELS, "stiffness")
    assert [str(problem) for problem in problems] == [f"kx.csv, {message}"]


def test_a_table_of_headings_alone(table):
    _, problems = read_matrix(table('[kN/m],"Roof, top",2,1\n', "kx.csv"), LEVELS, "stiffness")
    assert str(problems[0]).startswith("kx.csv, rows: none; must be the levels of the model")


def matrix_text(matrix: np.ndarray, unit: str) -> str:
    """A matrix of the four levels of the job, base first."""
    names = ["1", "2", '"3, upper"', "Roof"]
    rows = [",".join([name, *map(repr, map(float, row))]) for name, row in zip(names, matrix, strict=True)]
    return "\n".join([",".join([f"[{unit}]", *names]), *rows]) + "\n"


GIVEN = np.diag([5.0, 4.0, 4.0, 2.0]) - 2.0 * (np.eye(4, k=1) + np.eye(4, k=-1))


def on(kind: str) -> tuple[tuple[str, str], ...]:
    return (('"storey chain"', f'"{kind}"\nx = "x.csv"\ny = "y.csv"'),)


def test_storeys_with_stiffness_matrices(read):
    tables = dict.fromkeys("xy", matrix_text(GIVEN, "MN/m"))
    got = read(on=on("stiffness matrix"), matrices=tables)
    assert [p.message for p in got.problems] == []
    assert 'storeys.csv, column "stiffness x [kN/m]" isn\'t used by this model, and is kept' in got.notices
    uncracked, cracked = got.storeys.stiffness
    assert isinstance(cracked.lateral["y"], StiffnessMatrix)
    np.testing.assert_allclose(uncracked.lateral["x"].matrix, 1000.0 * GIVEN)
    np.testing.assert_allclose(cracked.lateral["y"].matrix, 500.0 * GIVEN)


def test_a_flexibility_is_divided_by_the_factor(read):
    flexibility = np.linalg.inv(GIVEN)
    flexibility = 0.5 * (flexibility + flexibility.T)
    tables = dict.fromkeys("xy", matrix_text(flexibility, "mm/kN"))
    uncracked, cracked = read(on=on("flexibility matrix"), matrices=tables).storeys.stiffness
    assert isinstance(cracked.lateral["x"], FlexibilityMatrix)
    np.testing.assert_allclose(uncracked.lateral["x"].matrix, 0.001 * flexibility)
    np.testing.assert_allclose(cracked.lateral["x"].matrix, 0.002 * flexibility)


def test_an_unsymmetric_matrix_is_refused_by_file(read):
    wrong = GIVEN.copy()
    wrong[0, 1] = -1.0
    tables = {"x": matrix_text(GIVEN, "MN/m"), "y": matrix_text(wrong, "MN/m")}
    got = read(on=on("stiffness matrix"), matrices=tables)
    assert got.storeys is None
    assert {p.message.partition(":")[0] for p in got.problems} == {
        "y.csv, lateral stiffness matrix [kN/m], entries (1, 2) and (2, 1) from the base"
    }


def test_only_the_levels_above_the_effective_base_are_wanted(read):
    tables = dict.fromkeys("xy", matrix_text(GIVEN, "MN/m"))
    base = ('effective_base = ""', 'effective_base = "1"')
    got = read(on=(*on("stiffness matrix"), base), matrices=tables)
    assert got.problems[0].message == (
        'x.csv, columns: named "1", "2", "3, upper", "Roof"; '
        'must be the levels of the model, "Roof", "3, upper", "2", in this order or its reverse'
    )
