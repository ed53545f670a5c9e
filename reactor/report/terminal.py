"""The report in plain text: 80 columns, ASCII labels, nothing lost when piped."""

import textwrap

from reactor.report.numbers import figure, in_unit, percent

WIDTH = 80
LABEL = 34


def render(result, emphasis=str):
    """
    Return the report of a result as text.

    Parameters
    ----------
    result : Result
        A rated case, fresh or saved.
    emphasis : callable
        Wraps headings and bad verdicts for a terminal; leave it for plain text.

    Returns
    -------
    text : str
    """
    blocks = (title, verdicts, key_results, products, light, heat, mixtures, states, streams, closures, design_basis,
              remarks, cautions, provenance)
    parts = [block(result, emphasis) for block in blocks]
    return "\n".join(part for part in parts if part) + "\n"


def section(heading, lines, emphasis):
    """Return a block under its heading; nothing when there are no lines."""
    rule = "-" * (WIDTH - len(heading) - 1)
    return "\n".join([emphasis(f"{heading} {rule}"), *lines, ""]) if lines else ""


def paragraph(text, first="", rest=None):
    """Return text folded to the width, with a hanging first mark."""
    rest = " " * len(first) if rest is None else rest
    return textwrap.fill(text, WIDTH, initial_indent=first, subsequent_indent=rest, break_long_words=True)


def line(label, value, note=""):
    """Return one row: label, value, remark; a long remark goes on below."""
    row = f"{label:<{LABEL}} {value}"
    if not note:
        return row
    joined = f"{row:<52} {note}"
    return joined if len(joined) <= WIDTH else row + "\n" + paragraph(note, " " * (LABEL + 1))


def title(result, emphasis):
    """Name the case and say what kind of paper this is."""
    head = [emphasis(paragraph(result.title)), f"revision {result.revision}    date {result.date or 'not given'}",
            "PRELIMINARY - scoping calculation, not for construction or operation"]
    head += [paragraph(f"changed on the command line: {d['key']} = {d['new']} (file: {d['old']})")
             for d in result.deviations]
    return "\n".join([*head, ""])


def verdicts(result, emphasis):
    """Give every judgement in words, worst first in weight, with the figure that it rests on."""
    rows = []
    for v in result.verdicts:
        word = emphasis(f"{v.word:<17}") if v.word in ("FAIL", "CAUTION", "OUT OF DATA RANGE") else f"{v.word:<17}"
        figure_text = f"{v.figure} (limit {v.limit})" if v.limit else v.figure
        rows.append(f"{word} {v.name}: {figure_text}" if figure_text else f"{word} {v.name}")
        if v.why:
            rows.append(paragraph(v.why, " " * 18))
    return section("VERDICTS", [paragraph(row, "", " " * 18) if len(row) > WIDTH + 8 else row for row in rows], emphasis)


def key_results(result, emphasis):
    """Give the numbers a reviewer asks for first."""
    r = result.results
    rows = [line("conversion of chlorine", percent(r["conversion_chlorine"]))]
    rows += [line(f"conversion of {species}", percent(q)) for species, q in r["conversion_alkane"].items()]
    rows += [
        line("chlorine slip", percent(r["chlorine_slip"]) + "   " + in_unit(r["chlorine_slip_mass"], "kg/h"),
             band(r["chlorine_slip"], percent)),
        line("hydrogen chloride leaving", in_unit(r["hydrogen_chloride_mass"], "kg/h")),
        line("poly share (2 or more Cl)",
             f"{percent(r['poly_share_mol'])} by mol   {percent(r['poly_share_mass'])} by mass"),
        line("residence time", in_unit(r["residence_time"], "s"), "integral of A dz/Q"),
        line("space time", in_unit(r["space_time"], "s"), "all volume / inlet flow"),
        line("pressure drop", in_unit(r["pressure_drop"], "mbar")),
    ]
    return section("KEY RESULTS", rows, emphasis)


def band(record, show):
    """Return the low and high end of a result with a band, or nothing."""
    if "band" not in record:
        return ""
    ends = (show({"value": record["band"][end], "unit": record["unit"]}) for end in ("low", "high"))
    return "band of U: {} to {}".format(*ends)


def products(result, emphasis):
    """List what is formed, isomers and couplings included."""
    r = result.results
    rows = [f"{'formed':<20}{'kg/h':>12}{'mol %':>10}{'mass %':>10}   of the chlorinated organics"]
    for species, mass in r["products"].items():
        if not mass["value"]:
            continue
        shares = [percent(r[key][species]).rstrip(" %") if species in r[key] else "-"
                  for key in ("share_mol", "share_mass")]
        rows.append(f"{species:<20}{figure(mass['value']):>12}{shares[0]:>10}{shares[1]:>10}")
    return section("PRODUCTS", rows if len(rows) > 1 else ["nothing is formed"], emphasis)


def light(result, emphasis):
    """Give the light account and what each photon does."""
    r = result.results
    rows = [f"{'account':<44}{'W':>12}{'mol/s':>14}"]
    for row in result.ledger:
        mol = "" if row["photons"] is None else figure(row["photons"])
        rows.append(f"{row['name']:<44}{figure(row['power']):>12}{mol:>14}")
    rows += [
        line("chain length", in_unit(r["chain_length"], "1"), "HCl per Cl atom started"),
        line("quantum yield", in_unit(r["quantum_yield"], "1"), "HCl per photon absorbed"),
        line("light order", in_unit(r["light_order"], "1"), "d ln(HCl rate)/d ln J"),
        line("share of thermal starts", percent(r["thermal_start_share"])),
    ]
    return section("LIGHT", rows, emphasis)


