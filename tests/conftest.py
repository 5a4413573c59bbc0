"""An invented job in a folder, IPython without a kernel to run its cells in, and planar models."""

from __future__ import annotations

import contextlib
import io
import json
import os
from collections.abc import Callable, Iterator, Sequence
from html.parser import HTMLParser
from pathlib import Path
from typing import Any

import comm
import nbformat
import numpy as np
import pytest
from comm.base_comm import BaseComm
from IPython.core.interactiveshell import InteractiveShell
from traitlets.config import Config

from calcsheet.blocks import block as blocks
from calcsheet.core.chain import Chain
from calcsheet.core.lateral import Lateral
from calcsheet.core.model import Model
from calcsheet.record import issue
from calcsheet.record.execute import execute
from calcsheet.steps.actions import ActionsOptions
from calcsheet.steps.demand import DemandOptions
from calcsheet.steps.drift import DriftOptions
from calcsheet.steps.graph import Job
from calcsheet.steps.modes import ModesOptions
from calcsheet.steps.participation import ParticipationOptions
from calcsheet.steps.peaks import PeaksOptions

CARD = """\
format = 1
[job]
project = "Heron Row"
title = "Modes of the frames"
number = "HR/S 21"
revision = "A"
date = 2026-03-09
reason = "First issue"
purpose = "Periods and shares of the frames."
[people.prepared]
name = "Odile Quist"
initials = "OQ"
date = 2026-03-09
[people.checked]
name = "Remy Aalto"
initials = "RA"
[units]
system = "SI"
[levels]
base_elevation = 1.2
effective_base = ""
[directions]
x = "Along grids 1 to 4."
y = "Along grids A to C."
[model]
kind = "storey chain"
[stiffness.gross]
factor = 1.0
ground = "steel, gross sections"
[stiffness.cracked]
factor_x = 0.6
factor_y = 0.5
ground = "cracked beams"
[serves]
forces = "cracked"
drifts = "gross"
[[assumptions]]
text = "Floors are rigid."
ground = "solid slabs"
[origins]
"storeys.csv" = { source = "take-off", revision = "B", date = 2026-02-27 }
[answers]
"""
STOREYS = """\
level,storey height [m],mass [t],stiffness x [kN/m],stiffness y [kN/m]
Roof,2.95,141.5,88000,97000
4,3.3,236,139500,128000
3,3.3,244.25,152000,141000
2,3.65,251,160500,150000
1,4.4,268.75,171000,158500
"""
US_CARD = (
    CARD.replace('system = "SI"', 'system = "US"')
    .replace("base_elevation = 1.2", "base_elevation = -12.5")
    .replace('effective_base = ""', 'effective_base = "Plaza"')
)
US_STOREYS = """\
level,elevation [ft],weight [kip],stiffness x [kip/in],stiffness y [kip/in]
Roof,62.5,310.5,505,560
5,51.25,498,790,715
4,39.75,520.75,865,800
3,28.25,533,910,856
2,16.5,561,980,905
Plaza,0,870,,
"""
MEMBERS = {
    "SI": """\
member,storeys,kind,section,direction,count,acts as,height [m],run [m],stiffness factor,shear,shear factor,beam,beam below,\
spans [m],beam factor,ground
Inner,1 to 3,column,C55,x,6,beams,,,0.7,,,B60,,6.2 + 7.4,0.35,cracked
Inner upper,4 to Roof,column,C40,x,6,beams,,,0.7,,,B60,B70,6.2 + 7.4,0.35,cracked
Outer,all,column,C40,x,4,beams on pinned base,,,0.7,yes,0.7,B60,,6.2,0.35,cracked
Across,all,column,C40,y,10,fixed-fixed,2.7,,0.7,,,,,,,cracked
Posts,all,column,Post,y,2,fixed-pinned,,,,,,,,,,
Core,all,wall,W3,y,2,cantilever,,,0.5,,0.4,,,,,cracked
Pier,1,wall,W2,x,1,fixed-fixed,,,0.5,,0.5,,,,,cracked
Rods,2 to Roof,brace,Rod,x,2,pair in tension only,,5.4,,,,,,,,
Ties,1,brace,Rod,35,1,pair,,5.4,,,,,,,,
Infill,2,infill strut,Panel,x,3,,,5.1,,,,,,,,
""",
    "US": """\
member,storeys,kind,section,direction,count,acts as,run [ft],stiffness factor,beam,spans [ft],beam factor,ground
Inner,all,column,C22,x,6,beams,,0.7,B24,20.5 + 24.25,0.35,cracked
Across,all,column,C22,y,6,fixed-fixed,,0.7,,,,cracked
Core,all,wall,W10,y,1,cantilever,,0.5,,,,cracked
Rods,all,brace,Rod,x,1,pair,18,,,,,
""",
}
SECTIONS = {
    "SI": """\
section,material,shape,depth [mm],width [mm],thickness [mm],area [cm²],second moment major [cm⁴],shear area [cm²]
C55,Concrete,rectangle,550,450,,,,
C40,Concrete,rectangle,400,400,,,,
B60,Concrete,rectangle,600,300,,,,
B70,Concrete,rectangle,700,300,,,,
W3,Concrete,rectangle,3200,220,,,,
W2,Concrete,own,,,,4500,1.55e7,3600
Post,Steel,pipe,219.1,,8,,,
Rod,Steel,circle,32,,,,,
Panel,Brick,rectangle,850,115,,,,
""",
    "US": """\
section,material,shape,depth [in],width [in],area [in²]
C22,Concrete,rectangle,22,22,
B24,Concrete,rectangle,24,12,
W10,Concrete,rectangle,120,10,
Rod,Steel,own,,,1.75
""",
}
MATERIALS = {
    "SI": """\
material,kind,modulus [GPa],Poisson ratio
Concrete,concrete,31.5,0.2
Steel,steel,210,0.3
Brick,masonry,4.2,
""",
    "US": "material,kind,modulus [ksi],shear modulus [ksi]\nConcrete,concrete,3800,1580\nSteel,steel,29000,\n",
}
WORDS = "# Purpose\n\nModes of the frames, $T_1 = 2\\pi/\\omega_1$.\n\n## Limits\n\nNo torsion."
TWO_STOREYS = """\
level,storey height [m],mass [t],stiffness x [kN/m],stiffness y [kN/m],gravity load [kN]
Roof,3,100,50000,80000,950
1,4,200,100000,160000,1950
"""
BASES = {
    "EN": """\
edition = "EN 1998-1:2004"
ground_acceleration = 0.2
spectrum = 1
ground = "B"
importance_class = "II"
q_x = 3
q_y = 3
system_x = "concrete moment frame"
system_y = "other"
elements = "ductile"
""",
    "7-16": """\
edition = "ASCE/SEI 7-16"
s_ds = 1.0
s_d1 = 0.6
s_1 = 0.4
t_l = 8
site_class = "C"
risk_category = "II"
r_x = 8
r_y = 8
c_d_x = 5.5
c_d_y = 5.5
system_x = "concrete moment frame"
system_y = "other"
""",
    "IS": """\
edition = "IS 1893 (Part 1):2016"
zone = "IV"
soil = "medium"
importance_value = 1.2
r_x = 5
r_y = 5
system_x = "concrete moment frame"
system_y = "other"
base_y = 16
""",
    "points": """\
edition = "given points"
points = "points.csv"
""",
}
BASES["7-22"] = BASES["7-16"].replace("7-16", "7-22") + 'points = "points.csv"\n'
POINTS = "period [s],ordinate [g]\n0,0.4\n0.1,1.0\n0.6,1.0\n2,0.3\n8,0.05\n"
CELLS = (
    "from calcsheet import JobCard, ModePlot, ModeSolver, ParticipationSummary, StoreyTable",
    'job = JobCard(".")\njob',
    "storeys = StoreyTable(job)\nstoreys",
    'modes = ModeSolver(storeys, share=0.9, energy="shown")\nmodes',
    'ModePlot(modes, normalise="largest", values="shown")',
    "ParticipationSummary(modes)",
)
"""Code cells of a whole calculation."""


