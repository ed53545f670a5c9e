"""The printed page of a sizing run: what was found or what binds, then the tables, then the rated case."""

from reactor.report import terminal
from reactor.report.numbers import figure
from reactor.report.terminal import line, paragraph, section

NAMES = {"temperature_hottest": "hottest gas"}


def render(result, emphasis=str):
    """Return the page of a result with a block `sizing`, 80 columns."""
    block = plain(result.sizing)
    parts = [terminal.title(result, emphasis), found(block["found"], emphasis)]
    parts += [PAGES[name](block[name], emphasis) for name in PAGES if name in block]
    parts += [
        page(result, emphasis)
        for page in (
            terminal.verdicts,
            terminal.key_results,
            terminal.products,
            terminal.heat,
            terminal.mixtures,
            terminal.closures,
            terminal.cautions,
        )
    ]
    parts.append("The case in full: reactor rate, with the same --set or the file of --write.\n")
    return "\n".join(part for part in parts if part) + "\n"


def plain(node):
    """Return records with bare numbers in place of {value, unit}."""
    if isinstance(node, dict):
        if set(node) == {"value", "unit"}:
            value = node["value"]
            return int(value) if node["unit"] == "1" and value is not None and value == int(value) else value
        return {key: plain(value) for key, value in node.items()}
    return [plain(value) for value in node] if isinstance(node, list | tuple) else node


def per_cent(value, digits=3):
    """Return a share in per cent."""
    return "none" if value is None else f"{figure(100 * value, digits)} %"


def degrees(value):
    """Return a temperature in degC."""
    return "none" if value is None else f"{value - 273.15:.0f}"


def found(one, emphasis):
    """Say what was found, or what is nearest and what limits it, with the curve."""
    rows = []
    wanted = ", ".join(f"{t['name']} = {t['wanted']}" for t in one["targets"])
    if one["solved"]:
        rows += [line(key, value, f"was {one['before'][key]}") for key, value in one["inputs"].items()]
        rows += [line(f"gives {t['name']}", t["got"], f"wanted {t['wanted']}") for t in one["targets"]]
        rows += [paragraph(f"{key} is a whole number: the target is passed there, not met") for key in one["whole"]]
    else:
        near = ", ".join(f"{key} = {value}" for key, value in one["inputs"].items())
        got = ", ".join(f"{t['name']} = {t['got']}" for t in one["targets"])
        rows.append(
            paragraph(
                emphasis(
                    f"no solution in this range for {wanted}; nearest is {near} with {got}, limited by {one['limited_by']}"
                )
            )
        )
        if one["target_met_at"]:
            rows.append(
                paragraph("the target alone is met at " + ", ".join(f"{k} = {v}" for k, v in one["target_met_at"].items()))
            )
    rows += [
        line(f"keeps {c['name']}{c['relation']}{c['wanted']}", c["got"], "holds" if c["holds"] else "BROKEN")
        for c in one["constraints"]
    ]
    rows += [paragraph(f"{', '.join(one['along'])} goes with the length of the vessel")] if one["along"] else []
    rows.append(f"{one['ratings']} rated cases")
    if not one["solved"]:
        rows += ["", "the curve that was seen:"] + [
            "  "
            + ", ".join(f"{k} {v}" for k, v in point["inputs"].items())
            + "  ->  "
            + ", ".join(f"{k} {figure(v)}" for k, v in point.items() if k != "inputs" and v is not None)
            for point in one["curve"]
        ]
    return section("SIZED" if one["solved"] else "NOT SIZED", rows, emphasis)


def light(one, emphasis):
    """Print lamp power against slip."""
    if not one["curve"]:
        return section("LAMP POWER AGAINST CHLORINE SLIP", [one["remark"]], emphasis)
    rows = [f"{'slip':>12}{'mains kW':>12}{'into gas W':>12}{'absorbed W':>12}   decades of light per decade"]
    for row in one["curve"]:
        law = "" if row["law"] is None else f"{row['law']:.2f}"
        rows.append(
            f"{per_cent(row['slip']):>12}{figure(row['electrical'] / 1e3):>12}{figure(row['into_gas']):>12}"
            f"{figure(row['absorbed']):>12}   {law}"
        )
    rows.append("")
    for p in one["points"]:
        rows.append(
            line(
                p["name"],
                per_cent(p["slip"]),
                f"light {100 * p['light']:.0f} %, {figure(p['into_gas'])} W into gas, hottest {degrees(p['hottest'])} degC",
            )
        )
    return section("LAMP POWER AGAINST CHLORINE SLIP", rows, emphasis)


