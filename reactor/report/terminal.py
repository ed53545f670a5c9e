"""The report in plain text, block by block, from a fresh or a saved result."""

from reactor.report.accounts import band, heat, is_tank, light, mixtures, states, streams
from reactor.report.layout import entry, line, paragraph, section
from reactor.report.numbers import figure, in_unit, percent

GRAVE = ("FAIL", "CAUTION", "OUT OF DATA RANGE")
VERDICT = 18  # columns that the word of a verdict takes
TRACE = 1e-5  # products below this share of the mass formed are listed as traces
SECTIONS = (
    "case",
    "feed",
    "inject",
    "vessel",
    "lamp",
    "sleeve",
    "cooling",
    "chemistry",
    "limits",
    "meters",
    "solver",
)
IN_TITLE = ("case.title", "case.revision", "case.date")
LIMIT = {"atoms": "limit 1e-9", "enthalpy": "limit 1e-6", "photons": "limit 1e-6"}


def render(result, emphasis=str):
    """
    Return the report of a result as text.

    Parameters
    ----------
    result : Result
        A rated case, fresh or saved.
    emphasis : callable
        Wraps headings and grave verdicts for a terminal; leave it for plain text.

    Returns
    -------
    text : str
    """
    first = (title, verdicts, key_results, products, light, heat, mixtures, states, streams)
    last = (closures, design_basis, remarks, cautions, provenance)
    parts = [block(result, emphasis) for block in first + last]
    return "\n".join(part for part in parts if part) + "\n"


def title(result, emphasis):
    """Name the case and say what kind of paper this is."""
    head = [
        emphasis(paragraph(result.title)),
        paragraph(f"revision {result.revision}, date {result.date or 'not given'}"),
        "PRELIMINARY - scoping calculation, not for construction or operation",
    ]
    head += [
        paragraph(f"changed on the command line: {d['key']} = {d['new']} (file: {d['old']})", "", "    ")
        for d in result.deviations
    ]
    return "\n".join([*head, ""])


def verdicts(result, emphasis):
    """Give every judgement in words, with the figure that it rests on and the limit."""
    rows = []
    for v in result.verdicts:
        text = ": ".join(part for part in (v.name, v.figure) if part) + (
            f" (limit {v.limit})" if v.limit else ""
        )
        row = paragraph(text, " " * VERDICT)
        word = emphasis(v.word) if v.word in GRAVE else v.word
        rows.append(word + " " * (VERDICT - len(v.word)) + row[VERDICT:])
        rows += [paragraph(v.why, " " * VERDICT)] if v.why else []
    return section("VERDICTS", rows, emphasis)


def key_results(result, emphasis):
    """Give the numbers a reviewer asks for first."""
    r, tank = result.results, is_tank(result)
    rows = [line("conversion of chlorine", percent(r["conversion_chlorine"]))]
    rows += [line(f"conversion of {species}", percent(q)) for species, q in r["conversion_alkane"].items()]
    rows += [
        line(
            "chlorine slip",
            percent(r["chlorine_slip"]) + "   " + in_unit(r["chlorine_slip_mass"], "kg/h"),
            band(r["chlorine_slip"], percent),
        ),
        line("hydrogen chloride leaving", in_unit(r["hydrogen_chloride_mass"], "kg/h")),
        line(
            "poly share (2 or more Cl)",
            f"{percent(r['poly_share_mol'])} by mol   {percent(r['poly_share_mass'])} by mass",
        ),
        line(
            "residence time",
            in_unit(r["residence_time"], "s"),
            "volume / outlet flow" if tank else "integral of A dz/Q",
        ),
        line("space time", in_unit(r["space_time"], "s"), "all volume / inlet flow"),
    ]
    rows += [] if tank else [line("pressure drop", in_unit(r["pressure_drop"], "mbar", 2))]
    return section("KEY RESULTS", rows, emphasis)


