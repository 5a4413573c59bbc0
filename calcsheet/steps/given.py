"""What a calculation was given, leaf by leaf: storey by storey, by key of the job card, by option of a step."""

from __future__ import annotations

import dataclasses
from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
from typing import Any

from calcsheet.core.codes.registry import EDITIONS
from calcsheet.core.floors import PLACES
from calcsheet.core.lateral import KINDS
from calcsheet.job.sectionfile import HEADINGS
from calcsheet.job.wording import dotted
from calcsheet.steps.headlines import Payloads
from calcsheet.steps.step import Payload
from calcsheet.steps.stiffnesslines import along_words

PLAIN = "ratio"
"""Quantity of a number that stands as it was typed."""
OF_LEVELS = {
    "storey_height": ("storey height", "length"),
    "mass": ("mass", "mass"),
    "gravity": ("gravity load", "force"),
    "area": ("floor area", "area"),
}
OF_FLOORS = {
    "area": ("floor area", "area"),
    "plan_x": ("plan x", "length"),
    "plan_y": ("plan y", "length"),
    "centre_x": ("centre of the floor x", "length"),
    "centre_y": ("centre of the floor y", "length"),
    "own_radius": ("radius of gyration given", "length"),
}
OF_OTHER = {"weight": "weight", "x": "length", "y": "length", "plan_x": "length", "plan_y": "length"}
"""Quantities of floors and of masses with places of their own."""
OF_PARTS: Mapping[str, Mapping[str, str]] = {
    "material": {"modulus": "modulus", "shear_modulus": "modulus"},
    "section": {
        **dict.fromkeys(("depth", "width", "thickness"), "section size"),
        **dict.fromkeys(("area", "shear_area"), "section area"),
        **dict.fromkeys(("major", "minor"), "second moment"),
    },
    "member": dict.fromkeys(("height", "run", "spans"), "length"),
}
"""What a stiffness take-off is made from, with the quantities of its numbers; the others stand as they were typed."""
SPOKEN = {field: heading for heading, field in HEADINGS.items()} | {"factor": "stiffness factor"}
"""Fields of sections and members that go by other words than their own."""
OF_PLAN = {"x": "length", "y": "length", "angle": "angle"}
"""Quantities of a line of resistance."""
EXTENT = ("plan x from", "plan x to", "plan y from", "plan y to")
"""Edges of a floor."""
OF_SECOND_MODEL = {"period": "period", "weight": "weight", "base shear": "force"}
LEFT_OUT = ("format", "people", "answers", "levels")
"""Tables of the job card that are no inputs of the calculation, or that the storeys hold."""
IDENTITY = ("revision", "date", "reason")
"""What is another in every revision."""
NAMED_BY: Mapping[str, tuple[str, ...]] = {
    "mass_basis": ("load",),
    "second_model": ("quantity", "direction"),
    "assumptions": ("text",),
}
"""Lists whose entries go by a name of their own, so that one that is put in front doesn't rename the others."""


@dataclasses.dataclass(frozen=True)
class Given:
    """One input.

    Parameters
    ----------
    key : str
        Stable name within its level, such as "mass" or "basis.q_x".
    label : str
        The same in words.
    level : str
        Name of its level; empty where it is of none.
    quantity : str
        Quantity of its number in the unit table.
    number : float or None
        Its number, in core units; None for a text.
    text : str
        Its text; empty for a number.
    at : str
        JSON pointer of it in the record's payloads.
    """

    key: str
    label: str
    level: str
    quantity: str
    number: float | None
    text: str
    at: str


def inputs_of(payloads: Payloads) -> tuple[Given, ...]:
    """Inputs of all steps that are "ok", empty ones left out: they say the same as ones that are not there."""
    with_basis = any(p["kind"] == "basis" for p in payloads.values())
    return tuple(
        given
        for key, payload in payloads.items()
        if payload["state"] == "ok"
        for given in INPUTS.get(payload["kind"], _options)(key, payload, with_basis)
    )


