"""The tables of the job card.

The description of each field is what its error says is allowed.
"""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping
from typing import Annotated, Literal

from pydantic import BaseModel, ConfigDict, Field

from calcsheet.core.lateral import KINDS, Lateral

DIRECTIONS = ("x", "y")
FILE_NAME = r"^[^\s./\\:][^/\\:]*$"
"""What the name of a file in the job folder looks like."""
_NOT_BLANK = r"\S"


class Table(BaseModel):
    model_config = ConfigDict(frozen=True, extra="forbid", strict=True, allow_inf_nan=False)


Text = Annotated[str, Field(description="a text")]
Filled = Annotated[str, Field(pattern=_NOT_BLANK, description="a text that is not blank")]
Date = Annotated[dt.date, Field(description="a date without quotation marks, such as 2026-01-31")]
MaybeDate = Annotated[dt.date | None, Field(description="a date without quotation marks, such as 2026-01-31")]
Factor = Annotated[Annotated[float, Field(gt=0)] | None, Field(description="a number above 0")]
Damping = Annotated[Annotated[float, Field(gt=0, lt=1)] | None, Field(description="a number above 0 and below 1")]
Sentence = Annotated[
    Annotated[str, Field(pattern=_NOT_BLANK)] | None,
    Field(description="a sentence that ties this direction to the drawings' grid"),
]
Finding = Annotated[
    str, Field(pattern="^([0-9a-f]{8})?$", description="the 8 characters that stand beside the finding in the record")
]
FileName = Annotated[
    Annotated[str, Field(pattern=FILE_NAME)] | None,
    Field(description='the name of a file in the job folder, such as "stiffness_x.csv"'),
]


class Identity(Table):
    """What the calculation is: table [job]."""

    project: Filled
    title: Filled
    number: Filled
    revision: Annotated[
        str,
        Field(
            pattern=r"^\w([\w. -]*\w)?$",
            description="a text of letters, digits, points, hyphens, underscores, spaces: it names a folder",
        ),
    ]
    date: Date
    reason: Text = ""
    purpose: Text = ""


class Person(Table):
    """Somebody who signs: table [people.…]. A blank name is a line left open."""

    name: Text = ""
    initials: Text = ""
    qualification: Text = ""
    registration: Text = ""
    date: MaybeDate = None


class Author(Person):
    """Who prepared the calculation: table [people.prepared]."""

    name: Filled


class People(Table):
    """Who prepared, checks and approves: table [people]; whoever prepared may check only where the job allows it."""

    prepared: Author = Field(description="a table [people.prepared] with a name")
    checked: Person = Field(Person(), description="a table [people.checked]")
    approved: Person = Field(Person(), description="a table [people.approved]")
    same_person_may_check: bool = Field(False, description="true or false")


class System(Table):
    """Table [units]."""

    system: Literal["SI", "US"] = Field(description='"SI" or "US"')


class Levels(Table):
    """Table [levels]: elevation of the lowest storey's foot [m or ft]; the effective base ("": that foot)."""

    base_elevation: float = Field(description="a number, in m (SI) or ft (US)")
    effective_base: Text = ""


class Directions(Table):
    """Table [directions]: a sentence for each direction that is analysed, tying it to the drawings' grid."""

    x: Sentence = None
    y: Sentence = None

    @property
    def analysed(self) -> tuple[str, ...]:
        """The directions that have a sentence."""
        return tuple(d for d in DIRECTIONS if getattr(self, d) is not None)


