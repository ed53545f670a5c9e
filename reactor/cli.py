"""The commands: parse, call one function, print, exit code. No physics here."""

import sys
from pathlib import Path

import click

from reactor.errors import CaseError, ConvergenceError, RangeError, ReactorError

OK, VIOLATED, INPUT, NUMERICAL, RANGE, CLOSURE, INTERRUPTED = 0, 1, 2, 3, 4, 5, 130
CODES = ((CaseError, INPUT), (RangeError, RANGE), (ConvergenceError, NUMERICAL), (ReactorError, INPUT))
EPILOG = (
    "Exit codes: 0 done; 1 a limit is violated (results stand); 2 usage or input; 3 numerical failure; "
    "4 outside the range of the data (with --strict); 5 a balance does not close; 130 interrupted."
)


def version():
    """Return the version of the installed program."""
    from importlib.metadata import version as installed

    return installed("photochlorination-reactor")


@click.group(
    epilog=EPILOG, context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100}
)
@click.version_option(package_name="photochlorination-reactor", prog_name="reactor")
def cli():
    """Design continuous photochlorination reactors: light, kinetics, heat, distance from the explosive range.

    A scoping calculation for engineers; it never says that a design or a mixture is harmless. Read SAFETY.md.
    """


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


@cli.command()
@click.argument("name")
@click.option(
    "--from",
    "kind",
    default="methane",
    show_default=True,
    help="Which start: methane, ethane, propane or tank.",
)
@click.option("--force", is_flag=True, help="Overwrite a file that exists.")
def new(name, kind, force):
    """Write a commented case file to start from.

    It runs as delivered. NAME gets the ending .toml where it has none; - prints to standard output.
    """
    from reactor.case import template

    text = template(kind)
    if name == "-":
        _print(text)
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
    """List what is typed, assumed, wrong.

    CASE is a case file; what is taken from the data is listed too.
    """
    from reactor.case import load
    from reactor.report.listing import listing

    _print(listing(load(case, overrides, strict)))


@cli.command()
@click.argument("case")
@OVERRIDE
@STRICT
@click.option(
    "--json", "as_json", is_flag=True, help="Print the result as one JSON object (names as in the README)."
)
@click.option("--save", metavar="FILE", help="Save the result as JSON for later printing and comparison.")
@click.option(
    "--profile", metavar="FILE", help="Write the profile along the tube as CSV, units in the header."
)
@click.option(
    "--fail-on",
    type=click.Choice(["fail", "caution"]),
    default="fail",
    show_default=True,
    help="Exit 1 from this verdict on.",
)
def rate(case, overrides, strict, as_json, save, profile, fail_on):
    """Rate the reactor of a case file.

    Prints conversion, products, light, heat, hazards and verdicts of CASE. With --save - or --profile - the
    file goes to standard output and the report to standard error.
    """
    from reactor.case import load
    from reactor.rating import rate as run
    from reactor.report.terminal import render

    result = run(load(case, overrides, strict))
    if save:
        _write(Path(save), result.to_json() + "\n")
    if profile:
        from reactor.report.export import profile_csv

        _write(Path(profile), profile_csv(result))
    _print(
        result.to_json() + "\n" if as_json else render(result, _emphasis()), to_stderr="-" in (save, profile)
    )
    sys.exit(exit_code(result, strict, fail_on))


@cli.command()
@click.argument("case", required=False)
def sources(case):
    """Print where the numbers come from.

    Every number with its source and status, the weak ones by name; with CASE what that case relies on.
    """
    from reactor.case import load
    from reactor.rating import cited, shipped
    from reactor.report.provenance import all_sources, relied_on

    _print(all_sources(*shipped()) if case is None else relied_on(*cited(load(case))))


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
        _print(text)
        return
    try:
        path.write_text(text, encoding="utf-8", newline="")
    except OSError as error:
        raise CaseError(f"{path}: cannot be written ({error.strerror}); choose another place") from None


def _print(text, to_stderr=False):
    """Print, and go on quietly when the reader of the pipe has left: the exit code still stands."""
    import os

    stream = sys.stderr if to_stderr else sys.stdout
    try:
        click.echo(text, nl=False, err=to_stderr)
        stream.flush()
    except BrokenPipeError:
        os.dup2(os.open(os.devnull, os.O_WRONLY), stream.fileno())


def main():
    """Run the command line; print errors without a traceback."""
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
