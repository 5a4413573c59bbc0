"""The job card, job.toml: who, what, in which units, on which basis.

The description of each field is what its error says is allowed.
"""

from __future__ import annotations

import math
import re
import tomllib
from collections.abc import Iterator, Mapping
from typing import Annotated, Any

from pydantic import BeforeValidator, Field, ValidationError

from calcsheet.core.chain import Chain
from calcsheet.core.lateral import KINDS
from calcsheet.job.cardtables import (
    ANSWER,
    DIRECTIONS,
    Assumption,
    Base,
    CautionAnswer,
    Directions,
    Identity,
    Imports,
    Levels,
    LoadShare,
    MassSource,
    ModelChoice,
    Origin,
    OtherModel,
    People,
    Serves,
    SetBasis,
    System,
    Table,
)
from calcsheet.job.errors import InputError
from calcsheet.job.wording import dotted, refusal, shown

FILE = "job.toml"


def _as_tuple(value: object) -> object:
    return tuple(value) if isinstance(value, list) else value


def number_of(value: int | float) -> float:
    """Return a number of TOML in double precision, infinite where it is beyond that."""
    try:
        return float(value)
    except OverflowError:
        return math.inf if value > 0 else -math.inf


def _storable(value: object) -> object:
    """A value that JSON can hold; what it can't is refused later, and kept as its text for that message."""
    match value:
        case bool() | str():
            return value
        case dict() | list():
            return type(value)()
        case int() if abs(value) > 2**53:
            return str(number_of(value))
        case float() if not math.isfinite(value):
            return str(value)
        case int() | float():
            return value
        case _:
            return str(value)


def _storable_table(table: object) -> object:
    if not isinstance(table, dict):
        return table
    return {
        k: [_storable(v) for v in value] if isinstance(value, list) else _storable(value) for k, value in table.items()
    }


class Card(Table):
    """The job card, whole."""

    format: int = Field(ge=1, le=1, description="1, the format that this version reads")
    job: Identity = Field(description="a table [job]")
    people: People = Field(description="a table [people.prepared] with a name")
    units: System = Field(description="a table [units]")
    levels: Levels = Field(description="a table [levels]")
    directions: Directions = Field(description="a table [directions]")
    model: ModelChoice = Field(description="a table [model]")
    base: Base = Field(Base(), description="a table [base]")
    stiffness: Mapping[str, SetBasis] = Field(min_length=1, description="a table [stiffness.NAME] for each set")
    serves: Serves = Field(description="a table [serves]")
    basis: Annotated[Mapping[str, Any] | None, BeforeValidator(_storable_table)] = Field(
        None, description="a table [basis]"
    )
    mass_basis: Annotated[tuple[LoadShare, ...], BeforeValidator(_as_tuple)] = Field(
        (), description="tables [[mass_basis]]"
    )
    masses: MassSource | None = Field(None, description="a table [masses]")
    second_model: Annotated[tuple[OtherModel, ...], BeforeValidator(_as_tuple)] = Field(
        (), description="tables [[second_model]]"
    )
    assumptions: Annotated[tuple[Assumption, ...], BeforeValidator(_as_tuple)] = Field(
        (), description="tables [[assumptions]]"
    )
    origins: Mapping[str, Origin] = Field({}, description="a table for each file")
    imports: Imports = Field(Imports(), description="a table [imports.storeys] or [imports.floors]")
    answers: Mapping[str, Annotated[CautionAnswer, Field(description=ANSWER)]] = Field({}, description="a table")


def parse_card(text: str) -> Card:
    """Read a job card from its text.

    Raises
    ------
    InputError
        The first thing wrong with it, by line or dotted key.
    """
    return card_of(parse_toml(text))


def card_of(values: Mapping[str, Any]) -> Card:
    """Read a job card from the values of its TOML; errors as in `parse_card`."""
    try:
        card = Card.model_validate(values)
    except ValidationError as error:
        raise refusal(FILE, Card, error.errors()[0]) from None
    for wrong in _contradictions(card):
        raise wrong
    return card


def parse_toml(text: str) -> dict[str, Any]:
    """Read TOML, refusing (InputError) by line what is none."""
    try:
        return tomllib.loads(text)
    except (ValueError, RecursionError) as error:
        located = re.fullmatch(r"(.*) \(at (line \d+|end of document).*\)", str(error), re.DOTALL)
        what, place = located.groups() if located else (str(error), "")
        if place == "end of document":
            place = f"line {len(text.splitlines())}"
        raise InputError(FILE, place, what[:1].lower() + what[1:], "must be TOML") from None


