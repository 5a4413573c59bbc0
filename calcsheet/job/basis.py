"""The basis of the demand, table [basis] of the job card, read by what each code edition says of its parameters."""

from __future__ import annotations

import math
import re
from collections.abc import Mapping, Sequence
from dataclasses import MISSING, Field, fields
from typing import Any, get_type_hints

import numpy as np

from calcsheet.core.basis import RESIDUALS, Basis, MassShare, SecondModel
from calcsheet.core.codes.edition import Edition
from calcsheet.core.codes.registry import EDITIONS
from calcsheet.core.errors import ModelError
from calcsheet.job.card import FILE, Card, number_of
from calcsheet.job.cardtables import FILE_NAME
from calcsheet.job.errors import InputError
from calcsheet.job.spectrumfile import read_points
from calcsheet.job.table import TextTable
from calcsheet.job.wording import dotted, shown
from calcsheet.units import display

SETTINGS = ("edition", "combination", "residual", "second_order_in_stiffness")
"""Keys of the table that belong to no edition."""
OF_SYSTEM = {"height_unit": "length"}
"""Parameters that name a unit: by default the job's own for this quantity."""
SECOND_MODEL = {"period": "period", "weight": "weight", "base shear": "force"}
"""What a second model may give, and its quantity in the unit table."""


def spectrum_files(card: Card) -> Mapping[str, str]:
    """Return the files that the basis names, by key; none where it names no edition that takes one."""
    given = card.basis or {}
    edition = EDITIONS.get(str(given.get("edition")))
    files = [f.name for f in fields(edition) if _rule(f).get("file")] if edition else []  # type: ignore[arg-type]
    return {name: given[name] for name in files if _is_file_name(given.get(name))}


def read_basis(card: Card, tables: Mapping[str, TextTable]) -> Basis:
    """Read the basis of a card.

    Parameters
    ----------
    card : Card
        The job card.
    tables : mapping of str to TextTable
        The tables of `spectrum_files`, by key.

    Raises
    ------
    InputError
        There is no basis, or the first thing wrong with it, by key, or by row of a spectrum's file.
    """
    if card.basis is None:
        raise InputError(FILE, "basis", "missing", "must be a table [basis] where a design demand is asked for")
    given = card.basis
    name = _choice("edition", given, tuple(EDITIONS))
    edition = _edition(EDITIONS[name], given, card, tables)
    combination = _choice("combination", given, edition.combination()[0], f' with edition "{name}"')
    residual = _choice("residual", given, RESIDUALS)
    if not isinstance(given.get("second_order_in_stiffness", False), bool):
        raise _refused("second_order_in_stiffness", given, "must be true or false")
    system = card.units.system
    return Basis(
        edition=edition,  # type: ignore[arg-type]
        combination=combination,
        residual=residual,
        mass_basis=tuple(MassShare(m.load, m.share, m.clause) for m in card.mass_basis),
        second_model=tuple(
            SecondModel(m.quantity, m.direction, m.value * display(SECOND_MODEL[m.quantity], system).factor, m.origin)
            for m in card.second_model
        ),
    )


def _edition(kind: type[Edition], given: Mapping[str, Any], card: Card, tables: Mapping[str, TextTable]) -> Edition:
    known = {f.name: f for f in fields(kind)}  # type: ignore[arg-type]
    hints, system = get_type_hints(kind), card.units.system
    left = [key for key in given if key not in known and key not in SETTINGS]
    missing = [
        f"{f.name} ({_rule(f)['help']})"
        for f in known.values()
        if f.name not in given and f.name not in OF_SYSTEM and f.default is MISSING
    ]
    foreign = [key for key in left if not _owners(key)]
    if foreign or (left and len(left) + len(missing) == 1):
        raise _left_behind(kind, (foreign or left)[0], given, list(known))
    if len(left) + len(missing) > 1:
        raise _changed(kind, left, missing)
    values: dict[str, Any] = {}
    for key, field in known.items():
        if key in given:
            values[key] = _value(field, hints[key], given, system, tables)
        elif key in OF_SYSTEM:
            values[key] = display(OF_SYSTEM[key], system).symbol
        elif field.default is MISSING:
            raise _refused(key, given, _allowed(field, hints[key], system))
    try:
        edition = kind(**values)
    except ModelError as error:
        raise InputError(FILE, dotted(["basis", error.where]), error.found, error.allowed) from None
    for key, table in tables.items():
        try:
            for direction in card.directions.analysed:
                edition.ordinates(direction, np.array([values[key][0][0]]))
        except ModelError as error:
            raise InputError(table.file, "", error.found, error.allowed) from None
    return edition


def _changed(kind: type[Edition], left: Sequence[str], missing: Sequence[str]) -> InputError:
    """All that a change of the edition leaves to be done."""
    found, to_do = f'with edition "{kind.name}"', f"missing: {', '.join(missing)}"
    if left:
        keys = "1 key belongs" if len(left) == 1 else f"{len(left)} keys belong"
        found += f", {keys} to other editions ({', '.join(left)})"
        if not missing:
            return InputError(FILE, "basis", found, "take them out")
        found += f": take {'it' if len(left) == 1 else 'them'} out"
    return InputError(FILE, "basis", found, to_do)


