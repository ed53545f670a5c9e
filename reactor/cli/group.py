"""
The commands: parse, call one function, print, exit code. No physics here.

Each command is a function of its own name in one of the modules beside this one, loaded when it is called for.
"""

import difflib
import importlib
import os
import sys

import click

from reactor.cli.common import INPUT, INTERRUPTED, NUMERICAL, RANGE
from reactor.errors import CaseError, ConvergenceError, RangeError, ReactorError

CODES = ((CaseError, INPUT), (RangeError, RANGE), (ConvergenceError, NUMERICAL), (ReactorError, INPUT))
MODULES = {
    "new": "start",
    "check": "start",
    "rate": "rate",
    "photons": "photons",
    "size": "size",
    "sweep": "study",
    "band": "maps",
    "window": "maps",
    "frontier": "maps",
    "upset": "upset",
    "rerun": "study",
    "merge": "study",
    "slate": "slate",
    "sources": "start",
}  # command -> module
EPILOG = (
    "Exit codes: 0 done; 1 a limit is violated (results stand); 2 usage or input; 3 numerical failure; "
    "4 outside the range of the data (with --strict); 5 a balance does not close; 6 a partial study; 130 interrupted."
)


class Commands(click.Group):
    """A group that imports a command's module when the command is wanted."""

    def list_commands(self, ctx):
        """Return the names in the order in which a case is worked."""
        return list(MODULES)

    def get_command(self, ctx, name):
        """Return one command, or None."""
        if name not in MODULES:
            return None
        return getattr(importlib.import_module(f"reactor.cli.{MODULES[name]}"), name)

    def resolve_command(self, ctx, args):
        """Return the command that the words name; a misspelt one is answered with the nearest."""
        near = difflib.get_close_matches(args[0], MODULES, n=1, cutoff=0.5)
        if args[0] not in MODULES and near and not args[0].startswith("-"):
            raise click.UsageError(f"No such command {args[0]!r}. Did you mean {near[0]!r}?", ctx)
        return super().resolve_command(ctx, args)


@click.group(
    cls=Commands,
    epilog=EPILOG,
    context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100},
)
@click.version_option(package_name="photochlorination-reactor", prog_name="reactor")
def cli():
    """Design continuous photochlorination reactors: light, kinetics, heat, distance from the explosive range.

    A scoping calculation for engineers; it never says that a design or a mixture is harmless. Read SAFETY.md.
    """


def main():
    """Run the command line; print errors without a traceback."""
    os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")  # before numpy: its threads only get in the way of small sums
    for stream in (sys.stdout, sys.stderr):  # a title that the terminal cannot show becomes ?
        if hasattr(stream, "reconfigure"):
            stream.reconfigure(errors="replace")
    try:
        cli(standalone_mode=False, prog_name="reactor")
    except ReactorError as error:
        for fault in getattr(error, "faults", [str(error)]):
            click.echo(f"reactor: {fault}", err=True)
        sys.exit(next(code for kind, code in CODES if isinstance(error, kind)))
    except (click.exceptions.Abort, KeyboardInterrupt):
        click.echo("reactor: interrupted", err=True)
        sys.exit(INTERRUPTED)
    except click.ClickException as error:
        text = error.format_message()
        click.echo(text if text.startswith("Usage:") else f"reactor: {text} Help: reactor --help", err=True)
        sys.exit(INPUT)
    except Exception as error:
        click.echo(
            f"reactor: a fault of the program, not of the case: {type(error).__name__}: {error}; report "
            "it with the case file",
            err=True,
        )
        sys.exit(NUMERICAL)
