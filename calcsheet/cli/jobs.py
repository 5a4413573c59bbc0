"""Commands for a job folder: new, import, export, issue, answer, demo."""

from __future__ import annotations

import datetime as dt
import shutil
import sys
from pathlib import Path
from typing import TYPE_CHECKING

import click

from calcsheet.cli.group import Refusal, main
from calcsheet.resources import DEMO, TEMPLATES, templates
from calcsheet.resources import folder as shipped

if TYPE_CHECKING:
    from calcsheet.record.page import Paper

INPUTS = ("job.toml", "*.csv", "calc.ipynb")
"""What a job starts from; records are made, not copied."""
ISSUE_EXAMPLES = """\b
Examples:
  calcsheet issue tower
  calcsheet issue tower --to html
  calcsheet issue tower --to csv  as without it, with every table as CSV besides
  calcsheet issue tower --to pdf --paper letter
"""
IMPORT_EXAMPLES = """\b
Examples:
  calcsheet import tower masses.xlsx
  calcsheet import tower masses.xlsx --sheet Masses --map "Seismic mass=mass [t]"
  calcsheet import tower areas.csv --table floors
"""
ANSWER_EXAMPLES = """\b
Examples:
  calcsheet answer tower
  calcsheet answer tower local-mode-x-6 --text "Plant room: see calculation 12." --by "A. Writer"
"""


@main.command(epilog="\b\nExamples:\n  calcsheet new tower\n  calcsheet new tower --template planar\n")
@click.argument("folder", type=click.Path(path_type=Path))
@click.option("--template", default="planar", show_default=True, help="Template of the notebook.")
def new(folder: Path, template: str) -> None:
    """Make a job folder FOLDER: job card, storey table, notebook."""
    if template not in templates():
        raise Refusal(f'no template "{template}"; must be {" or ".join(templates())}')
    _copied(shipped(TEMPLATES) / template, folder)
    click.echo(f"{folder} is ready: {', '.join(sorted(path.name for path in folder.iterdir()))}.")
    click.echo(f"Open it:   jupyter lab {folder / 'calc.ipynb'}")
    click.echo('           (without JupyterLab: python -m pip install "jupyterlab>=4" first)')
    click.echo(f"Issue it:  calcsheet issue {folder}")


@main.command("import", epilog=IMPORT_EXAMPLES)
@click.argument("folder", type=click.Path(path_type=Path))
@click.argument("file", type=click.Path(path_type=Path))
@click.option("--table", type=click.Choice(["storeys", "floors"]), default="storeys", show_default=True, help="Table.")
@click.option("--sheet", default="", help="Sheet of FILE; its only table of levels where omitted.")
@click.option("--map", "maps", multiple=True, metavar="THEIRS=OURS", help="A heading of FILE in this program's words.")
@click.option("--replace", "take_whole", is_flag=True, help="Take the sheet as the whole table.")
def import_(folder: Path, file: Path, table: str, sheet: str, maps: tuple[str, ...], take_whole: bool) -> None:
    """Bring the levels of FILE (.xlsx or .csv) into a table of job FOLDER.

    Columns are set level by level, other columns are kept. Headings given with --map are kept in job.toml, for the next
    time.
    """
    from calcsheet.job.exchange import import_file
    from calcsheet.job.folder import JobFolder

    mapping = {}
    for pair in maps:
        theirs, equals, ours = pair.rpartition("=")
        if not (theirs.strip() and equals and ours.strip()):
            raise Refusal(f'--map: got "{pair}"; must be like "Seismic mass=mass [t]"')
        mapping[" ".join(theirs.split())] = ours.strip()
    done = import_file(JobFolder(folder), file, table=table, sheet=sheet, mapping=mapping, take_whole=take_whole)
    cells = f"{done.changed} cell{'' if done.changed == 1 else 's'} changed"
    click.echo(f"{done.table}: {', '.join(done.columns)} of {done.levels} levels from {done.place}; {cells}.")
    for notice in done.notices:
        click.echo(f"Note: {notice}.", err=True)


@main.command(epilog="\b\nExamples:\n  calcsheet export tower tower.xlsx\n")
@click.argument("folder", type=click.Path(path_type=Path))
@click.argument("file", type=click.Path(path_type=Path))
def export(folder: Path, file: Path) -> None:
    """Write the tables of job FOLDER to a new FILE.xlsx, a sheet each: units in the headings, numbers as numbers."""
    from calcsheet.job.exchange import export_file
    from calcsheet.job.folder import JobFolder

    click.echo(f"{file}: sheets {', '.join(export_file(JobFolder(folder), file))}.")


