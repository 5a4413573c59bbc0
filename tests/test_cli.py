"""The commands: what they print, and how they refuse."""

from __future__ import annotations

import contextlib
import csv
import datetime as dt
import json
import os
import re
import shutil
import subprocess
import sys
import tomllib
from pathlib import Path

import nbformat
import openpyxl
import pytest
from click.testing import CliRunner

from calcsheet.cli import main
from calcsheet.record import place
from calcsheet.record.pdf import CHOICE


@pytest.fixture
def run(tmp_path, monkeypatch):
    """Runs a command in a folder of its own."""
    monkeypatch.chdir(tmp_path)

    def invoke(*arguments):
        return CliRunner().invoke(main, [str(a) for a in arguments], prog_name="calcsheet")

    return invoke


@pytest.fixture
def folder(quick_kernel, job_folder, calculation, new_notebook):
    made = job_folder()
    nbformat.write(new_notebook(calculation), made / "calc.ipynb")
    return made


def refused(result) -> str:
    """The one sentence of a refusal."""
    assert result.exit_code == 2, result.output
    assert result.stdout == ""
    (line,) = result.stderr.splitlines()
    assert line.startswith("calcsheet: ")
    assert "Traceback" not in line
    assert isinstance(result.exception, SystemExit)
    return line.removeprefix("calcsheet: ")


def test_help_has_examples(run):
    for command in ([], ["new"], ["import"], ["export"], ["issue"], ["demo"]):
        result = run(*command, "--help")
        assert result.exit_code == 0
        assert "Examples:\n" in result.stdout
        assert f"  calcsheet {' '.join(command)}" in result.stdout


def test_the_version(run):
    result = run("--version")
    assert result.exit_code == 0
    assert result.stdout.startswith("calcsheet, version ")


def test_new_makes_a_job_that_can_be_read(run, tmp_path):
    result = run("new", "tower")
    assert result.exit_code == 0
    assert "tower is ready: calc.ipynb, job.toml, storeys.csv." in result.stdout
    assert "jupyter lab tower/calc.ipynb" in result.stdout.replace("\\", "/")
    assert "calcsheet issue tower" in result.stdout
    assert sorted(p.name for p in (tmp_path / "tower").iterdir()) == ["calc.ipynb", "job.toml", "storeys.csv"]
    tomllib.loads((tmp_path / "tower" / "job.toml").read_text(encoding="utf-8"))
    nbformat.validate(nbformat.read(tmp_path / "tower" / "calc.ipynb", as_version=4))


def test_new_refuses_what_is_there(run, tmp_path):
    run("new", "tower")
    before = (tmp_path / "tower" / "job.toml").read_text(encoding="utf-8")
    assert refused(run("new", "tower")) == "tower is there already and not empty; name a new folder"
    assert (tmp_path / "tower" / "job.toml").read_text(encoding="utf-8") == before
    (tmp_path / "empty").mkdir()
    assert run("new", "empty").exit_code == 0


def test_new_refuses_a_template_that_is_not_there(run, tmp_path):
    said = refused(run("new", "tower", "--template", "curved"))
    assert said == 'no template "curved"; must be eccentric-plan or planar or seismic or walls'
    assert not (tmp_path / "tower").exists()


def test_new_in_place_of_a_file(run, tmp_path):
    (tmp_path / "tower").write_text("mine")
    assert "tower is there already" in refused(run("new", "tower"))
    assert "tower" in refused(run("new", "tower/inside"))
    assert (tmp_path / "tower").read_text() == "mine"


def test_issue_says_what_it_made(run, folder):
    result = run("issue", folder, "--to", "html")
    assert result.exit_code == 0, result.output
    first, *paths = result.stdout.splitlines()
    assert first == "Issued, status FOR CHECKING:"
    assert [path.strip() for path in paths] == [
        str(folder / "issued" / "A" / f"HR-S-21-rev-A.{kind}") for kind in ("html", "json")
    ]
    assert result.stderr == ""
    data = json.loads((folder / "issued" / "A" / "HR-S-21-rev-A.json").read_text(encoding="utf-8"))
    assert data["payloads"]["card"]["inputs"]["job"]["project"] == "Heron Row"
    assert "is issued already" in refused(run("issue", folder, "--to", "html"))


