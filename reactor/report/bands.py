"""A band in words: how far each result may be off, and what it hangs on."""

from reactor.report.numbers import figure
from reactor.report.terminal import section

FIRST_FIVE = 5
MAIN = (
    "chlorine_slip",
    "conversion_chlorine",
    "poly_share_mol",
    "poly_share_mass",
    "temperature_hottest",
    "exotherm_margin",
    "mtsr",
    "light_absorbed",
    "chain_length",
    "light_order",
    "residence_time",
    "dew_point_margin",
)


def render(about, emphasis=str, every=False):
    """
    Return the bands and rankings of a study as text.

    Parameters
    ----------
    about : dict
        The facts of a study file that `reactor band` wrote.
    emphasis : callable
        Wraps headings for a terminal.
    every : bool
        All results, not only the main ones.
    """
    bands, ranking, reached = about["bands"], about["ranking"], about["converged"]
    names = [name for name in bands if every or name in MAIN]
    rows = [f"{'result':<27}{'unit':>7}{'nominal':>11}{'5 %':>11}{'50 %':>11}{'95 %':>11}"]
    rows += [
        f"{name:<27}{bands[name]['unit']:>7}"
        + "".join(f"{figure(bands[name][key]):>11}" for key in ("value", "low", "mid", "high"))
        for name in names
    ]
    parts = [
        emphasis(about["title"]) + "\n",
        section("BAND", rows, emphasis),
        section("CONVERGED", _converged(reached), emphasis),
    ]
    rows = []
    for name in names:
        first = [
            row
            for row in ranking.get(name, [])[:FIRST_FIVE]
            if abs(row["rank_correlation"]) > reached["noise"]
        ]
        if name in ranking:
            first = first or [{"rank_correlation": 0.0, "input": "nothing above the noise: raise --most"}]
            rows += [name, *(f"  {row['rank_correlation']:+.2f}  {row['input']}" for row in first)]
    parts.append(section("WHAT IT HANGS ON (rank correlation)", rows, emphasis))
    if "sobol" in about:
        rows = [f"{'input':<46}{'first order':>16}{'total':>16}"]
        rows += [
            f"{s['name'][:45]:<46}{s['first']:>8.2f} +-{s['first_error']:>5.2f}"
            f"{s['total']:>8.2f} +-{s['total_error']:>5.2f}"
            for s in sorted(about["sobol"]["shares"], key=lambda s: -s["total"])
        ]
        parts.append(section(f"SHARE OF THE VARIANCE OF {about['sobol']['result']} (Sobol)", rows, emphasis))
    parts.append(section("VARIED", _varied(about), emphasis))
    return "\n".join(part for part in parts if part)


def _converged(reached):
    word = "reached" if reached["reached"] else "NOT REACHED: raise --most"
    lines = [
        f"{reached['points']} points, {reached['failed']} failed; standard error of 5, 50 and 95 % points "
        f"{100 * reached['error']:.0f} % of the",
        f"width of the band of {reached['result'] or 'every result'} "
        f"(wanted {100 * reached['wanted']:.0f} %: {word})",
        f"a rank correlation below {reached['noise']:.2f} may be chance",
    ]
    return lines


def _varied(about):
    """Say what was varied by how much, rate constants together."""
    kinds = about["settings"]["inputs"]
    rates = [each for each in kinds if each[1] == "rate"]
    rows = (
        [f"{len(rates)} rate constants, log-normal, f(298) and g as one standard deviation"] if rates else []
    )
    return rows + [
        f"{name:<32} x {up:.3g} up, x {down:.3g} down at one standard deviation ({status})"
        for name, kind, _, up, down, _, status in kinds
        if kind != "rate"
    ]
