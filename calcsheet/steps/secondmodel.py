"""Results of the second model that are far from this calculation's."""

from __future__ import annotations

from collections.abc import Mapping

from calcsheet.core.basis import Basis
from calcsheet.steps.step import Caution, Number, plain

APART = 0.1
"""Difference, as a share of the value here, beyond which an answer is asked for (common practice)."""


def apart(basis: Basis, quantity: str, here: Mapping[str, Number]) -> list[Caution]:
    """Cautions for one quantity; several results of one quantity and direction are numbered.

    Parameters
    ----------
    basis : Basis
        Holds the second model's results.
    quantity : {"period", "weight", "base shear"}
        The quantity.
    here : mapping of str to Number
        This calculation's value by direction, which is empty for a weight.
    """
    cautions = []
    for direction, number in here.items():
        others = [m for m in basis.second_model if (m.quantity, m.direction) == (quantity, direction)]
        of = f"{quantity} in {direction}" if direction else quantity
        for i, other in enumerate(others):
            difference = other.value / number.value - 1.0
            if abs(difference) > APART:
                side = "above" if difference > 0.0 else "below"
                text = (
                    f"The {of} is {{0}} here; that of the second model ({plain(other.origin)}) lies "
                    f"{100.0 * abs(difference):.1f} % {side} it."
                )
                names = (*quantity.split(), *([direction] if direction else []), *([str(i + 1)] if i else []))
                cautions.append(Caution("second-model-differs", text, (number,), answer=True, subject="-".join(names)))
    return cautions
