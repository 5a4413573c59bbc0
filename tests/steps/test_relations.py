"""Relations of an edition as worked lines."""

from __future__ import annotations

from calcsheet.core.codes.edition import Relation, Value
from calcsheet.steps.relations import line_of


def relation(result: str) -> Relation:
    values = (Value(4.0, "length"), Value(0.5, "ratio"))
    return Relation("Limit", "α h / ν", "0.01 × {0} / {1}", values, Value(0.08, result), "1.2.3")


def test_a_line_holds_the_relation_and_where_its_numbers_stand():
    line = line_of(relation("length"), "x", "result/directions/0/limit_relation")
    assert (line.quantity, line.relation, line.reference) == ("Limit, x", "α h / ν", "1.2.3")
    at = "result/directions/0/limit_relation"
    assert [(n.value, n.quantity, n.at) for n in line.numbers] == [
        (4.0, "length", f"{at}/values/0/value"),
        (0.5, "ratio", f"{at}/values/1/value"),
    ]
    assert (line.result.value, line.result.at) == (0.08, f"{at}/result/value")


def test_lengths_that_give_a_displacement_are_shown_in_its_unit():
    line = line_of(relation("displacement"), "x", "a")
    assert [n.quantity for n in line.numbers] == ["displacement", "ratio"]