def changed(text: str, changes: Sequence[tuple[str, str]]) -> str:
    for old, new in changes:
        assert old in text
        text = text.replace(old, new, 1)
    return text


@pytest.fixture
def job_folder(tmp_path: Path) -> Callable[..., Path]:
    """Writes a job folder: pieces of its card and of its storey table replaced, in SI or US units."""

    def write(
        card: Sequence[tuple[str, str]] = (),
        storeys: Sequence[tuple[str, str]] = (),
        *,
        us: bool = False,
        name: str = "heron row",
        files: dict[str, str] | None = None,
    ) -> Path:
        folder = tmp_path / name
        folder.mkdir()
        (folder / "job.toml").write_text(changed(US_CARD if us else CARD, card), encoding="utf-8")
        (folder / "storeys.csv").write_text(changed(US_STOREYS if us else STOREYS, storeys), encoding="utf-8")
        for file, text in (files or {}).items():
            (folder / file).write_text(text, encoding="utf-8")
        return folder

    return write


@pytest.fixture
def members_folder(job_folder: Callable[..., Path]) -> Callable[..., Path]:
    """Writes a job folder with a stiffness take-off, pieces of members.csv replaced; the storey table takes it, if it `feeds`."""

    def write(
        members: Sequence[tuple[str, str]] = (),
        *,
        card: Sequence[tuple[str, str]] = (),
        us: bool = False,
        feeds: bool = True,
        **how: Any,
    ) -> Path:
        system = "US" if us else "SI"
        files = {
            "members.csv": changed(MEMBERS[system], members),
            "sections.csv": SECTIONS[system],
            "materials.csv": MATERIALS[system],
        }
        named = (('kind = "storey chain"', 'kind = "storey chain"\nmembers = "members.csv"'),) if feeds else ()
        return job_folder((*named, *card), us=us, files=files, **how)

    return write