def trade(one, emphasis):
    """Print watts against litres at the same slip."""
    rows = [f"{'litres':>10}{'length m':>10}{'mains kW':>10}{'W into gas':>12}{'W x L':>12}{'stay s':>10}"]
    rows += [
        f"{figure(r['volume'] * 1e3):>10}{figure(r['length']):>10}{figure(r['electrical'] / 1e3):>10}"
        f"{figure(r['into_gas']):>12}{figure(r['watts_times_volume'] * 1e3):>12}{figure(r['residence_time']):>10}"
        for r in one["rows"]
    ]
    return section(f"LAMPS OR STEEL: slip {per_cent(one['slip'])} throughout", rows, emphasis)


def tubes(one, emphasis):
    """Print the counts of tubes, the binding one first, and the bores."""
    if not one["counts"]:
        return section("HOW MANY TUBES", [one["remark"]], emphasis)
    rows = [
        paragraph(
            f"binding: {one['binding']}"
            + ("" if one["binding_count"] is None else f" ({one['binding_count']} tubes)")
            + f"; the case has {one['has']}"
        )
    ]
    if one["pipe"]:
        p = one["pipe"]
        rows.append(
            f"shell: DN {p['dn']}, NPS {p['nps']} schedule {p['schedule']}, {p['inside'] * 1e3:.1f} mm "
            f"bore, wall "
            f"{p['wall'] * 1e3:.1f} mm"
        )
    for c in one["counts"]:
        number = "not asked" if not c["asked"] else "no count" if c["count"] is None else str(c["count"])
        rows.append(paragraph(c["why"], f"{c['by']:<16}{number:>10}   ", " " * 29))
    rows += [
        "",
        f"{'bore (same volume)':<24}{'tubes':>6}{'gap mm':>8}{'m/s':>8}{'Re':>9}{'U':>7}{'UA W/K':>9}",
    ]
    for b in one["bores"]:
        p = b["pipe"]
        name = f"DN {p['dn']} / NPS {p['nps']} sch {p['schedule']}"
        rows.append(
            f"{name:<24}{b['count']:>6}{b['gap'] * 1e3:>8.0f}{figure(b['velocity'], 3):>8}"
            f"{b['reynolds']:>9.0f}"
            f"{b['overall']:>7.1f}{b['conductance']:>9.0f}"
        )
    rows += ["", f"{'passes in series':<24}{'side by side':>13}{'m/s':>8}{'Re':>9}{'UA W/K':>9}{'mbar':>9}"]
    rows += [
        f"{s['passes']:<24}{s['parallel']:>13}{figure(s['velocity'], 3):>8}{s['reynolds']:>9.0f}"
        f"{s['conductance']:>9.0f}"
        f"{figure(s['pressure_drop'] / 100, 3):>9}"
        for s in one["series"]
    ]
    return section("HOW MANY TUBES", rows, emphasis)


