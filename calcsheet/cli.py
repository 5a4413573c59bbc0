"""The command line: new, import, export, issue, demo."""

from __future__ import annotations

import datetime as dt
import json
import shutil
import sys
from pathlib import Path
from typing import TYPE_CHECKING, Any

import click

from calcsheet import __version__
from calcsheet.resources import DEMO, TEMPLATES, templates
from calcsheet.resources import folder as shipped

if TYPE_CHECKING:
    from calcsheet.record.page import Paper

INPUTS = ("job.toml", "*.csv", "calc.ipynb")
"""What a job starts from; records are made, not copied."""

EXAMPLES = """\b
Examples:
  calcsheet new tower             a job folder from the planar template
  calcsheet issue tower           execute its notebook and issue the record
  calcsheet demo                  copy the demonstration job and issue it
"""


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


CHECK_EXAMPLES = """\b
Examples:
  calcsheet check issued/A/S-014-rev-A.pdf
  calcsheet check --json S-014-rev-A.html
"""


COMMENT_EXAMPLES = """\b
Examples:
  calcsheet comment tower                                   lists the comments
  calcsheet comment tower "Which edition?" --by "T. Adeyemi" --where "Design demand"
  calcsheet comment tower --reply 1 "That of 2016." --by "R. Oduya"
  calcsheet comment S-014-rev-A.pdf --close 1 --by "T. Adeyemi"
  calcsheet comment tower --bring comments.csv
"""


SIGN_EXAMPLES = """\b
Examples:
  calcsheet sign issued/A/S-014-rev-A.pdf --role checked --name "T. Adeyemi" --registration "SE 11890" --agree all
  calcsheet sign issued/A/S-014-rev-A-checked.pdf --role approved --name "R. Oduya"
"""


COMPARE_EXAMPLES = """\b
Examples:
  calcsheet compare issued/A/S-014-rev-A.html issued/B/S-014-rev-B.pdf
  calcsheet compare tower A B
"""


class _Refusal(click.ClickException):
    """One sentence on stderr, exit code 2."""

    exit_code = 2

    def show(self, file: Any = None) -> None:
        click.echo(f"calcsheet: {self.message}", err=True)


class _Group(click.Group):
    """Commands whose errors are one sentence: no traceback, whatever the engineer's files hold."""

    def parse_args(self, ctx: click.Context, args: list[str]) -> list[str]:
        try:
            return super().parse_args(ctx, args)
        except click.NoSuchOption as error:
            raise _misused(error) from None

    def invoke(self, ctx: click.Context) -> Any:
        from calcsheet.errors import REFUSALS

        try:
            return super().invoke(ctx)
        except click.UsageError as error:
            raise _misused(error) from None
        except REFUSALS as error:
            raise _Refusal(" ".join(str(error).split())) from None
        except OSError as error:
            raise _Refusal(f"{error.strerror or error}: {error.filename}" if error.filename else str(error)) from None


def _misused(error: click.UsageError) -> _Refusal:
    command = error.ctx.command_path if error.ctx else "calcsheet"
    return _Refusal(f"{error.format_message().rstrip('.?')}; `{command} --help` shows how it is used")


@click.group(cls=_Group, epilog=EXAMPLES, context_settings={"help_option_names": ["-h", "--help"]})
@click.version_option(__version__, prog_name="calcsheet")
def main() -> None:
    """How a multi-storey building moves sideways: calculated in a notebook, issued as a record that can be checked."""