@main.command(epilog=ISSUE_EXAMPLES)
@click.argument("folder", type=click.Path(path_type=Path))
@click.option(
    "--to",
    "to",
    type=click.Choice(["html", "pdf", "csv"]),
    multiple=True,
    help="Kind wanted, more than once for more; html and pdf where neither is named. csv adds every table as CSV.",
)
@click.option("--paper", type=click.Choice(["a4", "letter"]), default="a4", show_default=True, help="Paper size.")
def issue(folder: Path, to: tuple[str, ...], paper: Paper) -> None:
    """Execute the notebook of job FOLDER in a fresh kernel and issue its record under FOLDER/issued/."""
    if folder.is_file():
        raise Refusal(f"{folder} is a file; name the job folder")
    if not folder.is_dir():
        raise Refusal(f"no folder {folder}; `calcsheet new {folder}` makes one")
    _issued(folder, to or None, paper)


@main.command(epilog=ANSWER_EXAMPLES)
@click.argument("folder", type=click.Path(path_type=Path))
@click.argument("key", required=False)
@click.option("--text", help="The answer.")
@click.option("--by", help="Whose answer it is.")
@click.option("--date", type=click.DateTime(["%Y-%m-%d"]), help="Day of the answer; today where omitted.")
@click.option("--again", is_flag=True, help="The words may be those of an answer that has lapsed.")
def answer(
    folder: Path, key: str | None, text: str | None, by: str | None, date: dt.datetime | None, again: bool
) -> None:
    """Answer caution KEY of job FOLDER in its job.toml; list the cautions that ask for an answer where KEY is omitted."""
    from calcsheet.record import answering

    if key is None:
        if text or by:
            raise Refusal("an answer needs the key of its caution; `calcsheet answer FOLDER` lists them")
        found = answering.asked(folder)
        for one in found:
            click.echo(f"{one.key} ({one.said}), finding {one.finding}\n  {one.plain}")
        if not found:
            click.echo("No caution asks for an answer.")
        for notice in answering.unasked(folder):
            click.echo(f"Note: {notice}.", err=True)
        return
    if text is None or by is None:
        raise Refusal("an answer needs --text and --by")
    done = answering.answer(folder, key, text, by, date.date() if date else None, again)
    click.echo(f"{done.key}: {done.state}, finding {done.finding}\n  {done.plain}")


@main.command(epilog="\b\nExamples:\n  calcsheet demo\n  calcsheet demo look-here\n")
@click.argument("folder", type=click.Path(path_type=Path), default=Path("calcsheet-demo"))
def demo(folder: Path) -> None:
    """Copy the demonstration job to FOLDER (calcsheet-demo where omitted) and issue its record."""
    _copied(shipped(DEMO), folder)
    _issued(folder, None, "a4")
    click.echo(f"Open the job:  jupyter lab {folder / 'calc.ipynb'}")


def _copied(source: Path, folder: Path) -> None:
    if folder.exists() and (not folder.is_dir() or any(folder.iterdir())):
        raise Refusal(f"{folder} is there already and not empty; name a new folder")
    folder.mkdir(parents=True, exist_ok=True)
    for pattern in INPUTS:
        for path in sorted(source.glob(pattern)):
            shutil.copyfile(path, folder / path.name)


def _issued(folder: Path, to: tuple[str, ...] | None, paper: Paper) -> None:
    from rich.progress import BarColumn, MofNCompleteColumn, Progress, TextColumn

    from calcsheet.record.issue import issue as issue_record
    from calcsheet.record.status import UNANSWERED

    # the number of cells isn't known until the first one runs
    columns = (TextColumn("executing"), BarColumn(30), TextColumn("cell"), MofNCompleteColumn(" of "))
    with Progress(*columns, transient=True, disable=not sys.stderr.isatty()) as bar:
        task = bar.add_task("cells", total=None)
        done = issue_record(
            folder,
            to=to,
            paper=paper,
            progress=lambda cell, cells: bar.update(task, completed=cell, total=cells),
        )
    because = f", because of {'; '.join(done.reasons)}" if done.reasons else ""
    click.echo(f"Issued, status {done.status}{because}:")
    for path in done.files:
        click.echo(f"  {path}")
    if any(reason.startswith(UNANSWERED) for reason in done.reasons):
        click.echo(f"Cautions wait for an answer: `calcsheet answer {folder}` lists them.")
    if done.note:
        click.echo(f"Note: {done.note}.", err=True)
