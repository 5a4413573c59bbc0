"""A real JupyterLab, which also serves Notebook 7, and the system's Chromium without a window.

Opening a notebook takes longest, so most tests share one open notebook a module, put back to its start before each.
"""

from __future__ import annotations

import ast
import json
import os
import shutil
import socket
import subprocess
import sys
import time
import urllib.request
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from pathlib import Path

import nbformat
import pytest

CHROMIUM_FLAGS = [
    "--headless",
    "--no-sandbox",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
]
ADDRESS = {"lab": "lab/tree", "notebook": "notebooks"}
SLOW = 60_000  # ms
DEMO = Path(__file__).parents[2] / "example_notebooks" / "alder-quay"
BLOCKS = (
    "from calcsheet import JobCard, ModePlot, ModeSolver, StoreyTable",
    'job = JobCard(".")\njob',
    "storeys = StoreyTable(job)\nstoreys",
    "modes = ModeSolver(storeys, share=0.9)\nmodes",
    "ModePlot(modes)",
)
"""Code cells of the notebook that the tests share."""


def _missing(what: str) -> None:
    if os.environ.get("CALCSHEET_REQUIRE_TOOLS") == "1":
        pytest.fail(f"{what} is missing")
    pytest.skip(f"{what} is missing")


@dataclass
class Lab:
    """A running server: its address and the folder it shows."""

    url: str
    folder: Path

    def api(self, method: str, path: str) -> object:
        request = urllib.request.Request(f"{self.url}/api/{path}", method=method)
        with urllib.request.urlopen(request, timeout=10) as reply:
            text = reply.read()
        return json.loads(text) if text else None


class Sheet:
    """A notebook open in the browser."""

    def __init__(self, page, lab: Lab, path: str, flavour: str) -> None:
        self.page, self.lab, self.path, self.flavour = page, lab, path, flavour

    def open(self) -> Sheet:
        # "reset" keeps JupyterLab from opening the notebooks of earlier tests as well
        self.page.goto(f"{self.lab.url}/{ADDRESS[self.flavour]}/{self.path}?reset", timeout=SLOW)
        self.page.locator(".jp-Notebook .jp-Cell").first.wait_for(timeout=SLOW)
        self.page.wait_for_function("window.jupyterapp !== undefined", timeout=SLOW)
        return self

    def command(self, name: str) -> None:
        self.page.evaluate("name => window.jupyterapp.commands.execute(name).then(() => null)", name)

    def run_all(self) -> None:
        """Run all cells and wait until the kernel is idle again."""
        self.wait_for_kernel()
        self.command("notebook:run-all-cells")

    def wait_for_kernel(self) -> None:
        self.page.wait_for_function(
            "() => { const s = window.jupyterapp.shell.currentWidget?.sessionContext;"
            " return s?.isReady && s.session?.kernel?.status === 'idle'; }",
            timeout=SLOW,
        )

    def save(self) -> None:
        self.command("docmanager:save")

    def kernel(self, expression: str) -> object:
        """Value of an expression in the notebook's kernel."""
        reply = self.page.evaluate(
            """async (code) => {
                const kernel = window.jupyterapp.shell.currentWidget.sessionContext.session.kernel;
                const request = {code: '', user_expressions: {value: code}, silent: false};
                const reply = await kernel.requestExecute(request).done;
                const value = reply.content.user_expressions.value;
                if (!value.data) throw new Error(`${value.ename}: ${value.evalue}`);
                return value.data['text/plain'];
            }""",
            f"__import__('json').dumps({expression})",
        )
        return json.loads(ast.literal_eval(reply))

    def cell(self, label: str):
        """Input of the storey table by its label, such as "mass, level 5"."""
        return self.page.get_by_label(label, exact=True)

    def block(self, name: str):
        """Live view of a block."""
        return self.page.locator(f'.calcsheet-live[data-block="{name}"]')

    def status(self) -> str:
        """The storey table's status line."""
        return self.block("storeys").locator("p.calcsheet-status[role=status]").text_content() or ""

    def focused(self) -> str | None:
        return self.page.evaluate("document.activeElement.getAttribute('aria-label')")

    def keys(self, *keys: str) -> None:
        """Press keys; a text in quotation marks is typed."""
        for key in keys:
            if key.startswith("'"):
                self.page.keyboard.type(key.strip("'"))
            else:
                self.page.keyboard.press(key)

    def paste(self, text: str) -> None:
        """Put a text on the clipboard and paste it."""
        self.page.evaluate("text => navigator.clipboard.writeText(text)", text)
        self.page.keyboard.press("Control+v")

    def until(self, holds: Callable[[], object], what: str, seconds: float = 20.0) -> None:
        """Wait until something holds."""
        end = time.monotonic() + seconds
        while not holds():
            assert time.monotonic() < end, f"still missing: {what}"
            self.page.wait_for_timeout(50)

    def cells(self) -> list[str]:
        """Source of the notebook's cells as the page holds them."""
        return self.page.evaluate(
            "() => [...window.jupyterapp.shell.currentWidget.content.model.cells].map(cell => cell.sharedModel.source)"
        )

    def stop_kernel(self) -> None:
        """End this notebook's kernel, behind the page's back."""
        for session in self.lab.api("GET", "sessions"):
            if session["path"] == self.path:
                self.lab.api("DELETE", f"sessions/{session['id']}")

    def shot(self, name: str) -> None:
        """Keep a picture in the folder that CALCSHEET_SHOTS names, for a person to look at."""
        folder = os.environ.get("CALCSHEET_SHOTS")
        if folder:
            self.page.screenshot(path=Path(folder) / f"{self.flavour}-{name}.png")