def products(result, emphasis):
    """List what is formed, isomers and couplings included; what is hardly there goes on one line."""
    r = result.results
    made = {species: mass["value"] for species, mass in r["products"].items() if mass["value"]}
    if not made:
        return section("PRODUCTS", ["nothing is formed"], emphasis)
    least = TRACE * sum(made.values())
    rows = [f"{'formed, net of what is fed':<34}{'kg/h':>12}{'mol %':>12}{'mass %':>12}"]
    for species, mass in made.items():
        if mass >= least:
            shares = [
                figure(100 * r[key][species]["value"]) if species in r[key] else "-"
                for key in ("share_mol", "share_mass")
            ]
            rows.append(f"{species:<34}{figure(mass):>12}{shares[0]:>12}{shares[1]:>12}")
    traces = ", ".join(f"{species} {figure(mass, 2)}" for species, mass in made.items() if mass < least)
    rows += [paragraph(f"traces, kg/h: {traces}", "", "    ")] if traces else []
    rows += ["mol % and mass % are of the chlorinated organics formed."]
    return section("PRODUCTS", [*rows, *isomers(r["share_mol"])], emphasis)


def isomers(shares):
    """Return one line for each formula that is formed as several isomers, such as 1- and 2-chloropropane."""
    families: dict[str, dict[str, float]] = {}
    for species, share in shares.items():
        if species[0].isdigit() and share["value"] > 1e-4:
            place, _, formula = species.partition("-")
            families.setdefault(formula, {})[place] = share["value"]
    rows = []
    for formula, family in families.items():
        if len(family) > 1:
            total = sum(family.values())
            parts = "   ".join(
                f"{place}- {100 * share / total:.1f} %" for place, share in sorted(family.items())
            )
            rows.append(line(f"isomers of {formula}, by mol", parts))
    return rows


def closures(result, emphasis):
    """Show that the balances close."""
    rows = [
        line(f"atoms {element}", f"{gap:.1e}", LIMIT["atoms"])
        for element, gap in result.closures["atoms"].items()
    ]
    rows += [line(name, f"{result.closures[name]:.1e}", LIMIT[name]) for name in ("enthalpy", "photons")]
    return section("CLOSURES (relative)", rows, emphasis)


def design_basis(result, emphasis):
    """Give the typed inputs beside SI, in the order of the process, then what was assumed."""
    place = {name: number for number, name in enumerate(SECTIONS)}
    typed = sorted(result.inputs, key=lambda i: place.get(i["key"].split(".")[0], len(place)))
    rows = [entry(i["key"], i["typed"], i["si"]) for i in typed if i["key"] not in IN_TITLE]
    rows += ["assumed, not supplied:"] if result.assumed else []
    rows += [paragraph(f"{a['key']} = {a['value']}: {a['why']}", "  ", "    ") for a in result.assumed]
    return section("DESIGN BASIS (as typed, in SI)", rows, emphasis)


def remarks(result, emphasis):
    """Say how the answer was found."""
    numerics = ", ".join(
        f"{value} {key}" if key != "rtol" else f"relative tolerance {value:g}"
        for key, value in result.numerics.items()
    )
    rows = [
        paragraph(text[:1].upper() + text[1:].rstrip(".") + ".", "- ")
        for text in (*result.remarks, f"numerics: {numerics}")
    ]
    return section("HOW IT WAS FOUND", rows, emphasis)


def cautions(result, emphasis):
    """Print the cautions; there is no way to leave them out."""
    return section("CAUTIONS", [paragraph(text, "* ") for text in result.cautions], emphasis)


def provenance(result, emphasis):
    """Count what was relied on by status, and give the identity of the run."""
    count: dict[str, int] = {}
    for s in result.sources:
        count[s["status"]] = count.get(s["status"], 0) + 1
    text = ", ".join(
        f"{number} {status}" for status, number in sorted(count.items(), key=lambda item: -item[1])
    )
    weak = sum(count.get(status, 0) for status in ("memory", "estimate", "common practice"))
    i = result.identity
    rows = [
        paragraph(
            f"{len(result.sources)} kinds of numbers by source and status: {text}. {weak} of them are weak "
            "(memory, estimate or common practice). reactor sources CASE lists them."
        )
    ]
    rows += [line(name, i[name][:12]) for name in ("case", "data", "program") if name in i]
    return section("PROVENANCE", rows, emphasis)
