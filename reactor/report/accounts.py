"""Blocks of the report that account for something: light, heat, mixtures, steady states, streams."""

from reactor.report.layout import LABEL, line, paragraph, section
from reactor.report.numbers import figure, in_unit, percent, power


def is_tank(result):
    """Tell whether the result is that of a stirred tank."""
    return "steady_states" in result.results


def band(record, show):
    """Return the low and high end of a result with a band, or nothing."""
    if "band" not in record:
        return ""
    low, high = (show({"value": record["band"][end], "unit": record["unit"]}) for end in ("low", "high"))
    number, _, unit = low.partition(" ")
    return f"{number if unit and high.endswith(' ' + unit) else low} to {high} within the band of U"


def light(result, emphasis):
    """Give the light account, each part below its whole, and what each photon does."""
    r, depth = result.results, {"": 0}
    rows = [f"{'account':<44}{'W':>14}{'mol/s':>14}"] if result.ledger else []
    for row in result.ledger:
        depth[row["name"]] = level = depth.get(row["part_of"], 0) + 1
        photons = row["photons"]["value"]
        label = "  " * (level - 1) + ("no data (below 260 nm)" if row["name"] == "no data" else row["name"])
        rows.append(
            f"{label:<44}{figure(row['power']['value'], 4):>14}"
            f"{'' if photons is None else figure(photons):>14}".rstrip()
        )
    rows += [
        line("chain length", in_unit(r["chain_length"], "1"), "HCl per Cl atom started"),
        line("quantum yield", in_unit(r["quantum_yield"], "1"), "HCl per photon absorbed"),
        line("light order", in_unit(r["light_order"], "1"), "d ln(HCl rate)/d ln J"),
        line("share of thermal starts", percent(r["thermal_start_share"])),
    ]
    if "mixed_pool" in r:
        beside = f"slip {percent(r['mixed_pool'][0]['chlorine_slip'])}"
        rows.append(line("radical pools", "local", f"one mixed pool would give {beside}"))
    return section("LIGHT", rows, emphasis)


def degrees(record):
    """Return a temperature in degC."""
    return in_unit(record, "degC")


def heat(result, emphasis):
    """Give temperatures, duty and the wall."""
    r = result.results
    rows = [
        line("inlet, mixed", degrees(r["temperature_inlet"])),
        line("outlet", degrees(r["temperature_outlet"]), band(r["temperature_outlet"], degrees)),
    ]
    if not is_tank(result):
        where = in_unit(r["temperature_hottest_position"], "m")
        rows.append(
            line(
                "hottest gas",
                degrees(r["temperature_hottest"]) + f" at {where}",
                band(r["temperature_hottest"], degrees),
            )
        )
    rows += [
        line("adiabatic rise, all chlorine used", in_unit(r["adiabatic_rise"], "K")),
        line("MTSR (leftover chlorine reacts)", degrees(r["mtsr"])),
        line("light-off in the dark, 10 s", degrees(r["light_off_temperature"]), "unreacted feed"),
        line("exotherm margin", in_unit(r["exotherm_margin"], "K"), "limit - hottest gas"),
        line("dew point margin", in_unit(r["dew_point_margin"], "K"), "coldest surface - dew point"),
        line("heat of reaction", power(r["heat_reaction"])),
        line("taken by the walls", power(r["heat_removed"])),
        line("lamp heat into the gas", power(r["heat_lamp_to_gas"])),
    ]
    if r["heat_transfer_coefficient"]["value"]:
        U = r["heat_transfer_coefficient"]
        rows += [
            line(
                "heat transfer coefficient U",
                in_unit(U, "W/m2/K"),
                band(U, lambda q: in_unit(q, "W/m2/K")).removesuffix(" within the band of U"),
            ),
            line("transfer units", in_unit(r["transfer_units"], "1"), "UA / heat capacity flow"),
        ]
    else:
        rows += [line("heat transfer coefficient U", "0: adiabatic")]
    return section("HEAT", [*rows, line("sleeve skin", degrees(r["sleeve_skin_temperature"]))], emphasis)


def mixtures(result, emphasis):
    """Give the composition class of every feed, injector and the worst station."""
    rows = [f"{'mol %':<32}{'fuel':>7}{'Cl2':>7}{'other':>7}{'degC':>6}  class"]
    for m in result.results["mixtures"]:
        shares = "".join(f"{100 * m[key]['value']:>7.1f}" for key in ("fuel", "chlorine", "inert"))
        where = m["where"] if len(m["where"]) <= 31 else m["where"][:28] + "..."
        rows.append(f"{where:<32}{shares}{m['temperature']['value'] - 273.15:>6.0f}  {m['class']}")
        margin = m["margin"]["value"]
        parts = [f"margin {100 * margin:.1f} mol % Cl2"] if margin is not None else []
        parts.append(m["why"])
        if m["class_worst_corner"]:
            parts.append(
                f"worst corner of the meters: {m['class_worst_corner']}"
                + (f" at {m['corner']}" if m["corner"] else "")
            )
        elif m["where"].startswith(("inlet", "injector")):
            parts.append("corners of the meters: NOT ASSESSED")
        rows.append(paragraph("; ".join(parts), "    "))
    rows.append("UNKNOWN counts as INSIDE the explosive range. OUTSIDE is an estimate.")
    return section("EXPLOSIVE RANGE", rows, emphasis)


def states(result, emphasis):
    """List the steady states of a tank."""
    found = result.results.get("steady_states", [])
    rows = [
        line(
            degrees(s["temperature"]),
            "stable" if s["stable"] else "unstable",
            f"slip {percent(s['chlorine_slip'])}, growth rate {in_unit(s['growth_rate'], '1/s')}",
        )
        for s in found
    ]
    return section("STEADY STATES", rows, emphasis)


def streams(result, emphasis):
    """Give flow, temperature and composition of feeds, mixed inlet and outlet."""
    rows = [f"{'stream':<{LABEL}} {'mol/s':>12}{'kg/h':>12}{'degC':>10}"] if result.streams else []
    for s in result.streams:
        moles, mass = (figure(s[key]["value"], 4) for key in ("moles", "mass"))
        rows.append(
            f"{s['name'][:LABEL]:<{LABEL}} {moles:>12}{mass:>12}{s['temperature']['value'] - 273.15:>10.1f}"
        )
        shares = {species: q["value"] / s["moles"]["value"] for species, q in s["composition"].items()}
        ranked = sorted(((x, species) for species, x in shares.items() if x >= 1e-6), reverse=True)
        rows.append(
            paragraph(
                ", ".join(
                    f"{species} {fraction(x)}" for x, species in ranked if x >= 1e-4 or species == "O2"
                ),
                "    ",
            )
        )
    return section("STREAMS", rows, emphasis)


def fraction(x):
    """Return a mole fraction in mol %, small ones in ppm."""
    return f"{figure(100 * x)} %" if x >= 1e-3 else f"{figure(1e6 * x)} ppm"
