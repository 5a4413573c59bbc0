"""A real JupyterLab, which also serves Notebook 7, and the system's Chromium without a window."""

from __future__ import annotations

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

    def cells(self) -> list[str]:
        """Source of the notebook's cells as the page holds them."""
        return self.page.evaluate(
            "() => [...window.jupyterapp.shell.currentWidget.content.model.cells].map(cell => cell.sharedModel.source)"
        )

    def stop_kernels(self) -> None:
        for kernel in self.lab.api("GET", "kernels"):
            self.lab.api("DELETE", f"kernels/{kernel['id']}")

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


@pytest.fixture(params=["lab", "notebook"] if os.environ.get("CALCSHEET_REQUIRE_TOOLS") == "1" else ["lab"])
def flavour(request: pytest.FixtureRequest) -> str:
    """Each test runs in JupyterLab, and where no tool may be missing in Notebook 7 too."""
    return request.param


@pytest.fixture
def open_notebook(lab: Lab, chromium, flavour: str) -> Iterator[Callable[..., Sheet]]:
    """Opens a notebook, given by its path in the server's folder, in a fresh browser context."""
    context = chromium.new_context(viewport={"width": 1280, "height": 1000})
    context.grant_permissions(["clipboard-read", "clipboard-write"])
    context.set_default_timeout(20_000)

    def open_(path: str) -> Sheet:
        return Sheet(context.new_page(), lab, path, flavour).open()

    yield open_
    context.close()
    for session in lab.api("GET", "sessions"):
        lab.api("DELETE", f"sessions/{session['id']}")


@pytest.fixture
def new_notebook(lab: Lab, flavour: str, request: pytest.FixtureRequest) -> Callable[[list[str]], str]:
    """Writes a notebook of code cells into the server's folder; gives its path there."""

    def write(cells: list[str]) -> str:
        name = f"{request.node.originalname}_{flavour}.ipynb"
        kernel = {"name": "python3", "display_name": "Python 3", "language": "python"}
        notebook = nbformat.v4.new_notebook(
            cells=[nbformat.v4.new_code_cell(source) for source in cells], metadata={"kernelspec": kernel}
        )
        nbformat.write(notebook, lab.folder / name)
        return name

    return write
