"""The commands for what lies round a case: band, window, frontier."""

import sys

import click

from reactor.cli.common import OVERRIDE, PARTIAL, STRICT, VIOLATED, show
from reactor.cli.study import Watched, crew, drawn, saved, where, workers
from reactor.errors import CaseError


@click.command()
@click.argument("case")
@OVERRIDE
@STRICT
@click.option(
    "--error",
    default="10 %",
    show_default=True,
    metavar="SHARE",
    help="Draw until the standard error of 5, 50 and 95 % is this share of the band.",
)
@click.option("--most", default=1024, show_default=True, help="Points drawn at most.")
@click.option("--seed", default=1, show_default=True, help="Makes the draw repeatable.")
@click.option(
    "--sobol", default=0, metavar="N", help="Sobol indices too, on N base points (ratings: N times 8 or 9)."
)
@click.option(
    "--result", default="chlorine_slip", show_default=True, help="Whose variance the Sobol indices share out."
)
@click.option("--json", "as_json", is_flag=True, help="Print the blocks as one JSON object.")
@click.option("--all", "every", is_flag=True, help="Print every result, not only the main ones.")
@workers()
def band(
    case,
    overrides,
    strict,
    error,
    most,
    seed,
    sobol,
    result,
    as_json,
    every,
    out,
    fresh,
    jobs,
    scheduler,
    budget,
):
    """Say how far results may be off.

    And what the results of CASE hang on. Rate constants, cross-sections, lamp output, heat exchange, wall,
    impurities and meters are drawn together; [uncertainty] in the case sets a spread.

    Exit codes: 0 done; 6 points failed or the error is not reached.
    """
    import json

    from reactor.case import load
    from reactor.report.bands import render
    from reactor.result import NAMES
    from reactor.study import overview
    from reactor.study.band import band as run
    from reactor.units.kinds import FRACTION

    path, loaded = where(out, case, "band"), load(case, overrides, strict)
    if result not in NAMES:
        raise CaseError(f"--result {result}: no such result; the README lists them")
    try:
        wanted = FRACTION.read(error).si
    except ValueError as fault:
        raise CaseError(f"--error {fault}") from None
    with Watched("first round", path) as watched:
        run(
            loaded,
            path,
            error=wanted,
            most=most,
            seed=seed,
            sobol=sobol,
            result=result,
            crew=crew(jobs, scheduler, budget),
            fresh=fresh,
            tell=watched,
            announce=watched.announce,
        )
    found = overview(path)
    blocks = {
        name: found.about[name]
        for name in ("bands", "ranking", "converged", "sobol", "identity")
        if name in found.about
    }
    click.echo(json.dumps(blocks, indent=1) if as_json else render(found.about, every=every), nl=as_json)
    sys.exit(PARTIAL if found.failed or not found.about["converged"]["reached"] else 0)


