"""Materials and sections of members, materials.csv and sections.csv."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import astuple

from calcsheet.core.sections import OWN, SHAPES, Material, Section, properties_of
from calcsheet.job.cells import NOT_NEGATIVE
from calcsheet.job.errors import InputError
from calcsheet.job.listfile import ListColumn, ListRow, read_list
from calcsheet.job.table import TextTable

MATERIALS, SECTIONS = "materials.csv", "sections.csv"
POISSON = "Poisson ratio"
MATERIAL_COLUMNS = (
    ListColumn("material", needed=True),
    ListColumn("kind", needed=True, choices=("concrete", "masonry", "steel", "timber", "other")),
    ListColumn("modulus", "modulus", needed=True),
    ListColumn("shear modulus", "modulus"),
    ListColumn(POISSON, "", allowed=NOT_NEGATIVE),
)
HEADINGS = {
    "depth": "depth",
    "width": "width",
    "thickness": "thickness",
    "area": "area",
    "second moment major": "major",
    "second moment minor": "minor",
    "shear area": "shear_area",
}
"""Headings of the sizes of a section, and the fields of `Section` that they fill."""
SECTION_COLUMNS = (
    ListColumn("section", needed=True),
    ListColumn("material", needed=True),
    ListColumn("shape", needed=True, choices=tuple(SHAPES)),
    ListColumn("depth", "length"),
    ListColumn("width", "length"),
    ListColumn("thickness", "length"),
    ListColumn("area", "section area"),
    ListColumn("second moment major", "second moment"),
    ListColumn("second moment minor", "second moment"),
    ListColumn("shear area", "section area"),
)


def read_materials(table: TextTable) -> tuple[tuple[Material, ...], list[InputError]]:
    """Read materials, with every problem.

    Parameters
    ----------
    table : TextTable
        The table of materials.csv.
    """
    rows, problems = read_list(table, MATERIAL_COLUMNS)
    materials = []
    for row in rows:
        modulus, given = row.numbers["modulus"], row.numbers.get("shear modulus", 0.0)
        if POISSON in row.numbers:
            ratio = row.numbers[POISSON]
            if given:
                problems.append(row.refused(f"shear modulus and {POISSON}", "must have at most one of them"))
            if ratio > 0.5:
                problems.append(row.refused(f"{POISSON} {ratio:g}", "must be from 0 to 0.5"))
            given = modulus / (2.0 * (1.0 + ratio))
        materials.append(Material(row.texts["material"], row.texts["kind"], modulus, given))
    return tuple(materials), problems


def read_sections(table: TextTable, materials: Mapping[str, Material]) -> tuple[tuple[Section, ...], list[InputError]]:
    """Read sections, with every problem.

    Parameters
    ----------
    table : TextTable
        The table of sections.csv.
    materials : mapping of str to Material
        The materials by name.
    """
    rows, problems = read_list(table, SECTION_COLUMNS)
    sections = []
    for row in rows:
        name = row.texts["material"]
        if name not in materials:
            problems.append(row.refused(f'material "{name}"', f"must be in {MATERIALS}: {_quoted(materials)}"))
        problems += _wrong_sizes(row)
        sizes = {field: row.numbers[heading] for heading, field in HEADINGS.items() if heading in row.numbers}
        section = Section(row.texts["section"], name, row.texts["shape"], **sizes)
        sections.append(section)
        if not all(map(math.isfinite, astuple(properties_of(section)))):
            problems.append(row.refused("sizes beyond what can be calculated", "must be those of a section"))
    return tuple(sections), problems


def _wrong_sizes(row: ListRow) -> list[InputError]:
    """Sizes that the shape lacks or hasn't, and walls too thick for it."""
    shape, numbers = row.texts["shape"], row.numbers
    wanted = SHAPES[shape]
    may = OWN if shape == "own" else wanted
    problems = [
        row.refused(f"{heading} is blank", f"must be given for shape {shape}")
        for heading, field in HEADINGS.items()
        if field in wanted and heading not in numbers
    ]
    problems += [
        row.refused(f"{heading} is given", f"must be blank for shape {shape}")
        for heading, field in HEADINGS.items()
        if field not in may and heading in numbers
    ]
    if shape == "own" and not numbers:
        problems.append(row.refused("no property", "must give area, second moment or both for shape own"))
    if numbers.get("second moment minor", 0.0) > numbers.get("second moment major", float("inf")):
        problems.append(row.refused("second moment minor above the major", "must be the smaller of the two"))
    if not problems and "thickness" in wanted:
        least = min(numbers["depth"], numbers.get("width", numbers["depth"]))
        if 2.0 * numbers["thickness"] >= least:
            problems.append(row.refused("thickness of half the section or more", "must leave a hollow"))
    return problems


def _quoted(names: Mapping[str, object]) -> str:
    return ", ".join(f'"{name}"' for name in names) or "it has none"