class ModelChoice(Table):
    """Table [model]: how the lateral stiffness is given, the file of each matrix, and that of the members taken off."""

    kind: Literal["storey chain", "cantilever stick", "stiffness matrix", "flexibility matrix", "rigid floors"] = Field(
        description='"storey chain", "cantilever stick", "stiffness matrix", "flexibility matrix" or "rigid floors"'
    )
    x: FileName = None
    y: FileName = None
    members: Annotated[
        Annotated[str, Field(pattern=FILE_NAME)] | None,
        Field(description='the name of a file in the job folder, such as "members.csv"'),
    ] = None

    @property
    def files(self) -> Mapping[str, str]:
        """The file of each direction's matrix."""
        return {d: name for d in DIRECTIONS if (name := getattr(self, d)) is not None}

    @property
    def lateral(self) -> type[Lateral] | None:
        """The lateral model that the kind stands for in each direction; None where floors move in both at once."""
        return KINDS.get(self.kind)

    @property
    def by_file(self) -> bool:
        """Whether each direction's stiffness comes from a file of its own."""
        return self.lateral is not None and bool(self.lateral.table)


class Base(Table):
    """Table [base]: springs between building and ground, in kN/m and kN·m/rad (SI) or kip/in and kip·ft/rad (US).

    A direction without any is fixed; damping is printed and used nowhere.
    """

    translation_x: Factor = None
    translation_y: Factor = None
    rocking_x: Factor = None
    rocking_y: Factor = None
    damping_x: Damping = None
    damping_y: Damping = None

    def of(self, direction: str) -> tuple[float | None, float | None, float | None]:
        """Translation, rocking and damping of a direction."""
        return tuple(getattr(self, f"{name}_{direction}") for name in ("translation", "rocking", "damping"))


class SetBasis(Table):
    """A stiffness set, table [stiffness.NAME]: factors on the stiffnesses given, or own values."""

    ground: Text = ""
    factor: Factor = None
    factor_x: Factor = None
    factor_y: Factor = None
    own: bool = Field(False, description="true or false")

    def factor_of(self, direction: str) -> float | None:
        """The factor of a direction, None where there is none."""
        along = self.factor_x if direction == "x" else self.factor_y
        return along if self.factor is None else self.factor


class Serves(Table):
    """Table [serves]: the stiffness set that serves forces, and the one that serves drifts."""

    forces: Filled
    drifts: Filled


class LoadShare(Table):
    """One of [[mass_basis]]: a load, the share of it that the masses hold, and the clause that says so."""

    load: Filled
    share: float = Field(ge=0, le=1, description="a number from 0 to 1")
    clause: Text = ""


class MassSource(Table):
    """Table [masses]: where the masses come from, other than from storeys.csv itself."""

    source: Literal["floors.csv"] = Field(description='"floors.csv"')


class OtherModel(Table):
    """One of [[second_model]]: a result of another model or a hand calculation, and where it comes from."""

    quantity: Literal["period", "weight", "base shear"] = Field(description='"period", "weight" or "base shear"')
    direction: Literal["x", "y", ""] = Field("", description='"x", "y" or ""')
    value: float = Field(gt=0, description="a number above 0, in s, or in kN (SI) or kip (US)")
    origin: Filled


class Assumption(Table):
    """One of [[assumptions]]: text, ground, and by whom or when it is to be confirmed ("": it needn't be)."""

    text: Filled
    ground: Text = ""
    confirm_by: Text = ""


class Origin(Table):
    """Where a table comes from: an entry of [origins] by file name."""

    source: Text = ""
    revision: Text = ""
    date: MaybeDate = None
    note: Text = ""


class Import(Table):
    """How a spreadsheet file is read into a table: the sheet, and the file's headings in this program's words."""

    sheet: Text = ""
    columns: Mapping[str, str] = Field({}, description="a table of headings")


class Imports(Table):
    """Spreadsheet files by name, tables [imports.storeys."masses.xlsx"] and [imports.floors."areas.xlsx"]."""

    storeys: Mapping[str, Import] = Field({}, description="a table for each file")
    floors: Mapping[str, Import] = Field({}, description="a table for each file")


class CautionAnswer(Table):
    """An answer to a caution, table [answers.KEY]: text, by whom, when, and the finding that it was given to."""

    text: Text = ""
    by: Text = ""
    date: MaybeDate = None
    finding: Finding = ""


ANSWER = (
    'a table with text, by, date and finding, such as { text = "…", by = "…", date = 2026-01-31, '
    'finding = "0a1b2c3d" }; `calcsheet answer` writes it'
)
