"""The command `size`: targets in, equipment out."""

import sys

import click

from reactor.cli.common import OVERRIDE, STRICT, emphasis, show, write
from reactor.errors import CaseError

WORDS = "light tubes loads trade stages kinds lamps gaps turndown ageing"


@click.command()
@click.argument("case")
@click.option(
    "--find",
    "find",
    metavar="KEY",
    multiple=True,
    help="An input that may be changed, like vessel.length or lamp.power; may be repeated.",
)
@click.option(
    "--for",
    "wanted",
    metavar="GOAL",
    multiple=True,
    help='What must come out, like "chlorine_slip=1 %"; as many as unknowns.',
)
@click.option(
    "--keep",
    "keeps",
    metavar="GOAL",
    multiple=True,
    help='What must hold, like "temperature_hottest<120 degC"; may be repeated.',
)
@click.option("--between", metavar="LOW..HIGH", help='Range of a single unknown, like "0.5 m..8 m".')
@click.option(
    "--show",
    "parts",
    metavar="WHAT",
    multiple=True,
    help=f"Tables to add: {', '.join(WORDS.split())}, or all; light, tubes and loads always come.",
)
@click.option(
    "--cap",
    metavar="SHARE",
    default="10 %",
    show_default=True,
    help="With stages: mole fraction of chlorine right after an injection.",
)
@click.option("--cool-to", metavar="TEMPERATURE", help="With stages: temperature of the gas before each "
                                                       "injection.")
@click.option("--life", metavar="TIME", help='With ageing: hours until the lamp is at end_of_life, like '
                                             '"8000 h".')
@click.option("--deposit", metavar="SHARE", help='With ageing: light lost to deposit in a week, like "2 %".')
@click.option("--write", "sized_file", metavar="FILE", help="Write the sized case as a new case file.")
@OVERRIDE
@STRICT
@click.option("--json", "as_json", is_flag=True, help="Print the rated result with its block `sizing` "
                                                      "as JSON.")
@click.option("--save", metavar="FILE", help="Save the rated result with its block `sizing` as JSON.")
def size(case, find, wanted, keeps, between, parts, overrides, strict, as_json, save, sized_file, **more):
    """Find inputs for wanted results.

    Prints what has to be built of CASE. Without --for, [targets] of the case says what is wanted and [limits]
    what must hold. Exit code 1: no solution within the range or the constraints; the nearest case is printed
    with what limits it.
    """
    from reactor.case import load
    from reactor.report.sizing import render
    from reactor.sizing import goals, run

    loaded = load(case, overrides, strict)
    options, chosen = _options(more), _parts(parts)
    try:
        result = run(
            loaded,
            find,
            goals.read(wanted, "--for"),
            goals.read(keeps, "--keep"),
            _range(between),
            chosen,
            options,
        )
    except goals.Contradiction as error:
        click.echo(f"reactor: {error}", err=True)
        sys.exit(1)
    if save:
        write(save, result.to_json() + "\n")
    if sized_file:
        write(sized_file, _sized(loaded, result))
    show(result.to_json() + "\n" if as_json else render(result, emphasis()), to_stderr="-" in (save, sized_file))
    sys.exit(0 if result.sizing["found"]["solved"] else 1)


def _parts(parts):
    """Return the tables to print, or say which word is unknown."""
    from reactor.sizing import PARTS, PLAIN

    for part in parts:
        if part not in (*PARTS, "all"):
            raise CaseError(f"--show {part}: unknown; known here: {', '.join(PARTS)}, all")
    return PARTS if "all" in parts else (*PLAIN, *parts)


def _options(texts):
    """Return what the tables need, read with their units."""
    from reactor.sizing import Options
    from reactor.units import kinds

    known = {
        "cap": ("--cap", kinds.FRACTION.within(1e-3, 0.9, '"10 %"')),
        "cool_to": ("--cool-to", kinds.TEMPERATURE),
        "life": ("--life", kinds.TIME),
        "deposit": ("--deposit", kinds.FRACTION.within(0.0, 0.9, '"2 %"')),
    }
    found = {}
    for name, (option, kind) in known.items():
        if texts[name] is not None:
            try:
                found[name] = kind.read(texts[name]).si
            except ValueError as error:
                raise CaseError(f"{option} {error}") from None
    return Options(
        cap=found["cap"],
        between_stages=found.get("cool_to"),
        life=found.get("life"),
        deposit=found.get("deposit"),
    )


def _range(text):
    """Return the two ends of a range, or None."""
    if text is None:
        return None
    low, dots, high = text.partition("..")
    if not dots or not low.strip() or not high.strip():
        raise CaseError(f'--between "{text}": write both ends, like "0.5 m..8 m"')
    return low.strip(), high.strip()


def _sized(case, result):
    """Return the text of the sized case."""
    from reactor.case import changed, dump

    found = result.sizing["found"]
    texts = [f"{key}={value}" for key, value in found["inputs"].items()]
    texts += [f"{key}={found['inputs']['vessel.length']}" for key in found["along"]]
    return dump(changed(case, texts))
