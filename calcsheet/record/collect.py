"""What a notebook holds for a record: the engineer's words, the blocks in their order, and the payloads."""

from __future__ import annotations

import json
from collections.abc import Collection, Iterator, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import rfc8785
from nbformat import NotebookNode

from calcsheet.blocks.twin import FORMAT, MIME
from calcsheet.job.wording import dotted
from calcsheet.record.errors import RecordError, StaleError
from calcsheet.record.fingerprints import sparse
from calcsheet.record.own import printable
from calcsheet.record.parts import Own, Part, Shown, Words
from calcsheet.render.registry import VIEWS
from calcsheet.steps.fromfiles import MASSES, STIFFNESSES
from calcsheet.steps.graph import Job
from calcsheet.steps.registry import STEPS
from calcsheet.steps.serial import fingerprint, to_json
from calcsheet.steps.step import Payload


@dataclass(frozen=True)
class Content:
    """What a notebook holds for a record.

    Parameters
    ----------
    parts : tuple of Words, Shown and Own
        In the notebook's own order.
    payloads : mapping of str to payload
        The job's steps, by key, upstream first; all "ok".
    """

    parts: tuple[Part, ...]
    payloads: Mapping[str, Payload]

    @property
    def words(self) -> tuple[str, ...]:
        """Sources of the markdown cells."""
        return tuple(part.source for part in self.parts if isinstance(part, Words))


def collect(notebook: NotebookNode) -> Content:
    """Take a record's content from an executed notebook.

    Raises
    ------
    RecordError
        No job card, a step that is refused or waiting, a cell that was changed and not run again, two cells that ask
        for one step with different options, or outputs that do not belong together.
    """
    payloads = _payloads(notebook)
    _refuse_two_of_a_name(notebook)
    for key, payload in payloads.items():
        if payload["state"] != "ok":
            raise RecordError(f'{STEPS[payload["kind"]].title}, step "{key}", is {payload["state"]}: {payload["why"]}')
    parts: list[Part] = []
    for number, cell in enumerate(notebook.cells, 1):
        if cell.cell_type == "markdown" and cell.source.strip():
            parts.append(Words(cell.source, cell.get("attachments", {})))
        elif cell.cell_type == "code" and cell.source.strip():
            parts += _of_code(number, cell, payloads)
    return Content(tuple(parts), payloads)


def refuse_stale(content: Content, folder: Path, but: Collection[str] = ()) -> None:
    """Refuse content whose inputs are not those of the job folder, empty entries aside.

    Parameters
    ----------
    content : Content
        What the notebook holds.
    folder : Path
        The job folder.
    but : collection of str
        Tables of the job card that may differ.

    Raises
    ------
    StaleError
        Naming the file that has changed since the notebook was run, or that the notebook took from elsewhere, and the
        first key that differs.
    RecordError
        A file of the folder that can't be read.
    """
    job = Job(folder.resolve())
    refuse_unfinished("card", job.payload("card"))
    for key in (MASSES, STIFFNESSES):
        if key in content.payloads:
            job.attach(key, None)
    now = job.payloads()
    if "basis" in content.payloads:
        basis = None if job.files is None else job.files.basis
        _refuse_other("the basis", to_json(basis), content.payloads["basis"]["inputs"])
    files = {
        "card": "job.toml",
        MASSES: "storeys.csv or a table of the mass take-off",
        STIFFNESSES: "storeys.csv or a table of the stiffness take-off",
        "storeys": "storeys.csv or job.toml",
    }
    for key in (key for key in files if key in content.payloads):
        refuse_unfinished(key, now[key])
        here, shown = (
            {k: v for k, v in p["inputs"].items() if k not in but} for p in (now[key], content.payloads[key])
        )
        _refuse_other(files[key], here, shown)


def refuse_unfinished(key: str, payload: Payload) -> None:
    """Refuse a step that is refused or waiting, for its own reason (RecordError)."""
    if payload["state"] != "ok":
        raise RecordError(f"{STEPS[key].title} is {payload['state']}: {payload['why']}")


