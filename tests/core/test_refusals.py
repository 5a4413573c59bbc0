"""Every refusal of the core, by its sentence: what, where, what was found, what is allowed."""

from __future__ import annotations

import numpy as np
import pytest

from calcsheet.core.chain import Chain
from calcsheet.core.errors import ModelError
from calcsheet.core.matrix import FlexibilityMatrix, StiffnessMatrix
from calcsheet.core.model import Model, models_of
from calcsheet.core.modes import modes_of
from calcsheet.core.participation import participation
from calcsheet.core.storeys import StiffnessSet, Storeys


def refusal(function, *arguments, **named) -> str:
    with pytest.raises(ModelError) as caught:
        function(*arguments, **named)
    error = caught.value
    assert str(error) == f"{error.where}: {error.found}; {error.allowed}"
    return str(error)


@pytest.mark.parametrize(("value", "shown"), [(0.0, "0"), (-5.0, "-5"), (np.nan, "nan"), (np.inf, "inf")])
def test_a_storey_stiffness(value, shown):
    expected = f'storey stiffness [kN/m], "2": {shown}; must be finite and above 0'
    assert refusal(Chain, np.array([1e5, value, 1e5])) == expected


@pytest.mark.parametrize("values", [np.zeros(0), np.ones((2, 2))])
def test_no_vector_of_stiffnesses(values):
    found = f"an array of shape {values.shape}"
    assert refusal(Chain, values) == f"storey stiffness [kN/m]: {found}; must be a vector with at least one entry"


@pytest.mark.parametrize(("value", "shown"), [(0.0, "0"), (-12.0, "-12"), (np.nan, "nan"), (np.inf, "inf")])
def test_a_mass_by_its_level(planar, value, shown):
    assert refusal(planar, [200.0, 200.0, value], [1e5] * 3) == (f'mass [t], "L3": {shown}; must be finite and above 0')


@pytest.mark.parametrize(
    ("part", "value", "expected"),
    [
        ("mass", np.ones(3), "mass: 3 entries; must have 2, as the lateral stiffness has"),
        ("level_of", (0, 1, 1), "level_of: 3 entries; must have 2, as the lateral stiffness has"),
        ("influence", np.ones((1, 3)), "influence: 3 entries; must have 2, as the lateral stiffness has"),
        ("height", np.ones(3), "height: 3 entries; must have 2, one a level"),
    ],
)
def test_arrays_that_do_not_fit(part, value, expected):
    given = {
        "level": ("1", "2"),
        "height": np.array([3.0, 6.0]),
        "mass": np.ones(2),
        "level_of": (0, 1),
        "direction": ("x",),
        "influence": np.ones((1, 2)),
        "lateral": Chain(np.ones(2)),
    }
    Model(**given)
    assert refusal(Model, **given | {part: value}) == expected


MATRICES = [
    (StiffnessMatrix, "lateral stiffness matrix [kN/m]"),
    (FlexibilityMatrix, "lateral flexibility matrix [m/kN]"),
]


@pytest.mark.parametrize(("kind", "name"), MATRICES)
@pytest.mark.parametrize("values", [np.ones((2, 3)), np.ones(4), np.ones((0, 0))])
def test_a_matrix_that_is_not_square(kind, name, values):
    found = f"an array of shape {values.shape}"
    assert refusal(kind, values) == f"{name}: {found}; must be square, a row and a column a level"


@pytest.mark.parametrize(("kind", "name"), MATRICES)
def test_a_matrix_with_an_entry_that_is_not_finite(kind, name):
    values = np.array([[2.0, np.nan], [-1.0, 1.0]])
    assert refusal(kind, values) == f"{name}, entry (1, 2) from the base: nan; must be finite"


@pytest.mark.parametrize(("kind", "name"), MATRICES)
def test_an_unsymmetric_matrix(kind, name):
    values = np.array([[2000.0, -1000.0], [-1002.1, 1000.0]])
    assert refusal(kind, values) == (
        f"{name}, entries (1, 2) and (2, 1) from the base: -1000 and -1002.1; "
        "must be equal within 0.001 of the largest entry"
    )


@pytest.mark.parametrize("kind", [StiffnessMatrix, FlexibilityMatrix])
def test_rounding_is_taken_as_symmetric_and_measured(kind):
    values = np.array([[2000.0, -1000.0], [-1001.9, 1000.0]])
    lateral = kind(values)
    assert lateral.asymmetry == pytest.approx(1.9 / 2000.0)
    assert lateral.symmetric[0, 1] == lateral.symmetric[1, 0] == pytest.approx(-1000.95)


@pytest.mark.parametrize(("kind", "name"), MATRICES)
@pytest.mark.parametrize(("values", "found"), [(np.diag([2.0, -3.0]), "-3"), (np.diag([2.0, 0.0]), "0")])
def test_a_diagonal_that_is_not_above_zero(kind, name, values, found):
    expected = f"entry (2, 2) from the base: {found}; must be above 0: a force moves its own level its own way"
    assert refusal(kind, values) == f"{name}, {expected}"


@pytest.mark.filterwarnings("error")
@pytest.mark.parametrize(("kind", "name"), MATRICES)
@pytest.mark.parametrize("values", [np.array([[1.0, -1.0], [-1.0, 1.0]]), np.array([[1.0, 2.0], [2.0, 1.0]])])
def test_a_mechanism(kind, name, values):
    expected = "a matrix that is not positive definite; every displacement must meet resistance (no mechanism)"
    assert refusal(kind, values) == f"{name}: {expected}"


@pytest.mark.parametrize("keep", [0, -1, 4])
def test_a_number_of_modes(planar, keep):
    model = planar([200.0] * 3, [1e5] * 3)
    expected = f"number of modes: {keep}; must be 1 to 3, the number of degrees of freedom"
    assert refusal(modes_of, model, keep) == expected


@pytest.mark.parametrize(("target", "shown"), [(0.0, "0"), (-0.1, "-0.1"), (1.01, "1.01"), (np.nan, "nan")])
def test_a_target(planar, target, shown):
    model = planar([200.0] * 3, [1e5] * 3)
    expected = f"target share of the mass: {shown}; must be above 0 and at most 1"
    assert refusal(participation, model, modes_of(model), "x", target) == expected


def test_a_stiffness_set():
    lateral = {"x": Chain(np.array([1e5]))}
    sets = tuple(StiffnessSet(name, "a ground", lateral) for name in ("gross", "cracked"))
    one = np.array([3.5])
    storeys = Storeys("base", 0.0, ("1",), one, one, np.array([200.0]), (), sets, "gross", "cracked")
    assert refusal(models_of, storeys, "net") == 'stiffness set: got "net"; must be "gross" or "cracked"'