@pytest.fixture(scope="module")
def chromium() -> Iterator[object]:
    """The browser; not for the whole session, as its event loop would be in the way of other tests."""
    program = shutil.which("chromium") or shutil.which("chromium-browser") or shutil.which("google-chrome")
    if program is None:
        _missing("chromium")
    playwright = pytest.importorskip("playwright.sync_api")
    with playwright.sync_playwright() as runner:
        browser = runner.chromium.launch(executable_path=program, args=CHROMIUM_FLAGS)
        yield browser
        browser.close()


@pytest.fixture(scope="session")
def lab(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Lab]:
    """A JupyterLab server on a folder of its own, away from the user's settings."""
    for module in ("jupyterlab", "notebook"):
        pytest.importorskip(module)
    home = tmp_path_factory.mktemp("home")
    folder = tmp_path_factory.mktemp("sheets")
    (home / "labconfig").mkdir()
    (home / "labconfig" / "page_config.json").write_text(
        json.dumps({"disabledExtensions": {"@jupyterlab/apputils-extension:announcements": True}})
    )
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        port = probe.getsockname()[1]
    environment = os.environ | {
        "HOME": str(home),
        "PATH": os.pathsep.join((str(Path(sys.executable).parent), os.environ["PATH"])),  # as where it is activated
        "IPYTHONDIR": str(home),
        "JUPYTER_CONFIG_DIR": str(home),
        "JUPYTER_DATA_DIR": str(home),
        "JUPYTER_RUNTIME_DIR": str(home),
    }
    arguments = [
        f"--ServerApp.port={port}",
        "--ServerApp.ip=127.0.0.1",
        f"--ServerApp.root_dir={folder}",
        "--IdentityProvider.token=",
        "--ServerApp.disable_check_xsrf=True",
        "--ServerApp.allow_root=True",
        "--LabApp.expose_app_in_browser=True",
        "--JupyterNotebookApp.expose_app_in_browser=True",
    ]
    with open(home / "server.log", "w") as log:
        server = subprocess.Popen(
            [sys.executable, "-m", "jupyterlab", "--no-browser", *arguments],
            env=environment,
            cwd=folder,
            stdout=log,
            stderr=log,
        )
        running = Lab(f"http://127.0.0.1:{port}", folder)
        try:
            _await_server(running, server, home / "server.log")
            yield running
        finally:
            server.terminate()
            server.wait(timeout=20)


def _await_server(lab: Lab, server: subprocess.Popen, log: Path) -> None:
    until = time.monotonic() + 60
    while time.monotonic() < until and server.poll() is None:
        try:
            lab.api("GET", "status")
            return
        except OSError:
            time.sleep(0.2)
    pytest.fail(f"JupyterLab did not start:\n{log.read_text()[-3000:]}")


