"""The command `reactor photons`."""

import click


@click.command()
@click.argument("case")
@click.option("--set", "overrides", metavar="KEY=VALUE", multiple=True,
              help='Override one entry of the case, like --set vessel.length="2 m"; may be repeated.')
@click.option("--strict", is_flag=True, help="Refuse every default that the case file does not state.")
@click.option("--figure", metavar="FILE", help="Draw the figure into a .svg, .png or .pdf file.")
@click.option("--lamp-sheet", is_flag=True, help="Print the lamp data sheet for an enquiry instead.")
@click.option("--json", "as_json", is_flag=True, help="Print the record as one JSON object, SI units.")
def photons(case, overrides, strict, figure, lamp_sheet, as_json):
    """Show where the light of a CASE goes: lamp over gas, absorbed shares, ledger, figures of merit."""
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
        click.echo(json.dumps(record, indent=1))
    else:
        click.echo((sheet if lamp_sheet else render)(record), nl=False)
