"""The group that all commands join, and how they refuse."""

from __future__ import annotations

from typing import Any

import click

from calcsheet import __version__

EXAMPLES = """\b
Examples:
  calcsheet new tower             a job folder from the planar template
  calcsheet issue tower           execute its notebook and issue the record
  calcsheet check RECORD          hold an issued record against itself
  calcsheet demo                  copy the demonstration job and issue it
"""


class Refusal(click.ClickException):
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
            raise misused(error) from None

    def invoke(self, ctx: click.Context) -> Any:
        from calcsheet.errors import REFUSALS

        try:
            return super().invoke(ctx)
        except click.UsageError as error:
            raise misused(error) from None
        except REFUSALS as error:
            raise Refusal(" ".join(str(error).split())) from None
        except OSError as error:
            raise Refusal(f"{error.strerror or error}: {error.filename}" if error.filename else str(error)) from None


def misused(error: click.UsageError) -> Refusal:
    command = error.ctx.command_path if error.ctx else "calcsheet"
    return Refusal(f"{error.format_message().rstrip('.?')}; `{command} --help` shows how it is used")


@click.group(cls=_Group, epilog=EXAMPLES, context_settings={"help_option_names": ["-h", "--help"]})
@click.version_option(__version__, prog_name="calcsheet")
def main() -> None:
    """How a multi-storey building moves sideways: calculated in a notebook, issued as a record that can be checked."""
