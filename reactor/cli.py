"""The commands: parse, call one function, print, exit code. No physics here."""

import sys
from pathlib import Path

import click

from reactor.cli_photons import photons
from reactor.errors import CaseError, ConvergenceError, RangeError, ReactorError

OK, VIOLATED, INPUT, NUMERICAL, RANGE, CLOSURE, INTERRUPTED = 0, 1, 2, 3, 4, 5, 130
CODES = ((CaseError, INPUT), (RangeError, RANGE), (ConvergenceError, NUMERICAL), (ReactorError, INPUT))
EPILOG = ("Exit codes: 0 done; 1 a limit is violated (results stand); 2 usage or input; 3 numerical failure; "
          "4 outside the range of the data (with --strict); 5 a balance does not close; 130 interrupted.")


def version():
    """Return the version of the installed program."""
    from importlib.metadata import version as installed

    return installed("photochlorination-reactor")


@click.group(epilog=EPILOG, context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100})
@click.version_option(package_name="photochlorination-reactor", prog_name="reactor")
def cli():
    """Design continuous photochlorination reactors: light, kinetics, heat, distance from the explosive range.

    A scoping calculation for engineers; it never says that a design or a mixture is harmless. Read SAFETY.md.
    """


cli.add_command(photons)

OVERRIDE = click.option("--set", "overrides", metavar="KEY=VALUE", multiple=True,
                        help='Override one entry of the case, like --set vessel.length="2 m"; may be repeated.')
STRICT = click.option("--strict", is_flag=True, help="Refuse every default that the case file does not state.")


@cli.command()
@click.argument("name")
@click.option("--from", "kind", default="methane", show_default=True,
              help="Which start: methane, ethane, propane or tank.")
@click.option("--force", is_flag=True, help="Overwrite a file that exists.")
def new(name, kind, force):
    """Write a commented case file NAME that runs as delivered.

    NAME gets the ending .toml where it has none; - prints to standard output.
    """
    from reactor.case import template

    text = template(kind)
    if name == "-":
        click.echo(text, nl=False)
        return
    path = Path(name if name.endswith(".toml") else f"{name}.toml")
    if path.exists() and not force:
        raise CaseError(f"{path}: exists already; choose another name or add --force")
    _write(path, text)
    click.echo(f"{path} written; rate it with: reactor rate {path}", err=True)


@cli.command()
@click.argument("case")
@OVERRIDE
@STRICT
def check(case, overrides, strict):
    """List what a CASE file says: typed, assumed, taken from the data, wrong."""
    from reactor.case import load
    from reactor.report.listing import listing

    click.echo(listing(load(case, overrides, strict)), nl=False)


@cli.command()
@click.argument("case")
@OVERRIDE
@STRICT
@click.option("--json", "as_json", is_flag=True, help="Print the result as one JSON object (names as in the README).")
@click.option("--save", metavar="FILE", help="Save the result as JSON for later printing and comparison.")
@click.option("--profile", metavar="FILE", help="Write the profile along the tube as CSV, units in the header.")
@click.option("--fail-on", type=click.Choice(["fail", "caution"]), default="fail", show_default=True,
              help="Exit 1 from this verdict on.")
def rate(case, overrides, strict, as_json, save, profile, fail_on):
    """Rate the reactor of a CASE file: conversion, products, light, heat, hazards."""
    from reactor.case import load
    from reactor.rating import rate as run
    from reactor.report.terminal import render

    result = run(load(case, overrides, strict))
    if save:
        _write(Path(save), result.to_json() + "\n")
    if profile:
        from reactor.report.export import profile_csv

        _write(Path(profile), profile_csv(result))
    click.echo(result.to_json() if as_json else render(result, _emphasis()), nl=as_json)
    sys.exit(exit_code(result, strict, fail_on))


@cli.command()
@click.argument("case", required=False)
def sources(case):
    """Print the provenance of every number: all data, or what a CASE relies on."""
    from reactor.report.provenance import all_sources, relied_on

    if case is None:
        click.echo(all_sources(), nl=False)
        return
    from reactor.case import load
    from reactor.rating import cited

    click.echo(relied_on(cited(load(case))), nl=False)


def exit_code(result, strict, fail_on):
    """Return the exit code that a rated result asks for."""
    words = {verdict.name: verdict.word for verdict in result.verdicts}
    if words.get("closures") == "FAIL":
        return CLOSURE
    if strict and "OUT OF DATA RANGE" in words.values():
        return RANGE
    bad = {"fail": ("FAIL",), "caution": ("FAIL", "CAUTION", "OUT OF DATA RANGE")}[fail_on]
    return VIOLATED if any(word in bad for word in words.values()) else OK


def _emphasis():
    """Return what makes text bold on a terminal, and leaves it alone in a pipe or under NO_COLOR."""
    import os

    if sys.stdout.isatty() and not os.environ.get("NO_COLOR"):
        return lambda text: click.style(text, bold=True)
    return str


def _write(path, text):
    """Write a file; - is standard output."""
    if str(path) == "-":
        click.echo(text, nl=False)
        return
    try:
        path.write_text(text, encoding="utf-8", newline="")
    except OSError as error:
        raise CaseError(f"{path}: cannot be written ({error.strerror}); choose another place") from None


def main():
    """Run the command line; print errors without a traceback."""
    for stream in (sys.stdout, sys.stderr):
        stream.reconfigure(errors="replace")
    try:
        cli(standalone_mode=False, prog_name="reactor")
    except ReactorError as error:
        for fault in getattr(error, "faults", [str(error)]):
            click.echo(f"reactor: {fault}", err=True)
        sys.exit(next(code for kind, code in CODES if isinstance(error, kind)))
    except click.exceptions.Abort:
        click.echo("reactor: interrupted", err=True)
        sys.exit(INTERRUPTED)
    except click.ClickException as error:
        error.show()
        sys.exit(INPUT)
    except BrokenPipeError:
        _close_pipe()


def _close_pipe():
    """Leave quietly when the reader of a pipe has gone."""
    import os

    os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
    sys.exit(OK)