# ---- storeys ---------------------------------------------------------------------------------------------------------


def _storeys(key: str, payload: Payload, with_basis: bool) -> Iterator[Given]:
    inputs, at = payload["inputs"], f"/{key}/inputs"
    yield _leaf("levels.effective_base", "effective base", inputs["base"], f"{at}/base")
    yield _leaf(
        "levels.base_elevation", "elevation of the base", inputs["base_elevation"], f"{at}/base_elevation", "elevation"
    )
    for name, (label, quantity) in OF_LEVELS.items():
        if name == "mass" and inputs["given"] == "weight":
            weights = payload["result"]["weight_of_level"]
            yield from _by_level(inputs, "weight", "weight", "weight", weights, f"/{key}/result/weight_of_level")
        elif inputs.get(name) is not None:
            yield from _by_level(inputs, name, label, quantity, inputs[name], f"{at}/{name}")
    for i, named in enumerate(inputs["stiffness"]):
        for direction, lateral in named["lateral"].items():
            place = f"{at}/stiffness/{i}/lateral/{direction}"
            yield from _lateral(inputs, f"{direction}, {named['name']}", lateral, place)
    if inputs.get("plan"):
        yield from _plan(inputs, inputs["plan"], f"{at}/plan")
    for i, below in enumerate(inputs["below"]):
        for name, quantity in (("elevation", "elevation"), ("mass", "mass")):
            label = f"{name}, at or below the base"
            yield _leaf(f"below.{name}", label, below[name], f"{at}/below/{i}/{name}", quantity, str(below["level"]))


def _lateral(inputs: Mapping[str, Any], of: str, lateral: Mapping[str, Any], at: str) -> Iterator[Given]:
    """Columns or matrix of a direction or a line, whose storeys may end below the top."""
    model = KINDS[lateral["kind"]]
    for column in model.columns:
        if lateral[column.field] is not None:
            label = f"{column.heading} {of}"
            yield from _by_level(inputs, label, label, column.heading, lateral[column.field], f"{at}/{column.field}")
    if model.table:
        for j, level in enumerate(inputs["level"][: len(lateral["matrix"])]):
            entries, label = [row[j] for row in lateral["matrix"]], f"{model.kind} {of}, column {level}"
            yield from _by_level(inputs, label, label, model.table, entries, f"{at}/matrix/{{}}/{j}")


def _plan(inputs: Mapping[str, Any], plan: Mapping[str, Any], at: str) -> Iterator[Given]:
    """Floors in plan by level, lines of resistance by name."""
    columns = [
        (f"centre of mass {d}", [row[i] for row in plan["centre"]], f"centre/{{}}/{i}") for i, d in enumerate("xy")
    ]
    columns.append(("radius of gyration", plan["gyration"], "gyration"))
    if plan["extent"] is not None:
        columns += [(name, [row[i] for row in plan["extent"]], f"extent/{{}}/{i}") for i, name in enumerate(EXTENT)]
    for label, numbers, place in columns:
        yield from _by_level(inputs, label, label, "length", numbers, f"{at}/{place}")
    for i, line in enumerate(plan["lines"]):
        for field, quantity in OF_PLAN.items():
            label = f"line “{line['name']}”, {'direction' if field == 'angle' else field}"
            yield _leaf(label, label, line[field], f"{at}/lines/{i}/{field}", quantity)


def _by_level(
    inputs: Mapping[str, Any], key: str, label: str, quantity: str, numbers: Sequence[float | None], at: str
) -> Iterator[Given]:
    place = at if "{}" in at else f"{at}/{{}}"
    for i, (level, number) in enumerate(zip(inputs["level"], numbers, strict=False)):
        yield _leaf(key, label, number, place.format(i), quantity, str(level))


# ---- mass take-off ---------------------------------------------------------------------------------------------------