def heat(result, emphasis):
    """Give temperatures, duty and the wall."""
    r = result.results
    show = lambda q: in_unit(q, "degC")  # noqa: E731 - one temperature format for this block
    rows = [
        line("inlet, mixed", show(r["temperature_inlet"])),
        line("outlet", show(r["temperature_outlet"]), band(r["temperature_outlet"], show)),
        line("hottest gas", show(r["temperature_hottest"]), band(r["temperature_hottest"], show)),
        line("  at", in_unit(r["temperature_hottest_position"], "m")),
        line("adiabatic rise, all chlorine used", in_unit(r["adiabatic_rise"], "K")),
        line("MTSR (leftover chlorine reacts)", show(r["mtsr"])),
        line("exotherm margin", in_unit(r["exotherm_margin"], "K"), "limit - hottest gas"),
        line("dew point margin", in_unit(r["dew_point_margin"], "K"), "coldest wall - dew point"),
        line("heat of reaction", in_unit(r["heat_reaction"], "kW")),
        line("taken by the walls", in_unit(r["heat_removed"], "kW")),
        line("lamp heat into the gas", in_unit(r["heat_lamp_to_gas"], "kW")),
        line("heat transfer coefficient U", in_unit(r["heat_transfer_coefficient"], "W/m2/K"),
             band(r["heat_transfer_coefficient"], lambda q: in_unit(q, "W/m2/K"))),
        line("transfer units", in_unit(r["transfer_units"], "1")),
        line("sleeve skin", show(r["sleeve_skin_temperature"])),
    ]
    return section("HEAT", rows, emphasis)


def mixtures(result, emphasis):
    """Give the composition class of every feed, injector and the worst station."""
    rows = [f"{'where':<25}{'fuel':>6}{'Cl2':>7}{'inert':>7}{'degC':>6}  class, margin (mol % Cl2), meters"]
    for m in result.results["mixtures"]:
        shares = [f"{100 * m[key]['value']:.1f}" for key in ("fuel", "chlorine", "inert")]
        margin = m["margin"]["value"]
        text = m["class"] + ("" if margin is None else f", {100 * margin:.1f}")
        rows.append(f"{m['where'][:24]:<25}{shares[0]:>6}{shares[1]:>7}{shares[2]:>7}"
                    f"{m['temperature']['value'] - 273.15:>6.0f}  {text}")
        rows.append(paragraph(f"{m['why']}; worst meter corner: {m['class_worst_corner'] or 'NOT ASSESSED'}"
                              + (f" ({m['corner']})" if m["corner"] else ""), "    "))
    rows.append("UNKNOWN counts as inside the explosive range. OUTSIDE is an estimate.")
    return section("EXPLOSIVE RANGE", rows, emphasis)


def states(result, emphasis):
    """List the steady states of a tank."""
    found = result.results.get("steady_states", [])
    rows = [line(f"{in_unit(s['temperature'], 'degC')}", "stable" if s["stable"] else "unstable",
                 f"slip {percent(s['chlorine_slip'])}, growth {in_unit(s['growth_rate'], '1/s')}") for s in found]
    return section("STEADY STATES", rows, emphasis)


def streams(result, emphasis):
    """Give flows of feeds and outlet in mol/s and kg/h."""
    rows = []
    for s in result.streams:
        rows.append(line(s["name"][:LABEL], f"{figure(s['moles']['value'])} mol/s  {figure(s['mass']['value'])} kg/h  "
                         f"{s['temperature']['value'] - 273.15:.1f} degC"))
    return section("STREAMS", rows, emphasis)


def closures(result, emphasis):
    """Show that the balances close."""
    rows = [line(f"atoms {element}", f"{gap:.1e}", "limit 1e-9") for element, gap in result.closures["atoms"].items()]
    rows += [line(name, f"{result.closures[name]:.1e}", "limit 1e-6") for name in ("enthalpy", "photons")]
    return section("CLOSURES (relative)", rows, emphasis)


def design_basis(result, emphasis):
    """Give the typed inputs beside SI, then what was assumed."""
    rows = [f"{i['key']:<36} {i['typed']:<24} {i['si']}" for i in result.inputs]
    rows += ["assumed, not supplied:"] if result.assumed else []
    rows += [paragraph(f"{a['key']} = {a['value']}: {a['why']}", "  ", "    ") for a in result.assumed]
    return section("DESIGN BASIS (typed, SI)", [row if len(row) <= WIDTH else paragraph(row, "", "    ") for row in rows],
                   emphasis)


def remarks(result, emphasis):
    """Say how the answer was found."""
    numerics = ", ".join(f"{key} {value}" for key, value in result.numerics.items())
    rows = [paragraph(text, "- ") for text in (*result.remarks, f"numerics: {numerics}")]
    return section("HOW IT WAS FOUND", rows, emphasis)


def cautions(result, emphasis):
    """Print the cautions; there is no way to leave them out."""
    return section("CAUTIONS", [paragraph(text, "* ") for text in result.cautions], emphasis)


def provenance(result, emphasis):
    """Count what was relied on by status, name the weak ones, and give the identity of the run."""
    count = {}
    for s in result.sources:
        count[s["status"]] = count.get(s["status"], 0) + 1
    text = ", ".join(f"{number} {status}" for status, number in sorted(count.items(), key=lambda item: -item[1]))
    weak = sum(number for status, number in count.items() if status in ("memory", "estimate", "common practice"))
    i = result.identity
    rows = [paragraph(f"{len(result.sources)} numbers relied on: {text}. {weak} of them are weak (memory, estimate or "
                      "common practice). `reactor sources CASE` lists them."),
            line("case", i["case"][:12]), line("data", i["data"][:12]), line("program", i["program"])]
    return section("PROVENANCE", rows, emphasis)