@pytest.fixture
def demand_job(job_folder: Callable[..., Path]) -> Callable[..., Job]:
    """Opens a job with all steps up to the storey actions, on two storeys unless said otherwise, and one of `BASES`."""

    def build(
        basis: str,
        *changes: tuple[str, str],
        card: Sequence[tuple[str, str]] = (),
        storeys: str = TWO_STOREYS,
        points: str = POINTS,
        keep: int | None = None,
        more: dict[str, str] | None = None,
        **how: Any,
    ) -> Job:
        """Pieces of the basis replaced by `changes`, of the card by `card`."""
        serves = () if how.get("us") else (('forces = "cracked"', 'forces = "gross"'),)
        table = ("[answers]", f"[basis]\n{changed(BASES[basis], changes)}\n[answers]")
        files = {"storeys.csv": storeys, "points.csv": points, **(more or {})}
        return chained(Job(job_folder((*serves, *card, table), files=files, **how)), keep)

    return build


def chained(job: Job, keep: int | None = None) -> Job:
    """A job with its steps attached: modes and participation, and those of the demand where it has a basis."""
    inputs = {"modes": ModesOptions(keep=keep), "participation": ParticipationOptions()}
    if (job.payload("card")["inputs"] or {}).get("basis") is not None:
        inputs |= {
            "demand": DemandOptions(),
            "peaks": PeaksOptions(),
            "drift": DriftOptions(),
            "actions": ActionsOptions(),
        }
    for kind, options in inputs.items():
        job.attach(kind, options)
    return job


@pytest.fixture
def chain() -> Callable[..., Job]:
    """`chained`, for jobs of other folders."""
    return chained


@pytest.fixture
def cells() -> tuple[str, ...]:
    """Code cells of a whole calculation."""
    return CELLS


@pytest.fixture
def calculation() -> tuple[str, ...]:
    """The same with the engineer's words at both ends."""
    return (WORDS, *CELLS, "# Conclusions\n\nTwo modes rule.")


@pytest.fixture(scope="session")
def executed_folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A job folder whose notebook was executed in a real kernel, and saved.

    The notebook asks for a kernel of another language; one of its cells edits a mass.
    """
    folder = tmp_path_factory.mktemp("executed") / "heron row"
    folder.mkdir()
    (folder / "job.toml").write_text(CARD, encoding="utf-8")
    (folder / "storeys.csv").write_text(STOREYS, encoding="utf-8")
    edit = 'storeys.set("Roof", "mass", 155.5)\nprint("heavier roof")'
    notebook = notebook_of([WORDS, *CELLS, edit], kernel="fortran-99")
    execute(notebook, folder)
    nbformat.write(notebook, folder / "calc.ipynb")
    return folder


def notebook_of(sources: Sequence[str], kernel: str = "python3") -> nbformat.NotebookNode:
    """A notebook not run: sources that begin with "#" and a blank are words, the others code."""
    v4 = nbformat.v4
    made = [v4.new_markdown_cell(s) if s.startswith("# ") else v4.new_code_cell(s) for s in sources]
    spec = {"name": kernel, "display_name": kernel, "language": "python"}
    return v4.new_notebook(cells=made, metadata={"kernelspec": spec})


@pytest.fixture
def new_notebook() -> Callable[..., nbformat.NotebookNode]:
    return notebook_of


class Link(BaseComm):
    """A widget's link to the page: it keeps what is sent, and hands in what the page says."""

    def __init__(self, *args: Any, **kwargs: Any) -> None:
        self.sent: list[dict[str, Any]] = []
        super().__init__(*args, **kwargs)

    def publish_msg(self, msg_type: str, data: Any = None, *args: Any, **kwargs: Any) -> None:
        self.sent.append({"type": msg_type, **(data or {})})

    @property
    def replies(self) -> list[dict[str, Any]]:
        return [m["content"] for m in self.sent if m.get("method") == "custom"]

    @property
    def state(self) -> dict[str, Any]:
        """The widget's traits as the page has them."""
        held: dict[str, Any] = {}
        for message in self.sent:
            held |= message.get("state", {})
        return held

    @property
    def closed(self) -> bool:
        return self.sent[-1]["type"] == "comm_close"

    def say(self, **content: Any) -> dict[str, Any]:
        """Say something to Python; its reply."""
        before = len(self.replies)
        content = {"seq": before, **content}
        self.handle_msg({"content": {"data": {"method": "custom", "content": content}}, "buffers": []})
        (reply,) = self.replies[before:]
        assert reply.get("seq", reply.get("n")) == content.get("n", content["seq"])
        return reply


