"""The commands: what they print, and how they refuse."""

from __future__ import annotations

import json
import tomllib

import nbformat
import pytest
from click.testing import CliRunner

from calcsheet.cli import main
from calcsheet.record import issue as issuing
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
    for command in ([], ["new"], ["issue"], ["demo"]):
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

    monkeypatch.setattr(issuing.tempfile, "mkdtemp", denied)  # a superuser may write anywhere
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