def _refuse_other(what: str, here: Any, shown: Any) -> None:
    """Refuse inputs that differ by more than empty entries, which a later version may have added."""
    here, shown = sparse(here), sparse(shown)
    if fingerprint(here) == fingerprint(shown):
        return
    at = dotted(_first_difference(here, shown))
    where = f" ({at})" if at else ""
    raise StaleError(
        f"the notebook is stale: {what} in this folder isn't what it shows{where}", "run all its cells and save it"
    )


def _first_difference(one: Any, other: Any) -> tuple[str, ...]:
    """Keys that lead to the first difference of two inputs, down to what is no table."""
    if not (isinstance(one, Mapping) and isinstance(other, Mapping)):
        return ()
    key = next(k for k in sorted({*one, *other}) if fingerprint(one.get(k)) != fingerprint(other.get(k)))
    return (key, *_first_difference(one.get(key), other.get(key)))


def _payloads(notebook: NotebookNode) -> Mapping[str, Payload]:
    """Payloads in canonical form: the same record from a notebook just run as from one saved and read again."""
    found = None
    for data in _twins(notebook):
        if data["format"] != FORMAT:
            raise RecordError(f"the notebook was run by another version of calcsheet (twin format {data['format']})")
        found = data.get("payloads", found)
    if found is None:
        raise StaleError(
            "the notebook shows no JobCard, or was not run", "show the job card in a cell and run all cells"
        )
    kinds = list(STEPS)
    unknown = {payload["kind"] for payload in found.values()} - {*kinds}
    if unknown:
        raise RecordError(f"the notebook was run by another version of calcsheet (step {', '.join(sorted(unknown))})")
    # a saved notebook has its keys sorted: upstream first again
    ordered = sorted(found.items(), key=lambda item: (kinds.index(item[1]["kind"]), item[0]))
    return {key: json.loads(rfc8785.dumps(payload)) for key, payload in ordered}


def _twins(notebook: NotebookNode) -> Iterator[Mapping[str, Any]]:
    for cell in notebook.cells:
        for output in cell.get("outputs", ()):
            if (data := output.get("data", {}).get(MIME)) is not None:
                yield data


def _refuse_two_of_a_name(notebook: NotebookNode) -> None:
    """A step has one set of options: the later cell's would stand under the earlier cell's words."""
    asked: dict[str, str] = {}
    for data in _twins(notebook):
        if "asked" in data and asked.setdefault(data["step"], data["asked"]) != data["asked"]:
            raise RecordError(
                f'two cells ask for step "{data["step"]}" with different options; give one of them its own name="\u2026"'
            )


def _of_code(number: int, cell: NotebookNode, payloads: Mapping[str, Payload]) -> list[Shown | Own]:
    shown, others, on_screen = [], [], False
    for output in cell.outputs:
        if output.output_type == "error":
            raise RecordError(f"cell {number} failed when the notebook was run: {output.ename}: {output.evalue}")
        data = output.get("data", {}).get(MIME)
        if data is not None and data["view"] in VIEWS and not VIEWS[data["view"]].printed:
            on_screen = True
        elif data is not None:
            shown.append(_shown(number, cell, data, payloads))
        elif "application/vnd.jupyter.widget-view+json" not in output.get("data", {}):
            others.append(output)
    if (shown or on_screen) and not others:
        return list(shown)
    if not others and _is_set_up(cell.source):
        return []
    return [Own(cell.source, tuple(printable(output) for output in others)), *shown]


def _is_set_up(source: str) -> bool:
    """Whether a cell only imports: nothing that a checker needs."""
    return all(line.startswith(("import ", "from ", "#")) or not line.strip() for line in source.splitlines())


def _shown(number: int, cell: NotebookNode, data: Mapping[str, Any], payloads: Mapping[str, Payload]) -> Shown:
    if data["view"] not in VIEWS or data["step"] not in payloads:
        raise RecordError(f'cell {number} shows "{data["view"]}" of step "{data["step"]}", which this record has not')
    if data["source"] != fingerprint(cell.source.rstrip("\n")):
        raise RecordError(f"the notebook is stale: cell {number} was changed and not run again")
    if data["fingerprint"] != fingerprint(VIEWS[data["view"]].covers(payloads, data["step"])):
        raise StaleError(
            f"the notebook is stale: cell {number} shows older results than the job card holds", "run all cells"
        )
    return Shown(data["view"], data["step"], data["options"])
