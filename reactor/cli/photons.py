"""The command that shows where the light goes."""

import click

from reactor.cli.common import OVERRIDE, STRICT, emphasis, show


@click.command()
@click.argument("case")
@OVERRIDE
@STRICT
@click.option("--figure", metavar="FILE", help="Draw the figure into a .svg, .png or .pdf file.")
@click.option("--lamp-sheet", is_flag=True, help="Print the lamp data sheet for an enquiry instead.")
@click.option("--json", "as_json", is_flag=True, help="Print the record as one JSON object, SI units.")
def photons(case, overrides, strict, figure, lamp_sheet, as_json):
    """Show where the light of a case goes.

    Prints lamp over gas, absorbed shares by wavelength and gap, best wavelength, ledger, figures of merit of CASE.
    """
    import json

    from reactor.case import load
    from reactor.rating.photonic import photonic
    from reactor.report.photons import lamp_sheet as sheet
    from reactor.report.photons import render

    record = photonic(load(case, overrides, strict))
    if figure:
        from reactor.report.figures.photons import draw

        draw(record, figure)
        click.echo(f"{figure} written", err=True)
    if as_json:
        show(json.dumps(record, indent=1) + "\n")
    else:
        show((sheet if lamp_sheet else render)(record, emphasis()))