def loads(one, emphasis):
    """Print absorber, scrubber and condenser."""
    a, n, p, c = one["absorber"], one["scrubber_normal"], one["scrubber_peak"], one["condenser"]
    rows = [
        line(
            "HCl absorber",
            f"{figure(a['acid'])} kg/h",
            f"{100 * a['strength']:.0f} wt% acid from "
            f"{figure(a['hydrogen_chloride'])} kg/h HCl; water {figure(a['water'])} kg/h",
        ),
        line("  heat of absorption", f"{figure(a['heat'] / 1e3)} kW"),
        line(
            "scrubber, normal",
            f"{figure(n['soda'])} kg/h NaOH",
            f"{figure(n['chlorine'])} kg/h Cl2; liquor "
            f"{figure(n['liquor'])} kg/h of {100 * n['strength']:.0f} wt%; {figure(n['heat'] / 1e3)} kW",
        ),
        line(
            "scrubber, peak",
            f"{figure(p['soda'])} kg/h NaOH",
            f"{figure(p['chlorine'])} kg/h Cl2; liquor "
            f"{figure(p['liquor'])} kg/h of {100 * p['strength']:.0f} wt%; {figure(p['heat'] / 1e3)} kW",
        ),
        line("  peak over normal", figure(p["soda"] / n["soda"], 3) if n["soda"] > 0 else "none"),
    ]
    for d in c["dew_points"]:
        dew = "none above -100 degC" if d["temperature"] is None else f"{degrees(d['temperature'])} degC"
        rows.append(line(f"dew point, {d['where']}", dew, "" if d["species"] is None else f"{d['species']} first"))
    rows.append(line("coldest wall", f"{degrees(c['coldest_wall'])} degC"))
    rows.append(
        line(
            f"condenser at {degrees(c['temperature'])} degC",
            f"{figure(c['liquid_total'])} kg/h liquid",
            f"{figure(c['sensible_heat'] / 1e3)} kW sensible, {figure(c['latent_heat'] / 1e3)} kW latent",
        )
    )
    rows += [paragraph(text, "- ") for text in one["remarks"]]
    return section("BEHIND THE REACTOR", rows, emphasis)


def loop(one, emphasis):
    """Print the stream table of a closed recycle."""
    rows = [f"{'stream':<25}{'mol/s':>8}{'kg/h':>8}{'Nm3/h':>8}  largest shares, mol%"]
    for s in one["streams"]:
        top = sorted(s["composition"].items(), key=lambda item: -item[1])[:3]
        shares = ", ".join(f"{species} {_short(100 * n / max(s['moles'], 1e-300))}" for species, n in top)
        rows.append(
            f"{s['name']:<25}{figure(s['moles'], 3):>8}{figure(s['mass'], 3):>8}{figure(s['normal_volume'], 3):>8}  {shares}"
        )
    rows.append(line("recycle to fresh gas, mol/mol", figure(one["recycle_ratio"])))
    rows.append(line("alkane lost in the purge", per_cent(one["alkane_lost_in_purge"]), "of the fresh alkane"))
    rows += [
        line(f"{s} in the recycle", per_cent(b["loop"]), f"{per_cent(b['fresh'])} of what is fed")
        for s, b in one["build_up"].items()
    ]
    worst = max(one["closure"].items(), key=lambda item: item[1])
    rows.append(
        line(
            "closure of the whole loop",
            f"{worst[1]:.1e}",
            f"worst atom {worst[0]}, limit 1e-9; {one['passes']} passes, shares hold to {one['gap']:.0e}",
        )
    )
    return section("RECYCLE", rows, emphasis)


def _short(value):
    """Return a number with two figures, whole from ten on."""
    return f"{value:.0f}" if value >= 10 else f"{value:.2g}"


def stages(one, emphasis):
    """Print the stage table of staged chlorine."""
    rows = [
        paragraph(
            f"{one['count']} stages by the formula for {100 * one['cap']:.3g} mol% of chlorine after an "
            f"injection "
            f"(diluent {figure(one['diluent_per_alkane'], 3)} and chlorine "
            f"{figure(one['chlorine_per_alkane'], 3)} mol per mol of "
            "alkane)"
        )
    ]
    rows.append(
        f"{'stage':>5}{'Cl2 kg/h':>10}{'Cl2 %':>7}{'in C':>6}{'hot C':>6}{'out C':>6}"
        f"{'slip %':>9}{'cool kW':>9}"
        "  class at the inlet"
    )
    for s in one["stages"]:
        rows.append(
            f"{s['stage']:>5}{figure(s['chlorine']):>10}{100 * s['chlorine_share']:>7.1f}"
            f"{degrees(s['inlet']):>6}"
            f"{degrees(s['hottest']):>6}{degrees(s['outlet']):>6}{figure(100 * s['slip'], 3):>9}"
            f"{figure(s['cooling'] / 1e3, 3):>9}  {s['class']}"
        )
    rows.append("")
    rows += [
        line(name, ", ".join(f"{k} {figure(v, 3)}" for k, v in list(split.items())[:5]))
        for name, split in one["split"].items()
    ]
    rows += [paragraph(text, "- ") for text in one["remarks"]]
    return section("CHLORINE IN STAGES (kg/h of the organics formed)", rows, emphasis)