def test_a_draft_for_its_cautions_says_how_to_list_them(run, folder, new_notebook):
    cells = ("from calcsheet import *", 'job = JobCard(".")\njob', "storeys = StoreyTable(job)\nstoreys")
    few = ("modes = ModeSolver(storeys, keep=1)\nmodes", "ParticipationSummary(modes)")
    nbformat.write(new_notebook([*cells, *few]), folder / "calc.ipynb")
    said = run("issue", folder, "--to", "html").stdout
    assert said.startswith("Issued, status DRAFT, because of cautions that need an answer: target-not-reached-x (open)")
    assert said.endswith(f"Cautions wait for an answer: `calcsheet answer {folder}` lists them.\n")
    assert "target-not-reached-y (open), finding " in run("answer", folder).stdout


def test_issue_counts_the_cells_on_a_terminal(folder):
    pty = pytest.importorskip("pty")
    ours, theirs = pty.openpty()
    command = [sys.executable, "-c", "from calcsheet.cli import main; main()", "issue", str(folder), "--to", "html"]
    with subprocess.Popen(command, stdin=subprocess.DEVNULL, stdout=theirs, stderr=theirs) as issuing:
        os.close(theirs)
        said = b""
        with contextlib.suppress(OSError):  # how Linux says that the other side has closed
            while part := os.read(ours, 4096):
                said += part
    os.close(ours)
    assert issuing.returncode == 0, said.decode()
    assert "cell 0 of ?" in re.sub(r"\x1b\[[0-9;?]*[A-Za-z]", "", said.decode())
    assert "Issued, status" in said.decode()


def test_issue_on_letter(run, folder):
    assert run("issue", folder, "--to", "html", "--paper", "letter").exit_code == 0
    assert "size: letter" in (folder / "issued" / "A" / "HR-S-21-rev-A.html").read_text(encoding="utf-8")


def test_a_pdf_that_no_engine_can_make(run, folder, monkeypatch):
    monkeypatch.setenv(CHOICE, "Gutenberg")
    assert refused(run("issue", folder, "--to", "pdf")) == (
        'no PDF: PDF engine: got "Gutenberg"; must be one of WeasyPrint, PlutoPrint'
    )
    assert not (folder / "issued").exists()
    result = run("issue", folder)  # not asked for: a note, and the rest is made
    assert result.exit_code == 0
    assert (
        result.stderr == 'Note: no PDF was made: PDF engine: got "Gutenberg"; must be one of WeasyPrint, PlutoPrint.\n'
    )
    assert sorted(p.suffix for p in (folder / "issued" / "A").iterdir()) == [".html", ".json"]


def test_no_engine_that_loads(run, folder, monkeypatch):
    monkeypatch.delenv(CHOICE, raising=False)
    monkeypatch.setattr("calcsheet.record.pdf._loads", lambda name: False)
    assert "no PDF: no PDF engine loads here; install Pango" in refused(run("issue", folder, "--to", "pdf"))
    result = run("issue", folder)
    assert result.exit_code == 0
    assert result.stderr.startswith("Note: no PDF was made: no PDF engine loads here; install Pango")


@pytest.mark.parametrize(
    ("spoil", "sentence"),
    [
        (
            lambda f: (f / "calc.ipynb").unlink(),
            "no calc.ipynb in {f}; `calcsheet new` makes a job folder that has one",
        ),
        (lambda f: (f / "calc.ipynb").write_text("no json"), "calc.ipynb is no notebook that can be read: "),
        (lambda f: (f / "job.toml").write_text("[job"), "job.toml, line 1: "),
        (lambda f: (f / "job.toml").unlink(), "no job.toml in {f}; `calcsheet new {f}` makes one"),
        (lambda f: (f / "storeys.csv").unlink(), "no storeys.csv in {f}; must have a row for each level"),
        (lambda f: (f / "storeys.csv").write_bytes(b""), "storeys.csv"),
        (lambda f: (f / "issued").write_text("a file"), "File exists: {f}/issued"),
        (
            lambda f: (f / "storeys.csv").write_text((f / "storeys.csv").read_text().replace(",236,", ",-12,")),
            'storeys.csv, level "4": mass -12 t; must be above 0',
        ),
        (
            lambda f: (f / "job.toml").write_text((f / "job.toml").read_text().replace('"SI"', '"metric"')),
            'job.toml, units.system: got "metric"; must be "SI" or "US"',
        ),
    ],
)
def test_issue_refuses_in_one_sentence(run, folder, spoil, sentence):
    spoil(folder)
    assert refused(run("issue", folder, "--to", "html")).startswith(sentence.format(f=folder))