def _owners(key: str) -> list[str]:
    """Editions that have a parameter."""
    return [e.name for e in EDITIONS.values() if key in {f.name for f in fields(e)}]  # type: ignore[arg-type]


def _left_behind(kind: type[Edition], key: str, given: Mapping[str, Any], known: Sequence[str]) -> InputError:
    """What is wrong with a key that the edition doesn't have."""
    place = dotted(["basis", key])
    if key == "damping":
        why = f"the design spectrum of {kind.name} stands for its own damping and takes no other"
        if "damping_ratio" in known:
            why = f'with edition "{kind.name}" its name is damping_ratio'
        return InputError(FILE, place, f"got {shown(given[key])}", f"must be left out: {why}")
    owners = _owners(key)
    if owners:
        found = f"a parameter of {_listed(owners, 'and')}"
        return InputError(FILE, place, found, f'must be left out with edition "{kind.name}"')
    return InputError(FILE, place, "unknown key", f"must be one of {', '.join((*SETTINGS, *known))}")


def _value(field: Field[Any], hint: Any, given: Mapping[str, Any], system: str, tables: Mapping[str, TextTable]) -> Any:
    """A parameter's value in core units, or its refusal."""
    key, rule, value = field.name, _rule(field), given[field.name]
    allowed = _allowed(field, hint, system)
    if "choices" in rule:
        return _choice(key, given, rule["choices"])
    if hint is bool:
        if isinstance(value, bool):
            return value
    elif rule.get("file"):
        if _is_file_name(value):
            return read_points(tables[key])
    elif "length" in rule:
        if isinstance(value, Sequence) and not isinstance(value, str):
            if len(value) != rule["length"]:
                raise InputError(FILE, f"basis.{key}", f"got a list of {len(value)}", allowed)
            for i, entry in enumerate(value):
                if not _within(rule, entry):
                    raise InputError(FILE, f"basis.{key}.{i}", f"got {shown(entry)}", f"must be {_number(rule, '')}")
            return tuple(number_of(entry) for entry in value)
    elif _within(rule, value):
        factor = display(rule["quantity"], system).factor if "quantity" in rule else 1.0
        return number_of(value) * factor
    raise _refused(key, given, allowed)


def _allowed(field: Field[Any], hint: Any, system: str) -> str:
    """What a parameter must be, in words."""
    rule = _rule(field)
    if "choices" in rule:
        return f"must be {_listed([shown(c) for c in rule['choices']])}"
    meaning = f" ({rule['help']})" if rule.get("help") else ""
    if hint is bool:
        return f"must be true or false{meaning}"
    if rule.get("file"):
        return f'must be the name of a file in the job folder, such as "spectrum.csv"{meaning}'
    if "length" in rule:
        return f"must be a list of {rule['length']} numbers {_bounds(rule)}{meaning}"
    unit = f", in {display(rule['quantity'], system).symbol}" if "quantity" in rule else ""
    return f"must be {_number(rule, unit)}{meaning}"


def _number(rule: Mapping[str, Any], unit: str) -> str:
    return f"a number {_bounds(rule)}".rstrip() + unit


def _bounds(rule: Mapping[str, Any]) -> str:
    if "least" in rule:
        return f"from {rule['least']:g} to {rule['up_to']:g}" if "up_to" in rule else f"{rule['least']:g} or above"
    words = {"above": "above", "below": "below", "up_to": "up to"}
    return " and ".join(f"{word} {rule[bound]:g}" for bound, word in words.items() if bound in rule)


def _within(rule: Mapping[str, Any], value: object) -> bool:
    if isinstance(value, bool) or not isinstance(value, int | float):
        return False
    number, least, most = number_of(value), rule.get("least", -math.inf), rule.get("up_to", math.inf)
    inside = rule.get("above", -math.inf) < number < rule.get("below", math.inf)
    return math.isfinite(number) and inside and least <= number <= most


def _choice(key: str, given: Mapping[str, Any], choices: Sequence[Any], more: str = "") -> Any:
    """The choice that was made; the first where a setting has none."""
    if key not in given and key in SETTINGS and key != "edition":
        return choices[0]
    value = given.get(key)
    for choice in choices:
        if value == choice and not isinstance(value, bool):
            return choice
    raise _refused(key, given, f"must be {_listed([shown(c) for c in choices])}{more}")


def _refused(key: str, given: Mapping[str, Any], allowed: str) -> InputError:
    found = f"got {shown(given[key])}" if key in given else "missing"
    return InputError(FILE, dotted(["basis", key]), found, allowed)


def _is_file_name(value: object) -> bool:
    return isinstance(value, str) and re.fullmatch(FILE_NAME, value) is not None


def _rule(field: Field[Any]) -> Mapping[str, Any]:
    return field.metadata["key"]


def _listed(words: Sequence[str], last: str = "or") -> str:
    return f" {last} ".join(part for part in (", ".join(words[:-1]), words[-1]) if part)