def _masses(key: str, payload: Payload, with_basis: bool) -> Iterator[Given]:
    """Floors by level, loads and other masses by name; storey heights and masses stated are the storey table's."""
    inputs, at = payload["inputs"], f"/{key}/inputs"
    for name, (label, quantity) in OF_FLOORS.items():
        yield from _saying(_by_level(inputs, f"{key}.{name}", label, quantity, inputs[name], f"{at}/{name}"))
    for j, load in enumerate(inputs["load"]):
        place, of = PLACES.get(load["place"], PLACES["floor"]), f"load “{load['name']}”"
        for field, quantity in (
            ("kind", ""),
            ("place", ""),
            ("value", place.value),
            ("share", "share"),
            ("clause", ""),
        ):
            if load[field] not in (None, ""):
                label = f"{of}, {field}"
                yield _leaf(f"{key}.{of}.{field}", label, load[field], f"{at}/load/{j}/{field}", quantity or PLAIN)
        amounts = [row[j] for row in inputs["amount"]]
        label = f"{of}, {place.amount}"
        yield from _saying(_by_level(inputs, label, label, place.amount, amounts, f"{at}/amount/{{}}/{j}"))
    seen: dict[tuple[str, str], int] = {}
    for i, other in enumerate(inputs["other"]):
        named = other["level"], other["name"]
        seen[named] = seen.get(named, 0) + 1
        label = f"“{other['name']}”" + (f" ({seen[named]})" if seen[named] > 1 else "")
        for field, quantity in OF_OTHER.items():
            words = f"{label}, {_spoken(field)}"
            yield _leaf(f"other {words}", words, other[field], f"{at}/other/{i}/{field}", quantity, other["level"])


def _saying(given: Iterable[Given]) -> Iterator[Given]:
    """Those of an amount above or below zero: zero and none say the same."""
    return (g for g in given if g.number)


# ---- stiffness take-off ----------------------------------------------------------------------------------------------


def _stiffnesses(key: str, payload: Payload, with_basis: bool) -> Iterator[Given]:
    """Materials, sections and members by name; storey heights, factors of sets and origins are given elsewhere."""
    inputs = payload["inputs"]
    for part, quantities in OF_PARTS.items():
        for i, item in enumerate(inputs[f"{part}s"]):
            of, at = f"{part} “{item['name']}”", f"/{key}/inputs/{part}s/{i}"
            for field, value in item.items():
                if field not in ("name", "first", "last", "along"):
                    words = f"{of}, {SPOKEN.get(field, _spoken(field))}"
                    quantity = quantities.get(field, PLAIN)
                    yield from _leaves((key, of, field), value, f"{at}/{field}", quantity, words)
            if part == "member":
                ends = [level for j, level in enumerate(inputs["level"]) if j in (item["first"], item["last"])]
                yield _leaf(dotted((key, of, "storeys")), f"{of}, storeys", " to ".join(ends), f"{at}/first")
                yield _leaf(dotted((key, of, "along")), f"{of}, direction", along_words(item["along"]), f"{at}/along")


# ---- job card, basis, options ----------------------------------------------------------------------------------------


def _card(key: str, payload: Payload, with_basis: bool) -> Iterator[Given]:
    left_out = (*LEFT_OUT, *(("basis", "mass_basis", "second_model") if with_basis else ()))
    for table, value in payload["inputs"].items():
        at = f"/{key}/inputs/{table}"
        if table in left_out:
            continue
        if table in NAMED_BY:
            yield from _named(table, value, at, lambda item: PLAIN)
        else:
            kept = {k: v for k, v in value.items() if k not in IDENTITY} if table == "job" else value
            yield from _leaves((table,), kept, at)


def _basis(key: str, payload: Payload, with_basis: bool) -> Iterator[Given]:
    for name, value in payload["inputs"].items():
        at = f"/{key}/inputs/{name}"
        if name == "edition":
            yield from _edition(value, at)
        elif name in NAMED_BY:
            yield from _named(name, value, at, lambda item: OF_SECOND_MODEL.get(item.get("quantity", ""), PLAIN))
        else:
            yield from _leaves(("basis", name), value, at)