def test_issue_without_its_folder(run, tmp_path):
    assert refused(run("issue", "nowhere")) == "no folder nowhere; `calcsheet new nowhere` makes one"
    (tmp_path / "a-file").write_text("x")
    assert refused(run("issue", "a-file")) == "a-file is a file; name the job folder"


def test_a_folder_that_cannot_be_written(run, folder, monkeypatch):
    def denied(*_, **__):
        raise PermissionError(13, "Permission denied", str(folder / "issued"))

    monkeypatch.setattr(place.tempfile, "mkdtemp", denied)  # a superuser may write anywhere
    assert refused(run("issue", folder, "--to", "html")) == f"Permission denied: {folder / 'issued'}"


@pytest.mark.parametrize(
    ("arguments", "sentence"),
    [
        (["issue"], "Missing argument 'FOLDER'; `calcsheet issue --help` shows how it is used"),
        (["isue", "tower"], "No such command 'isue'"),
        (["--to"], "No such option"),
        (["issue", "tower", "--to", "doc"], "Invalid value for '--to': 'doc' is not one of 'html', 'pdf'"),
        (["issue", "tower", "--paper", "a3"], "Invalid value for '--paper': 'a3' is not one of 'a4', 'letter'"),
        (["new", "a", "b"], "Got unexpected extra argument (b)"),
    ],
)
def test_a_command_misused_is_answered_in_one_sentence(run, arguments, sentence):
    assert refused(run(*arguments)).startswith(sentence)


def test_a_demo_never_lands_in_a_folder_in_use(run, tmp_path):
    (tmp_path / "mine").mkdir()
    (tmp_path / "mine" / "notes.txt").write_text("mine")
    assert refused(run("demo", "mine")) == "mine is there already and not empty; name a new folder"
    assert [p.name for p in (tmp_path / "mine").iterdir()] == ["notes.txt"]


def test_the_demo_is_copied_issued_and_shown_where(run, quick_kernel, tmp_path, monkeypatch):
    monkeypatch.setattr("calcsheet.record.pdf._loads", lambda name: False)
    result = run("demo")
    assert result.exit_code == 0, result.output
    assert result.stdout.startswith("Issued, status FOR CHECKING:\n")
    assert "Open the job:  jupyter lab calcsheet-demo/calc.ipynb" in result.stdout.replace("\\", "/")
    assert {p.name for p in (tmp_path / "calcsheet-demo").iterdir()} == {
        "calc.ipynb",
        "issued",
        "job.toml",
        "storeys.csv",
    }


@pytest.fixture
def masses(tmp_path):
    """A workbook of masses under headings of another office."""
    book = openpyxl.Workbook()
    for row in (
        ["Floor", "Seismic mass"],
        ["Roof", 150.5],
        [4, 240],
        [3, 251],
        [2, 252],
        [1, 270],
        [],
        ["Sum", 1163.5],
    ):
        book.active.append(row)
    book.save(tmp_path / "masses.xlsx")
    return tmp_path / "masses.xlsx"


def test_masses_are_imported(run, job_folder, masses):
    folder = job_folder()
    result = run("import", folder, masses, "--map", "Floor=level", "--map", "Seismic mass=mass [t]")
    assert result.exit_code == 0, result.output
    assert result.stdout == ('storeys.csv: mass [t] of 5 levels from masses.xlsx, sheet "Sheet"; 5 cells changed.\n')
    assert result.stderr == 'Note: masses.xlsx, sheet "Sheet", rows 8 to 8: below a blank row, left out.\n'
    assert "Roof,2.95,150.5,88000" in (folder / "storeys.csv").read_text(encoding="utf-8")
    again = run("import", folder, masses)  # the headings are known by now
    assert again.stdout.endswith("; 0 cells changed.\n")


def test_tables_are_exported(run, job_folder, tmp_path):
    folder = job_folder()
    result = run("export", folder, "out.xlsx")
    assert (result.exit_code, result.stdout) == (0, "out.xlsx: sheets storeys.\n")
    assert openpyxl.load_workbook(tmp_path / "out.xlsx")["storeys"]["C2"].value == 141.5
    assert refused(run("export", folder, "out.xlsx")) == "out.xlsx: is there already; name a new file"


