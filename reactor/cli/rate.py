"""The command that rates a case."""

import sys

import click

from reactor.cli.common import FAIL_ON, OK, OVERRIDE, STRICT, VIOLATED, emphasis, exit_code, show, write


@click.command()
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
    "--hand", "by_hand", is_flag=True, help="Print pocket-calculator estimates beside the full model."
)
@FAIL_ON
@click.option(
    "--assert", "claims", metavar="CLAIM", multiple=True, help='Exit 1 where it breaks: "chlorine_slip<2 %".'
)
def rate(case, overrides, strict, as_json, save, profile, by_hand, fail_on, claims):
    """Rate the reactor of a case file.

    Prints conversion, products, light, heat, hazards and verdicts of CASE. With --save - or --profile - the
    file goes to standard output and the report to standard error.
    """
    from reactor.case import load
    from reactor.rating import rate as run
    from reactor.report.terminal import render

    broken_by = asserted(claims)
    loaded = load(case, overrides, strict)
    if loaded.recycle is not None:
        from reactor.sizing.loop import closed

        loaded = closed(loaded)
    result = run(loaded)
    if save:
        write(save, result.to_json() + "\n")
    if profile:
        from reactor.report.export import profile_csv

        write(profile, profile_csv(result))
    page = result.to_json() + "\n" if as_json else render(result, emphasis())
    if by_hand and not as_json:
        from reactor.rating.hand import hand
        from reactor.report.hand import render as box

        page += box(hand(loaded, result), emphasis())
    show(page, to_stderr="-" in (save, profile))
    broken = broken_by(result.results)
    show("".join(f"does not hold: {text}\n" for text in broken), to_stderr=True)
    sys.exit(exit_code(result, strict, fail_on) or (VIOLATED if broken else OK))


def asserted(texts):
    """Return a function: results -> the claims they break. What makes no sense is refused now."""
    if not texts:
        return lambda results: []
    from reactor.study import broken, claim

    claims = [claim(text) for text in texts]
    return lambda results: [each.text for each in broken(claims, results)]
