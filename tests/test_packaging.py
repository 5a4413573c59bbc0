"""The program as it is installed: from a wheel, and editable, in a fresh environment."""

from __future__ import annotations

import importlib.util
import json
import os
import subprocess
import sys
import sysconfig
import venv
import zipfile
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]
PROGRAM = "calcsheet.exe" if os.name == "nt" else "calcsheet"
CLEAN = {name: value for name, value in os.environ.items() if name not in ("PYTHONPATH", "PYTHONHOME")}
PATIENCE = 240  # s
# Without the build backend in this environment, it is fetched for each build.
BACKEND_HERE = all(importlib.util.find_spec(name) for name in ("hatchling", "editables"))
SCRIPTS = "Scripts" if os.name == "nt" else "bin"


def attempt(*command, cwd=None):
    return subprocess.run(
        [str(c) for c in command], cwd=cwd, env=CLEAN, capture_output=True, encoding="utf-8", timeout=PATIENCE
    )


def run(*command, cwd=None):
    done = attempt(*command, cwd=cwd)
    assert done.returncode == 0, done.stdout + done.stderr
    return done.stdout


@pytest.fixture(scope="module")
def wheel(tmp_path_factory):
    """The wheel, built from the repository; with the build backend that is installed, where it is."""
    target = tmp_path_factory.mktemp("wheel")
    here = ["--no-isolation"] if BACKEND_HERE else []
    run(sys.executable, "-m", "build", "--wheel", *here, "--outdir", target, ROOT)
    (built,) = target.glob("*.whl")
    return built


@pytest.fixture
def environment(tmp_path):
    """A fresh environment, its dependencies those of the one that runs the tests, without calcsheet itself."""
    home = tmp_path / "environment"
    venv.EnvBuilder(with_pip=True, symlinks=os.name != "nt").create(home)
    python = home / SCRIPTS / ("python.exe" if os.name == "nt" else "python")
    site = Path(run(python, "-c", "import sysconfig; print(sysconfig.get_path('purelib'))").strip())
    # only the folders: .pth files in them, an editable calcsheet's too, are not followed from a .pth file
    ours = dict.fromkeys([sysconfig.get_path("purelib"), sysconfig.get_path("platlib")])
    (site / "dependencies.pth").write_text("\n".join(ours), encoding="utf-8")
    assert "ModuleNotFoundError" in attempt(python, "-c", "import calcsheet.cli", cwd=tmp_path).stderr
    return python


def demo(python, folder):
    """Issue the demonstration job with the installed command; its record."""
    said = run(python.parent / PROGRAM, "demo", "job", cwd=folder)
    assert said.startswith("Issued, status FOR CHECKING:\n")
    issued = folder / "job" / "issued" / "A"
    (data,) = issued.glob("*.json")
    (html,) = issued.glob("*.html")
    assert html.stat().st_size > 100_000
    return json.loads(data.read_text(encoding="utf-8"))


def place(python, folder):
    return Path(run(python, "-c", "import calcsheet; print(calcsheet.__file__)", cwd=folder).strip()).resolve()


def test_a_wheel_holds_what_it_ships(wheel):
    names = zipfile.ZipFile(wheel).namelist()
    shipped = "calcsheet/shipped"
    for name in (
        "calcsheet/record/page/record.html.j2",
        "calcsheet/record/page/record.css",
        "calcsheet/record/page/fonts/OFL.txt",
        "calcsheet/blocks/front/table.js",
        "calcsheet/blocks/front/calcsheet.css",
        *(f"{shipped}/templates/planar/{file}" for file in ("job.toml", "storeys.csv", "calc.ipynb")),
        *(f"{shipped}/example_notebooks/alder-quay/{file}" for file in ("job.toml", "storeys.csv", "calc.ipynb")),
    ):
        assert name in names, name
    assert not [name for name in names if name.startswith("tests") or "/issued/" in name or "__pycache__" in name]
    assert {name.split("/")[0] for name in names if not name.split("/")[0].endswith(".dist-info")} == {"calcsheet"}


def test_the_wheel_issues_the_demo(wheel, environment, tmp_path):
    run(environment, "-m", "pip", "install", "--no-deps", "--no-index", "--quiet", wheel)
    assert place(environment, tmp_path).is_relative_to(environment.parents[1].resolve())
    record = demo(environment, tmp_path)
    assert record["payloads"]["card"]["inputs"]["job"]["project"].startswith("Alder Quay")
    assert record["status"] == "FOR CHECKING"
    run(environment.parent / PROGRAM, "new", "tower", cwd=tmp_path)
    assert (tmp_path / "tower" / "job.toml").is_file()


def test_an_editable_install_issues_the_demo(environment, tmp_path):
    here = ("--no-index", "--no-build-isolation") if BACKEND_HERE else ()
    run(environment, "-m", "pip", "install", "--no-deps", "--quiet", *here, "-e", ROOT)
    assert place(environment, tmp_path) == (ROOT / "calcsheet" / "__init__.py").resolve()
    assert demo(environment, tmp_path)["payloads"]["modes"]["state"] == "ok"