class Shell:
    """IPython without a kernel: runs cells and keeps what each shows, as a notebook's page would."""

    def __init__(self) -> None:
        self.links: list[Link] = []
        self.outputs: dict[str, list[dict[str, Any]]] = {}
        self.by_id: dict[str, dict[str, Any]] = {}
        self.published = 0
        config = Config({"HistoryManager": {"enabled": False, "hist_file": ":memory:"}})
        self.ipython = InteractiveShell.instance(config=config)
        self.ipython.display_pub.publish = self.publish
        self._cell, self._runs = "", 0
        hook = self.ipython.displayhook
        hook.write_output_prompt = hook.finish_displayhook = lambda: None
        hook.write_format_data = self.result

    def publish(
        self, data: Any, metadata: Any = None, *, transient: Any = None, update: bool = False, **_: Any
    ) -> None:
        self.published += 1
        name = (transient or {}).get("display_id")
        if update:
            self.by_id[name]["data"] = data
            return
        output = {"output_type": "display_data", "data": data, "metadata": metadata or {}}
        self.outputs[self._cell].append(output)
        if name:
            self.by_id[name] = output

    def result(self, data: Any, metadata: Any = None) -> None:
        if data:
            output = {"output_type": "execute_result", "data": data, "metadata": metadata or {}, "execution_count": 1}
            self.outputs[self._cell].append(output)

    def run(self, source: str, cell: str = "") -> list[dict[str, Any]]:
        """Run a cell, again where its id is that of one run before; its outputs."""
        self._runs += 1
        self._cell = cell or f"cell-{self._runs}"
        header = {"metadata": {"cellId": self._cell}, "header": {"msg_id": f"run-{self._runs}"}}
        self.ipython.parent_header = header
        self.outputs[self._cell] = []
        with contextlib.redirect_stdout(io.StringIO()) as said:
            result = self.ipython.run_cell(source, store_history=True)
        if result.error_in_exec or result.error_before_exec:
            raise result.error_in_exec or result.error_before_exec
        if said.getvalue():
            stream = {"output_type": "stream", "name": "stdout", "text": said.getvalue()}
            self.outputs[self._cell].append(stream)
        return self.outputs[self._cell]

    def __getitem__(self, name: str) -> Any:
        return self.ipython.user_ns[name]

    def twin(self, cell: str) -> dict[str, Any]:
        """Data of the one twin that a cell shows now."""
        (data,) = (o["data"] for o in self.outputs[cell] if "text/html" in o.get("data", {}))
        return data

    def link(self, cell: str) -> Link:
        """Link to the one live view that a cell shows now."""
        view = "application/vnd.jupyter.widget-view+json"
        (model,) = (o["data"][view]["model_id"] for o in self.outputs[cell] if view in o.get("data", {}))
        return next(link for link in self.links if link.comm_id == model)

    def executed(self, sources: Sequence[str]) -> nbformat.NotebookNode:
        """A notebook of these cells, run one after another."""
        notebook = notebook_of(sources)
        for i, cell in enumerate(notebook.cells):
            if cell.cell_type == "code":
                self.run(cell.source, f"executed-{i}")
        for i, cell in enumerate(notebook.cells):
            if cell.cell_type == "code":
                cell.outputs = [nbformat.from_dict(o) for o in self.outputs[f"executed-{i}"]]
        return notebook


