"""What a step is, what it gives, and the payload that keeps it."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Any

from numpy.linalg import LinAlgError

from calcsheet.core.arrays import agrees
from calcsheet.core.errors import ModelError
from calcsheet.core.evidence import Evidence
from calcsheet.steps.cautions import CAUTIONS
from calcsheet.steps.serial import NotFiniteError, from_json, to_json

Payload = dict[str, Any]
"""Plain JSON of a step: kind, version, state, why, needs, inputs, result, lines, cautions, evidence."""


@dataclass(frozen=True)
class Number:
    """A number in words, with its place in the payload.

    Parameters
    ----------
    value : float
        The number in core units.
    quantity : str
        Quantity of the unit table, such as "period".
    at : str
        Where it stands in the payload, such as "result/0/omega/0".
    """

    value: float = field(metadata=agrees(rtol=1e-7, atol=1e-12))
    quantity: str
    at: str


def plain(text: str) -> str:
    """The engineer's text, made safe for a template of words with numbers."""
    return text.replace("{", "{{").replace("}", "}}")


@dataclass(frozen=True)
class Line:
    """A worked line: quantity | relation | with values | result | reference.

    Parameters
    ----------
    quantity : str
        What is worked out.
    relation : str
        The relation in symbols.
    substitution : str
        The relation with places ``{0}``, ``{1}`` … for `numbers`.
    numbers : tuple of Number
        The very values used.
    result : Number
        What they give.
    reference : str
        Source of the relation.
    """

    quantity: str
    relation: str
    substitution: str
    numbers: tuple[Number, ...]
    result: Number
    reference: str


@dataclass(frozen=True)
class Caution:
    """Something the reader must weigh.

    Parameters
    ----------
    kind : str
        What it is about: a key of `CAUTIONS`.
    text : str
        What was found, with places ``{0}`` … for `numbers`.
    numbers : tuple of Number
        The numbers that raise it.
    answer : bool
        Whether an answer of the engineer's is asked for.
    subject : str
        What raises it, where there can be several of a kind: a direction, a file, a level.

    Raises
    ------
    ValueError
        A kind of which nothing is said.
    """

    kind: str
    text: str
    numbers: tuple[Number, ...] = ()
    answer: bool = False
    subject: str = ""

    def __post_init__(self) -> None:
        if self.kind not in CAUTIONS:
            raise ValueError(f'kind of caution: got "{self.kind}"; must be one of {", ".join(CAUTIONS)}')

    @property
    def key(self) -> str:
        """Its stable name."""
        return key_of(self.kind, self.subject)


def key_of(kind: str, subject: str) -> str:
    """Stable name of a caution."""
    return f"{kind}-{subject}" if subject else kind


@dataclass(frozen=True)
class Outcome:
    """What a step gives.

    Parameters
    ----------
    result : object
        A frozen record.
    lines : tuple of Line
        Worked lines.
    cautions : tuple of Caution
        What its numbers raise.
    evidence : tuple of Evidence
        Figures with limits.
    """

    result: Any
    lines: tuple[Line, ...] = ()
    cautions: tuple[Caution, ...] = ()
    evidence: tuple[Evidence, ...] = ()


@dataclass(frozen=True)
class Done:
    """An upstream step's inputs and result, as a step downstream sees them."""

    inputs: Any
    result: Any


@dataclass(frozen=True)
class Step:
    """A stage of the calculation.

    Parameters
    ----------
    kind : str
        Its name.
    version : int
        Version of its payload.
    title : str
        Its heading in words.
    inputs, result : type
        The records it takes and gives.
    needs : tuple of str
        Kinds of the steps it builds on.
    run : callable
        ``run(inputs, *upstream: Done) -> Outcome``.
    method : str
        What it does and from which sources, in markdown with equations.
    """

    kind: str
    version: int
    title: str
    inputs: Any
    result: Any
    needs: tuple[str, ...]
    run: Callable[..., Outcome]
    method: str = ""


def calculated(step: Step, needs: Mapping[str, str], inputs: Any, upstream: tuple[Done, ...]) -> Payload:
    """Run a step and keep what came of it; a refused model becomes a payload that says why.

    Parameters
    ----------
    step : Step
        The step.
    needs : mapping of str to str
        Key of the node that serves each kind needed.
    inputs : object
        Its inputs.
    upstream : tuple of Done
        What it builds on, in the order of ``step.needs``.
    """
    try:
        outcome = step.run(inputs, *upstream)
        return _payload(step, needs, "ok", "", inputs) | {
            "result": to_json(outcome.result),
            "lines": to_json(outcome.lines),
            "cautions": to_json(outcome.cautions),
            "evidence": to_json(outcome.evidence),
        }
    except ModelError as error:
        return unfinished(step, needs, "refused", str(error), inputs)
    except (NotFiniteError, LinAlgError):
        why = f"{step.title.lower()}: numbers beyond what can be calculated; check masses, stiffnesses and their units"
        return unfinished(step, needs, "refused", why, inputs)


def unfinished(step: Step, needs: Mapping[str, str], state: str, why: str, inputs: Any = None) -> Payload:
    """The payload of a step that is "refused" or "waiting", and why."""
    return _payload(step, needs, state, why, inputs)


def _payload(step: Step, needs: Mapping[str, str], state: str, why: str, inputs: Any) -> Payload:
    return {
        "kind": step.kind,
        "version": step.version,
        "state": state,
        "why": why,
        "needs": dict(needs),
        "inputs": to_json(inputs),
        "result": None,
        "lines": [],
        "cautions": [],
        "evidence": [],
    }


def done(step: Step, payload: Payload) -> Done:
    """Inputs and result of a payload as records."""
    return Done(from_json(step.inputs, payload["inputs"]), from_json(step.result, payload["result"]))
