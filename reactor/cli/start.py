"""Commands around a case before it is rated: new, check, sources."""

from pathlib import Path

import click

from reactor.cli.common import OVERRIDE, STRICT, show, write
from reactor.errors import CaseError


@click.command()
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
        show(text)
        return
    path = Path(name if name.endswith(".toml") else f"{name}.toml")
    if path.exists() and not force:
        raise CaseError(f"{path}: exists already; choose another name or add --force")
    write(path, text)
    click.echo(f"{path} written; rate it with: reactor rate {path}", err=True)


@click.command()
@click.argument("case")
@OVERRIDE
@STRICT
def check(case, overrides, strict):
    """List what is typed, assumed, wrong.

    CASE is a case file; what is taken from the data is listed too.
    """
    from reactor.case import load
    from reactor.report.listing import listing

    show(listing(load(case, overrides, strict)))


@click.command()
@click.argument("case", required=False)
def sources(case):
    """Print where the numbers come from.

    Every number with its source and status, the weak ones by name; with CASE what that case relies on.
    """
    from reactor.case import load
    from reactor.rating import cited, shipped
    from reactor.report.provenance import all_sources, relied_on

    show(all_sources(*shipped()) if case is None else relied_on(*cited(load(case))))