@pytest.fixture
def shell(monkeypatch: pytest.MonkeyPatch) -> Iterator[Shell]:
    """IPython in this process, its widgets linked to nobody."""

    def linked(*args: Any, **kwargs: Any) -> Link:
        made.links.append(Link(*args, **kwargs))
        return made.links[-1]

    comms = comm.base_comm.CommManager()
    monkeypatch.setattr(comm, "create_comm", linked)
    monkeypatch.setattr(comm, "get_comm_manager", lambda: comms)
    monkeypatch.setattr(blocks, "_SHOWN", {})
    monkeypatch.setattr(Job, "_opened", {})
    monkeypatch.delenv(blocks.STATIC, raising=False)
    InteractiveShell.clear_instance()
    made = Shell()
    yield made
    made.ipython.reset(new_session=False)
    InteractiveShell.clear_instance()


@pytest.fixture
def static(shell: Shell, monkeypatch: pytest.MonkeyPatch) -> Shell:
    """The same, twins alone, as when a record is issued."""
    monkeypatch.setenv(blocks.STATIC, "1")
    return shell


@pytest.fixture
def quick_kernel(static: Shell, monkeypatch: pytest.MonkeyPatch) -> Shell:
    """Issuing executes notebooks in this process instead of a kernel."""

    def execute(notebook: nbformat.NotebookNode, folder: Path, progress: Callable[[int, int], None]) -> None:
        before = Path.cwd()
        os.chdir(folder)
        try:
            run = static.executed([cell.source for cell in notebook.cells])
        finally:
            os.chdir(before)
        for cell, done in zip(notebook.cells, run.cells, strict=True):
            if cell.cell_type == "code":
                cell.outputs = done.outputs
        progress(1, 1)

    monkeypatch.setattr(issue, "execute", execute)
    return static


@pytest.fixture
def in_folder(monkeypatch: pytest.MonkeyPatch, job_folder: Callable[..., Path]) -> Path:
    """The job's folder, and the working directory of this test."""
    folder = job_folder()
    monkeypatch.chdir(folder)
    return folder


class Document(HTMLParser):
    """What stands in an HTML document: tags with attributes, words, tables and numbers with their pointers."""

    VOID = frozenset("area base br col embed hr img input link meta source track wbr".split())

    def __init__(self, html: str) -> None:
        super().__init__()
        self.tags: list[tuple[str, dict[str, str | None]]] = []
        self.numbers: list[tuple[str, str]] = []
        self.words = ""
        self.headings: list[str] = []
        self.script = ""
        self._open: list[str] = []
        self._pointer: str | None = None
        self.feed(html)

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append((tag, dict(attrs)))
        if tag not in self.VOID:
            self._open.append(tag)
        if tag == "data":
            self.numbers.append((dict(attrs)["value"] or "", ""))
        if tag in ("h1", "h2", "h3", "h4"):
            self.headings.append("")

    def handle_endtag(self, tag: str) -> None:
        if tag in self._open:
            while self._open.pop() != tag:
                pass

    def handle_data(self, data: str) -> None:
        if "script" in self._open:
            self.script += data
        if {"script", "style", "svg"} & {*self._open}:
            return
        self.words += data
        if "data" in self._open:
            at, shown = self.numbers[-1]
            self.numbers[-1] = at, shown + (f"^{data}" if "sup" in self._open else data)
        if self._open and self._open[-1] in ("h1", "h2", "h3", "h4"):
            self.headings[-1] += data


@pytest.fixture
def document() -> Callable[[str], Document]:
    return Document


@pytest.fixture(scope="session")
def planar() -> Callable[..., Model]:
    """Build a model of one translation a level, lowest first; a sequence of stiffnesses makes a chain."""

    def build(
        mass: Sequence[float], lateral: Lateral | Sequence[float], height: Sequence[float] | None = None
    ) -> Model:
        n = len(mass)
        return Model(
            level=tuple(f"L{i + 1}" for i in range(n)),
            height=np.arange(1.0, n + 1.0) if height is None else np.asarray(height, dtype=float),
            mass=np.asarray(mass, dtype=float),
            level_of=tuple(range(n)),
            direction=("x",),
            influence=np.ones((1, n)),
            lateral=lateral if hasattr(lateral, "kind") else Chain(np.asarray(lateral, dtype=float)),
        )

    return build


@pytest.fixture(scope="session")
def plain_record() -> Callable[..., dict[str, Any]]:
    """What an issued record holds of a job: its payloads as JSON has them, status and signatures as asked for."""

    def build(job: Job, status: str = "FOR CHECKING", **parts: Any) -> dict[str, Any]:
        held = {
            "format": 2,
            "status": status,
            "fingerprints": {"inputs": "ab" * 32, "results": "cd" * 32},
            "signatures": [],
        }
        return json.loads(json.dumps({**held, "payloads": job.payloads(), **parts}))

    return build
