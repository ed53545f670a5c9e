"""The command that puts a case through its upsets."""

import os

import click

from reactor.cli.common import OVERRIDE, STRICT, emphasis, show, write
from reactor.errors import CaseError


@click.command()
@click.argument("case")
@OVERRIDE
@STRICT
@click.option("--row", "rows", metavar="NO", multiple=True, help="Only this row, like U09; may be repeated.")
@click.option("--json", "as_json", is_flag=True, help="Print the record as one JSON object.")
@click.option("--save", metavar="FILE", help="Save the record as JSON.")
@click.option("--csv", "sheet", metavar="FILE", help="Write the table in the columns of a HAZOP worksheet.")
@click.option("--triangle", metavar="FILE", help="Draw fuel, chlorine, inert gas (.png, .svg); .csv: points.")
def upset(case, overrides, strict, rows, as_json, save, sheet, triangle):
    """Put the reactor of a case file through its upsets.

    One row for each deviation: peak, time to the limit, class met, chlorine released, which trip acts. Above
    them light-off, trip times, runaway criteria lit and dark, sensitivity. Screening values, no hazard study.
    """
    for name in ("OMP_NUM_THREADS", "OPENBLAS_NUM_THREADS"):  # small matrices: more threads only wait
        os.environ.setdefault(name, "1")
    import json

    from reactor.case import load
    from reactor.report.upset import render, worksheet_csv
    from reactor.upsets import upset as run

    record = run(load(case, overrides, strict), set(rows) or None, strict)
    text = json.dumps(record, indent=1, ensure_ascii=False, allow_nan=False) + "\n"
    if save:
        write(save, text)
    if sheet:
        write(sheet, worksheet_csv(record))
    if triangle:
        _draw(record, triangle)
    show(text if as_json else render(record, emphasis()), to_stderr="-" in (save, sheet, triangle))


def _draw(record, path):
    """Write the triangle as a figure, or its points."""
    from reactor.report.upset import triangle_csv

    if path == "-" or path.endswith(".csv"):
        write(path, triangle_csv(record["ternary"]))
        return
    try:
        import matplotlib  # noqa: F401 - asked for here so that its absence is said in words
    except ImportError:
        raise CaseError("a figure needs matplotlib: pip install matplotlib; or write points.csv") from None
    from reactor.report.figures import ternary

    ternary.save(record["ternary"], path, record["title"])