@pytest.fixture(
    scope="module", params=["lab", "notebook"] if os.environ.get("CALCSHEET_REQUIRE_TOOLS") == "1" else ["lab"]
)
def flavour(request: pytest.FixtureRequest) -> str:
    """Each test runs in JupyterLab, and where no tool may be missing in Notebook 7 too."""
    return request.param


@pytest.fixture(scope="module")
def opener(lab: Lab, chromium, flavour: str) -> Iterator[Callable[..., Sheet]]:
    """Opens notebooks, given by their path in the server's folder; ends pages and kernels with the module."""
    contexts = []

    def open_(path: str, same: Sheet | None = None) -> Sheet:
        """In a fresh browser context, or in another tab beside the page of `same`."""
        if same is None:
            contexts.append(chromium.new_context(viewport={"width": 1280, "height": 1000}))
            contexts[-1].grant_permissions(["clipboard-read", "clipboard-write"])
            contexts[-1].set_default_timeout(20_000)
        context = contexts[-1] if same is None else same.page.context
        return Sheet(context.new_page(), lab, path, flavour).open()

    yield open_
    for context in contexts:
        context.close()
    for session in lab.api("GET", "sessions"):
        lab.api("DELETE", f"sessions/{session['id']}")


@pytest.fixture
def open_notebook(opener, lab: Lab) -> Iterator[Callable[..., Sheet]]:
    """Opens a notebook for one test alone."""
    opened = []

    def open_(path: str, same: Sheet | None = None) -> Sheet:
        opened.append(opener(path, same))
        return opened[-1]

    yield open_
    paths = {sheet.path for sheet in opened}
    for sheet in opened:
        sheet.page.close()
    for session in lab.api("GET", "sessions"):
        if session["path"] in paths:
            lab.api("DELETE", f"sessions/{session['id']}")


def notebook_at(path: Path, cells: list[str]) -> None:
    kernel = {"name": "python3", "display_name": "Python 3", "language": "python"}
    made = [nbformat.v4.new_code_cell(source) for source in cells]
    nbformat.write(nbformat.v4.new_notebook(cells=made, metadata={"kernelspec": kernel}), path)


@pytest.fixture(scope="module")
def new_job(lab: Lab, flavour: str) -> Callable[..., str]:
    """Copies the demo's job into the server's folder, with a notebook of the blocks, and gives its name there."""

    def write(name: str, cells: tuple[str, ...] = BLOCKS, storeys: str = "") -> str:
        folder = lab.folder / f"{name}-{flavour}"
        folder.mkdir()
        for file in ("job.toml", "storeys.csv"):
            shutil.copy(DEMO / file, folder)
        if storeys:
            (folder / "storeys.csv").write_text(storeys)
        notebook_at(folder / "calc.ipynb", list(cells))
        return folder.name

    return write


@pytest.fixture(scope="module")
def desk(new_job, opener, request: pytest.FixtureRequest) -> Sheet:
    """A job with the blocks in one open notebook, run: shared by the tests of a module."""
    sheet = opener(f"{new_job(request.module.__name__.rpartition('.')[2])}/calc.ipynb")
    sheet.run_all()
    sheet.until(lambda: sheet.page.locator(".calcsheet-live").count() == 4, "the four blocks", 60)
    sheet.file = sheet.lab.folder / Path(sheet.path).with_name("storeys.csv")
    sheet.start = sheet.file.read_text()
    return sheet


@pytest.fixture
def sheet(desk: Sheet) -> Sheet:
    """The shared notebook with the job as it was at the start."""
    mass = desk.cell("mass, level 6")

    def put_back() -> bool:
        desk.file.write_text(desk.start)
        desk.kernel("[job.job.load(), job.job.history.__init__(), job.job.look()][1]")
        desk.page.wait_for_timeout(300)
        shown = "as read from disk" in desk.status() and mass.count() == 1 and mass.input_value() == "468.5"
        return shown and desk.file.read_text() == desk.start

    desk.keys("Escape", "Escape")
    desk.until(put_back, "the job as at the start", 40)
    mass.click()
    return desk


@pytest.fixture
def new_notebook(lab: Lab, flavour: str, request: pytest.FixtureRequest) -> Callable[[list[str]], str]:
    """Writes a notebook of code cells into the server's folder; gives its path there."""

    def write(cells: list[str]) -> str:
        name = f"{request.node.originalname}_{flavour}.ipynb"
        notebook_at(lab.folder / name, cells)
        return name

    return write