@main.command(epilog="\b\nExamples:\n  calcsheet new tower\n  calcsheet new tower --template planar\n")
@click.argument("folder", type=click.Path(path_type=Path))
@click.option("--template", default="planar", show_default=True, help="Template of the notebook.")
def new(folder: Path, template: str) -> None:
    """Make a job folder FOLDER: job card, storey table, notebook."""
    if template not in templates():
        raise _Refusal(f'no template "{template}"; must be {" or ".join(templates())}')
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
            raise _Refusal(f'--map: got "{pair}"; must be like "Seismic mass=mass [t]"')
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
        raise _Refusal(f"{folder} is a file; name the job folder")
    if not folder.is_dir():
        raise _Refusal(f"no folder {folder}; `calcsheet new {folder}` makes one")
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
            raise _Refusal("an answer needs the key of its caution; `calcsheet answer FOLDER` lists them")
        found = answering.asked(folder)
        for one in found:
            click.echo(f"{one.key} ({one.said}), finding {one.finding}\n  {one.plain}")
        if not found:
            click.echo("No caution asks for an answer.")
        return
    if text is None or by is None:
        raise _Refusal("an answer needs --text and --by")
    done = answering.answer(folder, key, text, by, date.date() if date else None, again)
    click.echo(f"{done.key}: {done.state}, finding {done.finding}\n  {done.plain}")


@main.command(epilog=CHECK_EXAMPLES)
@click.argument("record", type=click.Path(path_type=Path))
@click.option("--json", "as_json", is_flag=True, help="The report as JSON.")
def check(record: Path, as_json: bool) -> None:
    """Check RECORD against itself: fingerprints, print, every step run again, a second route, signatures.

    Nothing but the file is needed: its HTML, PDF or JSON. Exit code 0 where nothing differs, 1 where something does, 2 where
    the file can't be read as a record.
    """
    from calcsheet.record.check.report import checked

    report = checked(_file(record))
    click.echo(json.dumps(report.as_json(), ensure_ascii=False, indent=1) if as_json else report.words())
    sys.exit(report.exit_code)


@main.command(epilog=SIGN_EXAMPLES)
@click.argument("record", type=click.Path(path_type=Path))
@click.option(
    "--role", type=click.Choice(["prepared", "checked", "approved"]), required=True, help="What is answered for."
)
@click.option("--name", required=True, help="The signer's name.")
@click.option("--initials", default="", help="As they stand at the foot of each page; from the name where omitted.")
@click.option("--qualification", default="", help="Professional qualification.")
@click.option("--registration", default="", help="Registration or licence number.")
@click.option("--date", type=click.DateTime(["%Y-%m-%d"]), help="Day of signing; today where omitted.")
@click.option("--scope", default="", help="What was checked, and how.")
@click.option("--remark", default="", help="Anything else to be said.")
@click.option("--agree", multiple=True, help='Key of an answered caution that the checker agrees to; "all" for all.')
def sign(record: Path, date: dt.datetime | None, agree: tuple[str, ...], **who: str) -> None:
    """Sign RECORD: a new file beside it, one signature more. Signatures are declared, not cryptographic."""
    from calcsheet.record.sign import sign as sign_record

    done = sign_record(_file(record), **who, date=date.date() if date else None, agree=agree)
    click.echo(f"Signed, status {done.status}:")
    for path in done.files:
        click.echo(f"  {path}")
    if done.note:
        click.echo(f"Note: {done.note}.", err=True)


@main.command(epilog="\b\nExamples:\n  calcsheet demo\n  calcsheet demo look-here\n")
@click.argument("folder", type=click.Path(path_type=Path), default=Path("calcsheet-demo"))
def demo(folder: Path) -> None:
    """Copy the demonstration job to FOLDER (calcsheet-demo where omitted) and issue its record."""
    _copied(shipped(DEMO), folder)
    _issued(folder, None, "a4")
    click.echo(f"Open the job:  jupyter lab {folder / 'calc.ipynb'}")


