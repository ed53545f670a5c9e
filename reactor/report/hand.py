"""The hand box: rules of a pocket calculator beside the full model."""

from reactor.report.numbers import figure
from reactor.report.terminal import paragraph, section


def render(lines, emphasis=str):
    """
    Return the hand box as text; ratios outside 0.5 to 2 are marked.

    Parameters
    ----------
    lines : sequence of reactor.rating.hand.Line
        From `hand(case, result)`. [-]
    emphasis : callable
        Wraps what is marked, for a terminal. [-]
    """
    rows = [f"{'rule':<24}{'by hand':>12}{'full model':>12}{'ratio':>8}"]
    for one in lines:
        ratio = "-" if one.ratio is None else f"{one.ratio:.2f}"
        unit = "" if one.unit == "1" else f" {one.unit}"
        row = f"{one.name:<24}{figure(one.hand, 3):>12}{figure(one.model, 3):>12}{ratio:>8}{unit}"
        rows.append(emphasis(f"{row}   <- OUTSIDE 0.5 TO 2") if one.marked else row)
        rows.append(paragraph(one.formula + (f" ({one.note})" if one.note else ""), "    "))
    rows += [
        "",
        paragraph("The constants are remembered ones, not those of the model. Ratio = full model over hand."),
    ]
    return section(
        "BY HAND", rows if lines else ["no rule fits: the feed has no methane, ethane or propane"], emphasis
    )
