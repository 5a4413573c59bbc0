"""What a view is: from the job's payloads, one step's key and options to tables at once and figures when drawn."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Any

from calcsheet.render.figure import Drawing
from calcsheet.steps.step import Payload


@dataclass(frozen=True)
class Rendered:
    """A view rendered.

    Parameters
    ----------
    html : str
        Numbers, tables and words.
    draw : callable
        Draws the figures; slow beside the rest, so called last.
    """

    html: str
    draw: Callable[[], tuple[Drawing, ...]] = tuple


@dataclass(frozen=True)
class Choice:
    """An option of a view that its reader may set.

    Parameters
    ----------
    key : str
        Name of the option.
    label : str
        Label, as text.
    options : mapping of str to str
        Label of each value; the first is the default.
    """

    key: str
    label: str
    options: Mapping[str, str]


def _own_step(payloads: Mapping[str, Payload], key: str) -> Any:
    return payloads[key]


@dataclass(frozen=True)
class View:
    """A way to show a step.

    Parameters
    ----------
    name : str
        Its name, kept in saved notebooks.
    title : str
        Its heading, as text.
    step : str
        Kind of the step shown.
    render : callable
        ``render(payloads, key, options) -> Rendered``; called on a step whose state is "ok" only.
    choices : tuple of Choice
        What may be set.
    covers : callable
        ``covers(payloads, key)`` gives the plain JSON that the view shows, by whose fingerprint a twin in a saved notebook is
        known to be current: the step's payload where omitted.
    printed : bool
        Whether a record prints it. A view on screen only has a notice for its twin, rendered whatever the step's state.
    """

    name: str
    title: str
    step: str
    render: Callable[[Mapping[str, Payload], str, Mapping[str, Any]], Rendered]
    choices: tuple[Choice, ...] = field(default=())
    covers: Callable[[Mapping[str, Payload], str], Any] = _own_step
    printed: bool = True

    def chosen(self, options: Mapping[str, Any]) -> dict[str, Any]:
        """The options with defaults filled in.

        Raises
        ------
        ValueError
            An option that the view hasn't, or a value that isn't one of its own.
        """
        allowed = {c.key: c.options for c in self.choices}
        for key, value in options.items():
            if key not in allowed:
                raise ValueError(f"{self.title}: no option {key!r}; it has {', '.join(allowed) or 'none'}")
            if value not in allowed[key]:
                raise ValueError(f"{self.title}, {key}: {value!r}; must be {' or '.join(map(repr, allowed[key]))}")
        return {key: next(iter(values)) for key, values in allowed.items()} | dict(options)


def system_of(payloads: Mapping[str, Payload]) -> str:
    """The job's system of units, "SI" or "US"."""
    return str(payloads["card"]["inputs"]["units"]["system"])