@main.command(epilog=COMPARE_EXAMPLES)
@click.argument("places", nargs=-1, metavar="RECORD RECORD | FOLDER REVISION REVISION")
@click.option("--json", "as_data", is_flag=True, help="Print plain JSON for another program.")
def compare(places: tuple[str, ...], as_data: bool) -> None:
    """What changed between two records: conclusions that flipped, headline results, inputs.

    The exit code is 0 where nothing changed, 1 where something did, 2 where a record can't be read.
    """
    from calcsheet.record.comparison import comparison

    found = comparison(places)
    click.echo(json.dumps(found.data, ensure_ascii=False, indent=1) if as_data else found.text)
    if not found.changes.same:
        sys.exit(1)


@main.command(epilog=COMMENT_EXAMPLES)
@click.argument("place", type=click.Path(path_type=Path))
@click.argument("text", default="")
@click.option("--by", default="", help="Who comments, replies or closes.")
@click.option("--where", default="", help="Place in the record that is commented on.")
@click.option("--reply", type=int, help="Number of the comment that TEXT replies to.")
@click.option("--close", type=int, help="Number of the comment to close.")
@click.option("--bring", type=click.Path(path_type=Path), help="Bring in the comments of this file.")
@click.option("--date", type=click.DateTime(["%Y-%m-%d"]), help="Day; today where omitted.")
def comment(
    place: Path,
    text: str,
    by: str,
    where: str,
    reply: int | None,
    close: int | None,
    bring: Path | None,
    date: dt.datetime | None,
) -> None:
    """Comment on PLACE with TEXT, reply, or close; without TEXT the comments are listed.

    PLACE is a job folder or a record's file. Comments on a record away from its job are kept beside it, in comments.csv,
    which --bring takes into the job's.
    """
    from calcsheet.record.commenting import done

    if not place.exists():
        raise _Refusal(f"no {place}; name a job folder or a record's file")
    day = (date.date() if date else dt.date.today()).isoformat()
    for line in done(place, text, by=by, where=where, reply=reply, close=close, bring=bring, date=day):
        click.echo(line)


@main.command(epilog="\b\nExamples:\n  calcsheet register tower\n")
@click.argument("folder", type=click.Path(path_type=Path))
def register(folder: Path) -> None:
    """Write FOLDER/issued/register.csv anew from the issued records, and print it."""
    from calcsheet.record.register import lines, rebuilt

    path = rebuilt(folder)
    for line in lines(folder):
        click.echo(line)
    click.echo(f"Written: {path}")


@main.command(epilog="\b\nExamples:\n  calcsheet tables issued/A/S-014-rev-A.pdf tables-of-a\n")
@click.argument("record", type=click.Path(path_type=Path))
@click.argument("folder", type=click.Path(path_type=Path))
def tables(record: Path, folder: Path) -> None:
    """Write every table of RECORD (its HTML, PDF or JSON) as CSV into FOLDER, with index.csv that lists them."""
    from calcsheet.record.files import html_of
    from calcsheet.record.opened import opened
    from calcsheet.record.tables import write_tables

    data = opened(_file(record))
    files = write_tables(html_of(data), data, folder)
    click.echo(f"{len(files) - 1} tables, listed in {folder / 'index.csv'}.")


def _file(record: Path) -> Path:
    if not record.is_file():
        raise _Refusal(f"no file {record}; name a record: its HTML, PDF or JSON")
    return record


def _copied(source: Path, folder: Path) -> None:
    if folder.exists() and (not folder.is_dir() or any(folder.iterdir())):
        raise _Refusal(f"{folder} is there already and not empty; name a new folder")
    folder.mkdir(parents=True, exist_ok=True)
    for pattern in INPUTS:
        for path in sorted(source.glob(pattern)):
            shutil.copyfile(path, folder / path.name)


def _issued(folder: Path, to: tuple[str, ...] | None, paper: Paper) -> None:
    from rich.progress import BarColumn, Progress, TextColumn

    from calcsheet.record.issue import issue as issue_record

    columns = (TextColumn("executing"), BarColumn(30), TextColumn("cell {task.completed:.0f} of {task.total:.0f}"))
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
    if done.note:
        click.echo(f"Note: {done.note}.", err=True)
