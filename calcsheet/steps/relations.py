"""A code edition's relations as worked lines."""

from __future__ import annotations

from calcsheet.core.codes.edition import Relation
from calcsheet.steps.step import Line, Number

SUBSCRIPTS = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")


def numbered(symbols: str, mode: int) -> str:
    """Symbols of mode 1, such as "Γ₁", as those of another mode, counted from 0."""
    return symbols.replace("₁", str(mode + 1).translate(SUBSCRIPTS))


def line_of(relation: Relation, of: str, at: str) -> Line:
    """A worked line.

    Parameters
    ----------
    relation : Relation
        The relation with its values.
    of : str
        What it is worked out for, such as "x"; put after the quantity.
    at : str
        Where the relation stands in the payload.

    Notes
    -----
    Lengths that give a displacement are shown in its unit, so that the numbers printed give the one printed.
    """
    shown = {"length": "displacement"} if relation.result.quantity == "displacement" else {}
    numbers = tuple(
        Number(v.value, shown.get(v.quantity, v.quantity), f"{at}/values/{i}/value")
        for i, v in enumerate(relation.values)
    )
    result = Number(relation.result.value, relation.result.quantity, f"{at}/result/value")
    quantity = f"{relation.quantity}, {of}"
    return Line(quantity, relation.relation, relation.substitution, numbers, result, relation.clause)