def _edition(given: Mapping[str, Any], at: str) -> Iterator[Given]:
    """A code edition with its parameters, each under the words that the edition has for it.

    A parameter that the record has not, since it is of an earlier version, stands at its default.
    """
    yield _leaf("basis.edition", "basis.edition", given["kind"], f"{at}/kind")
    edition = EDITIONS.get(given["kind"])
    fields = {} if edition is None else {f.name: f for f in dataclasses.fields(edition)}  # type: ignore[arg-type]
    usual = {n: f.default for n, f in fields.items() if f.default is not dataclasses.MISSING}
    for name, value in (usual | dict(given)).items():
        rule = fields[name].metadata.get("key", {}) if name in fields else {}
        label = f"basis.{name}: {rule['help']}" if rule.get("help") else ""
        if name != "kind":
            yield from _leaves(("basis", name), value, f"{at}/{name}", rule.get("quantity", PLAIN), label)


def _options(key: str, payload: Payload, with_basis: bool) -> Iterator[Given]:
    yield from _leaves((key,), payload["inputs"], f"/{key}/inputs")


INPUTS: Mapping[str, Callable[[str, Payload, bool], Iterator[Given]]] = {
    "card": _card,
    "masses": _masses,
    "stiffness take-off": _stiffnesses,
    "storeys": _storeys,
    "basis": _basis,
}
"""How the inputs of a kind of step are read; those of any other are options."""


# ---- leaves ----------------------------------------------------------------------------------------------------------


def _named(
    table: str, items: Iterable[Mapping[str, Any]], at: str, quantity: Callable[[Mapping[str, Any]], str]
) -> Iterator[Given]:
    """Entries of a list that go by a name, which is a leaf of its own."""
    seen: dict[str, int] = {}
    for i, item in enumerate(items):
        first, *others = NAMED_BY[table]
        name = " ".join(str(item[k]) for k in (first, *others) if item[k])
        seen[name] = seen.get(name, 0) + 1
        name += f" ({seen[name]})" if seen[name] > 1 else ""
        label = f"{_spoken(table)} “{name}”"
        yield _leaf(dotted((table, name)), label, "stated", f"{at}/{i}/{first}")
        for field, value in item.items():
            if field not in NAMED_BY[table]:
                of = quantity(item) if field == "value" else PLAIN
                yield from _leaves((table, name, field), value, f"{at}/{i}/{field}", of, f"{label}, {_spoken(field)}")


def _leaves(
    keys: tuple[str | int, ...], value: Any, at: str, quantity: str = PLAIN, label: str = ""
) -> Iterator[Given]:
    """Leaves of plain JSON under dotted keys."""
    if value is None or value is False or value in ("", [], {}, ()):
        return
    if isinstance(value, Mapping):
        for key, item in value.items():
            yield from _leaves((*keys, key), item, f"{at}/{_escaped(key)}", quantity, label)
    elif isinstance(value, list | tuple):
        for i, item in enumerate(value):
            yield from _leaves((*keys, i), item, f"{at}/{i}", quantity, label)
    else:
        yield _leaf(dotted(keys), label or dotted(keys), value, at, quantity)


def _leaf(key: str, label: str, value: Any, at: str, quantity: str = PLAIN, level: str = "") -> Given:
    if isinstance(value, bool):
        return Given(key, label, level, quantity, None, str(value).lower(), at)
    if isinstance(value, int | float):
        return Given(key, label, level, quantity, float(value), "", at)
    return Given(key, label, level, quantity, None, str(value), at)


def _escaped(key: str) -> str:
    """A key as a part of a JSON pointer (RFC 6901)."""
    return key.replace("~", "~0").replace("/", "~1")


def _spoken(name: str) -> str:
    return name.replace("_", " ")