def kinds(one, emphasis):
    """Print stirred tank, tanks in series and plug flow side by side."""
    rows = [f"{'kind':<22}{'slip':>10}{'poly mol':>10}{'hottest C':>10}{'mains kW for the same slip':>28}"]
    for k in one["rows"]:
        need = (
            "not searched"
            if not k["searched"]
            else "out of reach"
            if k["electrical_same_slip"] is None
            else figure(k["electrical_same_slip"] / 1e3)
        )
        rows.append(
            f"{k['kind']:<22}{per_cent(k['slip']):>10}{per_cent(k['poly']):>10}{degrees(k['hottest']):>10}{need:>28}"
        )
    rows += [paragraph(text, "- ") for text in one["remarks"]]
    return section("TANK, TANKS IN SERIES, TUBE: same litres, same lamps", rows, emphasis)


def lamps(one, emphasis):
    """Print the electrical power that each kind of lamp, or each gap, asks for."""
    rows = [f"{'lamp':<35}{'gap mm':>7}{'mains kW':>9}{'W into gas':>11}{'absorbed':>9}{'depth':>8}"]
    for r in one["rows"]:
        cells = ["no use", "-", "-", "-"]
        if r["electrical"] is not None:
            cells = [figure(r["electrical"] / 1e3, 3), *(figure(r[k], 3) for k in ("into_gas", "absorbed", "depth"))]
        widths = (9, 11, 9, 8)
        rows.append(
            f"{r['lamp']:<35}{r['gap'] * 1e3:>7.0f}"
            + "".join(f"{cell:>{width}}" for cell, width in zip(cells, widths, strict=True))
        )
    rows += [paragraph(text, "- ") for text in one["remarks"]]
    return section(f"{one['title'].upper()}: slip {per_cent(one['slip'])} throughout", rows, emphasis)


def turndown(one, emphasis):
    """Print the turndown curve."""
    rows = [f"{'flow':>6}{'slip':>11}{'poly mol':>10}{'hottest C':>10}{'outlet C':>9}{'skin C':>8}{'absorbed W':>12}"]
    rows += [
        f"{100 * r['flow']:>5.0f}%{per_cent(r['slip']):>11}{per_cent(r['poly']):>10}"
        f"{degrees(r['hottest']):>10}"
        f"{degrees(r['outlet']):>9}{degrees(r['skin']):>8}{figure(r['absorbed']):>12}"
        for r in one["rows"]
    ]
    return section("TURNDOWN: all flows together, lamps and coolant as they are", rows, emphasis)


def ageing(one, emphasis):
    """Print slip against hours and the two dates."""
    rows = [f"{'hours':>8}{'lamp':>8}{'sleeve':>8}{'light':>8}{'slip':>11}"]
    rows += [
        f"{r['hours']:>8.0f}{100 * r['lamp']:>7.0f}%{100 * r['sleeve']:>7.0f}%{100 * r['light']:>7.0f}%"
        f"{per_cent(r['slip']):>11}"
        for r in one["rows"]
    ]
    rows += [
        line("relamp after", "-" if one["relamp"] is None else f"{one['relamp']:.0f} h", one["relamp_why"]),
        line("clean after", "-" if one["clean"] is None else f"{one['clean']:.0f} h", one["clean_why"]),
    ]
    rows += [paragraph(text, "- ") for text in one["remarks"]]
    return section("AGEING", rows, emphasis)


PAGES = {
    "light": light,
    "trade": trade,
    "tubes": tubes,
    "loop": loop,
    "stages": stages,
    "loads": loads,
    "kinds": kinds,
    "lamps": lamps,
    "gaps": lamps,
    "turndown": turndown,
    "ageing": ageing,
}