@pytest.mark.parametrize(
    ("more", "sentence"),
    [
        (["--map", "Floor"], '--map: got "Floor"; must be like "Seismic mass=mass [t]"'),
        (["--map", "Floor="], '--map: got "Floor="; must be like "Seismic mass=mass [t]"'),
        (["--sheet", "B"], 'masses.xlsx: no sheet "B"; must be one of "Sheet"'),
        ([], 'masses.xlsx, sheet "Sheet": no row with the heading "level" and another that is known in the first 50 rows; '
             "name the file's headings with --map"),
    ],
)  # fmt: skip
def test_an_import_refused_changes_nothing(run, job_folder, masses, more, sentence):
    folder = job_folder()
    before = {path.name: path.read_bytes() for path in folder.iterdir()}
    assert refused(run("import", folder, masses, *more)) == sentence
    assert {path.name: path.read_bytes() for path in folder.iterdir()} == before


def test_a_folder_without_a_job_is_refused(run, masses, tmp_path):
    assert refused(run("import", tmp_path, masses)).startswith("no job.toml in ")
    assert refused(run("export", tmp_path, "out.xlsx")).startswith("no job.toml in ")


# ---- comments, register, tables --------------------------------------------------------------------------------------

QUAY = Path(__file__).parents[1] / "example_notebooks" / "alder-quay"


@pytest.fixture
def quay(tmp_path):
    """A job of the examples with its issued records."""
    return Path(shutil.copytree(QUAY, tmp_path / "quay"))


def test_comments_are_raised_answered_closed_and_listed(run, quay):
    author = tomllib.loads((quay / "job.toml").read_text(encoding="utf-8"))["people"]["prepared"]["name"]
    assert run("comment", quay).stdout.startswith("No comments on revision ")
    asked = run("comment", quay, "Which edition?", "--by", "T. Adeyemi", "--where", "Demand", "--date", "2026-04-02")
    assert asked.exit_code == 0
    assert "Demand, T. Adeyemi, 2026-04-02: Which edition?\n    open\n" in asked.stdout
    assert run("comment", quay, "--reply", 1, "That of 2016", "--by", author, "--date", "2026-04-03").exit_code == 0
    assert f"{author}, who prepared the calculation, may not close" in refused(
        run("comment", quay, "--close", 1, "--by", author)
    )
    assert run("comment", quay, "--close", 1, "--by", "T. Adeyemi", "--date", "2026-04-05").exit_code == 0
    listed = run("comment", quay).stdout.splitlines()
    assert listed[1:] == [f"    reply, {author}, 2026-04-03: That of 2016", "    closed by T. Adeyemi, 2026-04-05"]
    assert refused(run("comment", quay / "none", "x")) == f"no {quay / 'none'}; name a job folder or a record's file"


def test_a_comment_today(run, quay):
    run("comment", quay, "Why?", "--by", "T. Adeyemi")
    with (quay / "comments.csv").open(encoding="utf-8-sig", newline="") as file:
        (row,) = csv.DictReader(file)
    assert abs((dt.date.fromisoformat(row["date"]) - dt.date.today()).days) <= 1  # it may be midnight


def test_the_register_is_rebuilt_and_printed(run, quay):
    (quay / "issued" / "register.csv").unlink(missing_ok=True)
    result = run("register", quay)
    assert result.exit_code == 0
    *rows, written = result.stdout.splitlines()
    assert written == f"Written: {quay / 'issued' / 'register.csv'}"
    with (quay / "issued" / "register.csv").open(encoding="utf-8-sig", newline="") as file:
        assert [line.split(" · ")[0] for line in rows] == [row["revision"] for row in csv.DictReader(file)]
    assert refused(run("register", quay.parent)).startswith("nothing is issued in ")


def test_tables_of_an_issued_record(run, quay):
    folder = quay.parent / "tables"
    result = run("tables", min((quay / "issued").glob("*/*.html")), folder)
    assert result.exit_code == 0, result.stderr
    count = len(list(folder.glob("*.csv"))) - 1
    assert result.stdout == f"{count} tables, listed in {folder / 'index.csv'}.\n"
    assert count > 20
    path = min((quay / "issued").glob("*/*.json"))
    assert refused(run("tables", path, folder)) == f"{folder} is there already and not empty; name a new folder"