def _contradictions(card: Card) -> Iterator[InputError]:
    """What is right key by key, and wrong together."""
    analysed = card.directions.analysed
    if not analysed:
        yield InputError(FILE, "directions", "neither x nor y", "must have a sentence for x, y or both")
    by_file = card.model.by_file
    if card.model.lateral is None:
        yield from _floors(card)
    for d in DIRECTIONS:
        if not by_file and d in card.model.files:
            found = f'got "{card.model.files[d]}"'
            yield InputError(FILE, f"model.{d}", found, f'must be left out with kind "{card.model.kind}"')
        if by_file and d in analysed and d not in card.model.files:
            allowed = f"must be {ModelChoice.model_fields[d].description}"
            yield InputError(FILE, f"model.{d}", "missing", allowed)
        yield from _springs(card.base, d, analysed)
    members = card.model.members is not None
    if members and card.model.lateral is not Chain:
        found = f'got "{card.model.members}"'
        yield InputError(FILE, "model.members", found, f'must be left out unless model.kind is "{Chain.kind}"')
    for name, basis in card.stiffness.items():
        if basis.own and members:
            allowed = "must be left out with model.members, which gives the stiffnesses of every set"
            yield InputError(FILE, dotted(["stiffness", name, "own"]), "got true", allowed)
        yield from _set_basis(name, basis, analysed, by_file)
    for i, other in enumerate(card.second_model):
        wanted = ("",) if other.quantity == "weight" else analysed
        if other.direction not in wanted:
            allowed = f"must be {' or '.join(shown(d) for d in wanted)} for a {other.quantity}"
            yield InputError(FILE, f"second_model.{i}.direction", f"got {shown(other.direction)}", allowed)
    names = " or ".join(f'"{name}"' for name in card.stiffness)
    for purpose in ("forces", "drifts"):
        if (name := getattr(card.serves, purpose)) not in card.stiffness:
            allowed = f"must name a set under [stiffness]: {names}"
            yield InputError(FILE, f"serves.{purpose}", f'got "{name}"', allowed)
    prepared, checked = card.people.prepared.name, card.people.checked.name
    same = checked.strip().casefold() == prepared.strip().casefold()
    if same and not card.people.same_person_may_check:
        found = f'got "{checked}", who prepared it'
        allowed = "must be another person, or people.same_person_may_check = true"
        yield InputError(FILE, "people.checked.name", found, allowed)


def _floors(card: Card) -> Iterator[InputError]:
    """What floors that move in both directions at once ask for, and cannot have."""
    kind = shown(card.model.kind)
    for d in DIRECTIONS:
        if d not in card.directions.analysed:
            yield InputError(FILE, f"directions.{d}", "missing", f"must have a sentence with model.kind {kind}")
        if any(value is not None for value in card.base.of(d)):
            yield InputError(FILE, "base", f"springs in {d}", f"must be left out with model.kind {kind}")
    for name, basis in card.stiffness.items():
        if basis.factor_x is not None or basis.factor_y is not None:
            allowed = f"must have one factor for all lines with model.kind {kind}"
            yield InputError(FILE, dotted(["stiffness", name]), "has factor_x or factor_y", allowed)


def _springs(base: Base, direction: str, analysed: tuple[str, ...]) -> Iterator[InputError]:
    names = ("translation", "rocking", "damping")
    given = {name: value for name, value in zip(names, base.of(direction), strict=True) if value is not None}
    for name, value in given.items():
        if direction not in analysed:
            allowed = f"must be left out: {direction} is not analysed"
            yield InputError(FILE, f"base.{name}_{direction}", f"got {shown(value)}", allowed)
    if list(given) == ["damping"]:
        allowed = f"must go with base.translation_{direction} or base.rocking_{direction}"
        yield InputError(FILE, f"base.damping_{direction}", f"got {shown(given['damping'])}", allowed)


def _set_basis(name: str, basis: SetBasis, analysed: tuple[str, ...], by_file: bool) -> Iterator[InputError]:
    where = dotted(["stiffness", name])
    if not name.strip() or set(name) & set("[]"):
        yield InputError(FILE, where, f'got the name "{name}"', "must be a name without square brackets")
    along = [f for f in (basis.factor_x, basis.factor_y) if f is not None]
    given = {"factor": basis.factor is not None, "factor_x or factor_y": bool(along), "own": basis.own}
    if sum(given.values()) != 1:
        found = " and ".join(word for word, is_given in given.items() if is_given) or "no factor"
        allowed = "must have one of: factor, factor_x and factor_y, own = true"
        yield InputError(FILE, where, f"has {found}", allowed)
    elif along:
        for d in analysed:
            if basis.factor_of(d) is None:
                yield InputError(FILE, f"{where}.factor_{d}", "missing", "must be a number above 0")
    if basis.own and by_file:
        kinds = " or ".join(shown(kind) for kind, lateral in KINDS.items() if not lateral.table)
        allowed = f"must be left out unless model.kind is {kinds}"
        yield InputError(FILE, f"{where}.own", "got true", allowed)
