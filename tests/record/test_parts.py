"""Parts of a notebook and their plain JSON."""

from __future__ import annotations

import json

import pytest

from calcsheet.record.parts import Own, Shown, Words, from_plain, to_plain


@pytest.mark.parametrize(
    "part",
    [
        Words("# A\n\n$x$", {"plan.png": {"image/png": "aGk="}}),
        Shown("mode plot", "modes", {"normalise": "roof"}),
        Own("1 + 1", ({"text/plain": "2"}, {"image/png": "aGk=", "text/plain": "plan"})),
    ],
    ids=["words", "shown", "own"],
)
def test_a_part_comes_back_from_its_json(part):
    assert from_plain(json.loads(json.dumps(to_plain(part)))) == part
