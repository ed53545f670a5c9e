"""What all commands share: exit codes, common options, printing and writing that never loses a message."""

import os
import sys
from pathlib import Path

import click

from reactor.errors import CaseError

OK, VIOLATED, INPUT, NUMERICAL, RANGE, CLOSURE, PARTIAL, INTERRUPTED = 0, 1, 2, 3, 4, 5, 6, 130

OVERRIDE = click.option(
    "--set",
    "overrides",
    metavar="KEY=VALUE",
    multiple=True,
    help='Override one entry of the case, like --set vessel.length="2 m"; may be repeated.',
)
STRICT = click.option(
    "--strict", is_flag=True, help="Refuse every default that the case file does not state."
)
FAIL_ON = click.option(
    "--fail-on",
    type=click.Choice(["fail", "caution"]),
    default="fail",
    show_default=True,
    help="Exit 1 from this verdict on.",
)


def exit_code(result, strict, fail_on):
    """Return the exit code that a rated result asks for."""
    words = {verdict.name: verdict.word for verdict in result.verdicts}
    if words.get("closures") == "FAIL":
        return CLOSURE
    if strict and "OUT OF DATA RANGE" in words.values():
        return RANGE
    bad = {"fail": ("FAIL",), "caution": ("FAIL", "CAUTION", "OUT OF DATA RANGE")}[fail_on]
    return VIOLATED if any(word in bad for word in words.values()) else OK


def emphasis():
    """Return what makes text bold on a terminal, and leaves it alone in a pipe or under NO_COLOR."""
    if sys.stdout.isatty() and not os.environ.get("NO_COLOR"):
        return lambda text: click.style(text, bold=True)
    return str


def write(path, text):
    """Write a file; - is standard output."""
    if str(path) == "-":
        show(text)
        return
    try:
        Path(path).write_text(text, encoding="utf-8", newline="")
    except OSError as error:
        raise CaseError(f"{path}: cannot be written ({error.strerror}); choose another place") from None


def show(text, to_stderr=False):
    """Print, and go on quietly when the reader of the pipe has left: the exit code still stands."""
    stream = sys.stderr if to_stderr else sys.stdout
    try:
        click.echo(text, nl=False, err=to_stderr)
        stream.flush()
    except BrokenPipeError:
        os.dup2(os.open(os.devnull, os.O_WRONLY), stream.fileno())
