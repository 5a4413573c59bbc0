from __future__ import annotations

import pickle

import pytest

from calcsheet.job.errors import ConflictError, InputError


@pytest.mark.parametrize(
    ("parts", "message"),
    [
        (
            ("storeys.csv", 'level "3"', "mass -12 t", "must be above 0"),
            'storeys.csv, level "3": mass -12 t; must be above 0',
        ),
        (("storeys.csv", "", "no levels", "must have one"), "storeys.csv: no levels; must have one"),
        (("", "", "no job.toml", "make one"), "no job.toml; make one"),
    ],
)
def test_the_sentence(parts, message):
    error = InputError(*parts)
    assert str(error) == message
    assert (error.file, error.where, error.found, error.allowed) == parts


def test_errors_cross_processes():
    error = pickle.loads(pickle.dumps(ConflictError("a", "b", "c", "d")))
    assert isinstance(error, ConflictError)
    assert str(error) == "a, b: c; d"
