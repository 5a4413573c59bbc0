"""Commands for issued records: check, sign, comment, compare, register, tables."""

from __future__ import annotations

import datetime as dt
import json
import sys
from pathlib import Path

import click

from calcsheet.cli.group import Refusal, main

CHECK_EXAMPLES = """\b
Examples:
  calcsheet check issued/A/S-014-rev-A.pdf
  calcsheet check --json S-014-rev-A.html
"""
SIGN_EXAMPLES = """\b
Examples:
  calcsheet sign issued/A/S-014-rev-A.pdf --role checked --name "T. Adeyemi" --registration "SE 11890" --agree all
  calcsheet sign issued/A/S-014-rev-A-checked.pdf --role approved --name "R. Oduya"
"""
COMMENT_EXAMPLES = """\b
Examples:
  calcsheet comment tower                                   lists the comments
  calcsheet comment tower "Which edition?" --by "T. Adeyemi" --where "Design demand"
  calcsheet comment tower --reply 1 "That of 2016." --by "R. Oduya"
  calcsheet comment S-014-rev-A.pdf --close 1 --by "T. Adeyemi"
  calcsheet comment tower --bring comments.csv
"""
COMPARE_EXAMPLES = """\b
Examples:
  calcsheet compare issued/A/S-014-rev-A.html issued/B/S-014-rev-B.pdf
  calcsheet compare tower A B
"""


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
        raise Refusal(f"no {place}; name a job folder or a record's file")
    day = (date.date() if date else dt.date.today()).isoformat()
    for line in done(place, text, by=by, where=where, reply=reply, close=close, bring=bring, date=day):
        click.echo(line)


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
        raise Refusal(f"no file {record}; name a record: its HTML, PDF or JSON")
    return record
