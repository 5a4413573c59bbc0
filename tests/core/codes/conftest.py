"""A three-storey building in round numbers, and a reader of worked relations."""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Sequence

import numpy as np
import pytest

from calcsheet.core.codes.edition import Facts, Relation


@pytest.fixture(scope="session")
def building() -> Callable[..., Facts]:
    """A building: levels at 4, 7 and 10 m, 2000, 2000 and 1000 kN, unless said otherwise."""

    def build(
        direction: str = "x",
        period: float = 0.6,
        height: Sequence[float] = (4.0, 7.0, 10.0),
        weight: Sequence[float] = (2000.0, 2000.0, 1000.0),
        share_of_three: float | None = None,
        other_period: float | None = None,
    ) -> Facts:
        above = np.array(height, dtype=float)
        return Facts(
            direction=direction,
            period=period,
            height=above,
            storey_height=np.diff(above, prepend=0.0),
            weight=np.array(weight, dtype=float),
            share_of_three=share_of_three,
            other_period=other_period,
        )

    return build


@pytest.fixture(scope="session")
def worked() -> Callable[[Relation], float]:
    """What the substitution of a relation gives, as a pocket calculator would read it."""

    def evaluate(relation: Relation) -> float:
        numbers = [v.value / 0.3048 if v.quantity == "feet" else v.value for v in relation.values]
        text, _, _ = relation.substitution.partition(", for ")
        text = text.replace(" s)", ")").removesuffix(" s").format(*(f"({n!r})" for n in numbers))
        text = re.sub(r"√(\([^)]*\))", r"sqrt\1", text)
        for sign, operator in (("×", "*"), ("^", "**"), ("²", "**2"), ("−", "-")):
            text = text.replace(sign, operator)
        return float(eval(text, {"__builtins__": {}}, {"sqrt": math.sqrt, "ln": math.log}))

    return evaluate
