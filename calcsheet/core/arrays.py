"""Read-only arrays, frozen records, and how closely two runs of a result must agree."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, fields
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from calcsheet.core.errors import ModelError

Array = NDArray[np.float64]
"""Array of double precision numbers, read-only once it is held by a `Frozen` record."""


class Frozen:
    """Base of the core's records: every array they hold is a read-only copy."""

    def __post_init__(self) -> None:
        for field in fields(self):  # type: ignore[arg-type]
            value = getattr(self, field.name)
            if isinstance(value, np.ndarray):
                object.__setattr__(self, field.name, readonly(value))


def readonly(values: ArrayLike) -> Array:
    """Return a read-only double precision copy.

    Parameters
    ----------
    values : array_like
        The numbers, of any shape.
    """
    array = np.array(values, dtype=np.float64)
    array.setflags(write=False)
    return array


def positive(values: ArrayLike, what: str, names: Sequence[str] | None = None) -> Array:
    """Return a vector as a read-only array, refusing what is not finite and above zero.

    Parameters
    ----------
    values : (n,) array_like
        The numbers.
    what : str
        Their name and unit in messages, such as "storey stiffness [kN/m]".
    names : sequence of str, optional
        A name for each entry; its number, from 1, where omitted.

    Raises
    ------
    ModelError
        Naming the first entry that is refused.
    """
    array = readonly(values)
    if array.ndim != 1 or array.size == 0:
        raise ModelError(what, f"an array of shape {array.shape}", "must be a vector with at least one entry")
    bad = ~(np.isfinite(array) & (array > 0.0))
    if bad.any():
        i = int(np.argmax(bad))
        name = names[i] if names is not None else str(i + 1)
        raise ModelError(f'{what}, "{name}"', f"{array[i]:g}", "must be finite and above 0")
    return array


@dataclass(frozen=True)
class Agreement:
    """How two independent runs of one result field are held against each other.

    Parameters
    ----------
    rtol : float
        Relative tolerance, of the field's largest magnitude where `scaled`.
    atol : float
        Absolute tolerance, added.
    below : float, optional
        Values that differ need only lie below this bound, both (measures of error).
    subspace : str, optional
        Name of the field of frequencies: columns are compared as the subspaces that close groups span.
    group : str, optional
        Name of the field of frequencies: modes of a close group are summed before they are compared.
    weight : str, optional
        With `group`: the field whose values multiply these before they are summed.
    squared : bool
        With `group`: squares are summed.
    running : bool
        With `group`: the field is a running sum, compared at the last mode of each group.
    """

    rtol: float = 0.0
    atol: float = 0.0
    below: float | None = None
    subspace: str | None = None
    group: str | None = None
    weight: str | None = None
    squared: bool = False
    running: bool = False


def agrees(**how: Any) -> dict[str, Agreement]:
    """Metadata for a result field.

    Parameters
    ----------
    **how
        What `Agreement` takes.
    """
    return {"agrees": Agreement(**how)}