@click.command()
@click.argument("case")
@OVERRIDE
@STRICT
@click.option(
    "--x",
    required=True,
    metavar="KEY[=RANGE]",
    help='Across: "feed.ratio=5..45"; without a range 1/3 to 3 x the case.',
)
@click.option("--y", required=True, metavar="KEY[=RANGE]", help='Upwards: "lamp.power=0.1..2 kW, log".')
@click.option("--cells", default=6, show_default=True, help="Coarse cells along each axis.")
@click.option("--levels", default=2, show_default=True, help="How often a cell at a boundary is quartered.")
@click.option(
    "--assert", "claims", metavar="CLAIM", multiple=True, help='One more limit: "poly_share_mol<5 %".'
)
@click.option(
    "--contour", "contours", metavar="RESULT=VALUE", multiple=True, help='Draw a line: "chlorine_slip=1 %".'
)
@click.option(
    "--csv", "csv_file", metavar="FILE", help="Write the boundaries and lines as CSV; - is standard output."
)
@click.option("--figure", metavar="FILE", help="Draw the map: .png, .svg or .pdf.")
@workers()
def window(
    case,
    overrides,
    strict,
    x,
    y,
    cells,
    levels,
    claims,
    contours,
    csv_file,
    figure,
    out,
    fresh,
    jobs,
    scheduler,
    budget,
):
    """Map where a case keeps its limits.

    CASE is rated over two inputs; boundaries are refined, forbidden zones named.

    Exit codes: 0 done; 6 points failed.
    """
    from reactor import study
    from reactor.case import load
    from reactor.report.studies import mapped
    from reactor.study import window as map_

    path, loaded = where(out, case, "window"), load(case, overrides, strict)
    place = map_.plane(loaded, x, y, cells, levels)
    cells_ = f"{place.cells[0]} x {place.cells[1]} cells"
    words = f"{cells_} of {place.x.key} and {place.y.key}, then at the boundaries"
    with Watched(words, path) as watched:
        map_.window(
            loaded,
            place,
            path,
            claims=[study.claim(c) for c in claims],
            contours=[study.claim(c) for c in contours],
            crew=crew(jobs, scheduler, budget),
            fresh=fresh,
            tell=watched,
            announce=watched.announce,
        )
    found = study.overview(path)
    if csv_file:
        from reactor.report.export import contour_csv

        saved(csv_file, lambda file: contour_csv(found.about["window"], file))
    if figure:
        from reactor.report.figures.window import draw

        drawn(draw, found, figure)
    if csv_file != "-":
        show(mapped(found, path))
    sys.exit(PARTIAL if found.failed else 0)


@click.command()
@click.argument("case")
@OVERRIDE
@STRICT
@click.option(
    "--vary",
    metavar="KEY=RANGE",
    multiple=True,
    required=True,
    help='What may be chosen: "lamp.power=0.1..2 kW, log".',
)
@click.option(
    "--goal",
    "goals",
    metavar="GOAL",
    multiple=True,
    required=True,
    help='Two or three: "min chlorine_slip", "max hydrogen_chloride_mass", "min lamp.power".',
)
@click.option("--assert", "claims", metavar="CLAIM", multiple=True, help="Points that break it do not count.")
@click.option("--failing", is_flag=True, help="Points with a verdict of FAIL count too.")
@click.option("--points", default=64, show_default=True, help="Points of the first draw.")
@click.option("--rounds", default=2, show_default=True, help="Rounds of half as many beside the front.")
@click.option("--seed", default=1, show_default=True, help="Makes the draw repeatable.")
@workers()
def frontier(
    case,
    overrides,
    strict,
    vary,
    goals,
    claims,
    failing,
    points,
    rounds,
    seed,
    out,
    fresh,
    jobs,
    scheduler,
    budget,
):
    """Show what cannot be bettered.

    The Pareto front of two or three results of CASE, its knee marked.

    Exit codes: 0 done; 1 no point counts; 6 points failed.
    """
    from reactor import study
    from reactor.case import load
    from reactor.report.studies import front
    from reactor.study import frontier as search
    from reactor.study.variation import axis

    path, loaded = where(out, case, "frontier"), load(case, overrides, strict)
    axes = tuple(axis(text, loaded) for text in vary)
    wanted = [search.goal(text, [each.key for each in axes]) for text in goals]
    with Watched(f"{points} drawn, then {rounds} rounds of {points // 2} beside the front", path) as watched:
        search.frontier(
            loaded,
            axes,
            wanted,
            path,
            number=points,
            rounds=rounds,
            seed=seed,
            claims=[study.claim(c) for c in claims],
            failing=failing,
            crew=crew(jobs, scheduler, budget),
            fresh=fresh,
            tell=watched,
            announce=watched.announce,
        )
    found = study.overview(path)
    show(front(found, path))
    sys.exit(VIOLATED if not found.about["frontier"]["points"] else PARTIAL if found.failed else 0)
