"""The photon report and the lamp data sheet as text; they work from the plain record of `rating.photonic`."""

from reactor.report.layout import line, paragraph, section
from reactor.report.numbers import NOTHING, figure

DAY = 86400.0
DEFINITIONS = (
    ("photons_per_mole", "photons absorbed per mole", 1.0, "mol/mol", "photons absorbed / chlorinated organics formed"),
    ("photonic_efficiency", "photonic efficiency", 1.0, "mol/mol", "chlorinated organics / photons entering the gas"),
    ("quantum_yield", "overall quantum yield", 1.0, "mol/mol", "HCl formed / photons absorbed"),
    ("chain_length", "chain length", 1.0, "", "HCl formed / Cl atoms started"),
    ("energy_per_mass", "lamp energy", 1 / 3.6e6, "kWh/kg", "mains of the lamps / chlorinated organics"),
    ("space_time_yield", "space-time yield", DAY, "mol/m3/d", "chlorinated organics / gas volume"),
    ("photochemical_yield", "photochemical space-time yield", DAY * 1e3, "mol/d/kW",
     "space-time yield / (mains per volume); the volume cancels"),
    ("absorbed_per_joule", "photons absorbed", 1e6, "umol/J", "per joule from the mains: the optics alone"),
    ("utilisation", "lamp utilisation", 100.0, "%", "photons absorbed / photons entering the gas"),
)  # fmt: skip


def render(record, emphasis=str):
    """
    Return the photon report as text.

    Parameters
    ----------
    record : dict
        From `rating.photonic`. [-]
    emphasis : callable
        Wraps headings. [-]
    """
    head = [emphasis(paragraph(f"{record['title']}: light")),
            "PRELIMINARY - scoping calculation, not for construction or operation", ""]
    blocks = (basis, lines, gaps, laws, ledger, bands, merit, pools, lamps, notes)
    return "\n".join([*head, *(block for block in (part(record, emphasis) for part in blocks) if block)]) + "\n"


def basis(record, emphasis):
    """Say what the light sees."""
    g, gas = record["geometry"], record["gas"]
    rows = [
        line("geometry", g["name"], f"law: {g['law']}"),
        line("gap", f"{g['gap'] * 1e3:.1f} mm", "what optical thickness is measured across"),
        line("chlorine at the inlet", f"{100 * gas['fraction']:.2f} mol%",
             f"{gas['chlorine']:.3g} mol/m3, {gas['temperature'] - 273.15:.0f} degC"),
        line("lamp light that meets the gas", f"{100 * g['capture']:.1f} %", "in the plane across; ends apart"),
        line("lines", f"{g['lines']}", f"followed as {g['followed']} (same absorption to 1e-4)"),
    ]  # fmt: skip
    return section("BASIS", rows, emphasis)


def lines(record, emphasis):
    """List the strongest lines over the gas."""
    found = sorted(record["lines"], key=lambda row: -row["photons"])[:14]
    total = sum(row["photons"] for row in record["lines"]) or 1.0
    rows = ["    nm   photons at window   passes   optical      absorbed at",
            "             share    mol/s   window   thickness    the inlet"]
    for r in sorted(found, key=lambda row: row["wavelength"]):
        bar = "#" * round(24 * r["photons"] / max(x["photons"] for x in found))
        rows.append(f"{r['wavelength'] * 1e9:6.1f}   {100 * r['photons'] / total:6.1f} %  {r['photons']:.2e}"
                    f"  {100 * r['passed']:4.0f} %  {r['thickness']:8.3g}  {100 * r['absorbed']:9.1f} %  {bar}"[:80])
    return section("LAMP OVER GAS (one tube, strongest lines)", rows, emphasis)


def gaps(record, emphasis):
    """Show the absorbed share against wavelength and gap, and name the best wavelength."""
    o = record["overlay"]
    chosen = [i for i, w in enumerate(o["wavelength"]) if round(w * 1e9, 1) in (300, 310, 320, 330, 340, 350, 365, 375,
                                                                             385, 395, 405, 420, 435)]  # fmt: skip
    columns = list(o["absorbed"])
    rows = ["absorbed % at the inlet, long lamp, " + o["law"],
            "    nm " + "".join(f"{float(gap) * 1e3:9.1f} mm" for gap in columns)]
    rows += [f"{o['wavelength'][i] * 1e9:6.0f} " + "".join(f"{100 * o['absorbed'][gap][i]:12.1f}" for gap in columns)
             for i in chosen]
    rows += ["", line("best wavelength here", f"{o['best'] * 1e9:.0f} nm",
                      f"{figure(o['best_per_joule'] * 1e6)} umol absorbed per radiant joule in the gas, inlet gas")]
    return section("ABSORBED BY WAVELENGTH AND GAP", rows, emphasis)


def laws(record, emphasis):
    """Show the bracket between the laws of emission."""
    found = record["laws"]
    if not found["rows"]:
        return ""
    rows = ["law                  into gas   absorbed (all gas as at the inlet)"]
    used = next((r["absorbed"] for r in found["rows"] if r["used"]), None)
    for r in found["rows"]:
        ratio = f"{r['absorbed'] / used:6.3f} of the law used" if used else ""
        mark = " <" if r["used"] else ""
        rows.append(f"{r['law']:<20} {r['into_gas']:.3e}  {r['absorbed']:.3e} mol/s  {ratio}{mark}")
    word = "typed in the case" if found["known"] else "that of the class of lamp, unknown for this one: take the bracket"
    return section("EMISSION LAWS (one tube)", [*rows, paragraph(f"The law is {word}.")], emphasis)


def ledger(record, emphasis):
    """Print the ledger, all tubes."""
    rows = ["account                                  W         mol/s   part of"]
    for r in record["ledger"]:
        flow = "" if r["photons"]["value"] is None else f"{r['photons']['value']:.3e}"
        rows.append(f"{r['name']:<30} {figure(r['power']['value']):>12}  {flow:>12}   {r['part_of']}")
    return section("LEDGER", rows, emphasis)


def bands(record, emphasis):
    """Print the ledger by spectral band."""
    names = ("at window", "into gas", "absorbed", "outer wall", "ends")
    rows = ["nm             " + "".join(f"{name:>12}" for name in names)]
    for r in record["bands"]:
        rows.append(f"{r['band'][0]:>4} to {r['band'][1]:<7}" + "".join(f"{r[name]:12.2e}" for name in names))
    return section("LEDGER BY BAND (all tubes, mol/s)", rows, emphasis)


def merit(record, emphasis):
    """Print the figures of merit with their definitions."""
    rows = []
    for key, label, factor, unit, what in DEFINITIONS:
        value = record["merit"][key]
        rows.append(line(label, NOTHING if value is None else f"{figure(value * factor)} {unit}".rstrip(), what))
    text = "For a chain, yields per photon and kWh/kg measure the chemistry (chain length); the optics are in umol/J."
    return section("FIGURES OF MERIT", [*rows, paragraph(text)], emphasis)


def pools(record, emphasis):
    """Print the bracket between local and mixed radical pools."""
    if record["pools"] is None:
        text = 'One mixed radical pool; chemistry.radicals = "local" gives each layer of gas its own.'
        return section("RADICAL POOLS", [paragraph(text)], emphasis)
    rows = [line(f"{name} pools" if name == "local" else "one mixed pool", f"slip {100 * p['chlorine_slip']:.3g} %",
                 f"hottest {p['temperature_hottest'] - 273.15:.1f} degC, {p['photons_absorbed']:.3e} mol/s absorbed")
            for name, p in record["pools"].items()]
    return section("RADICAL POOLS", rows, emphasis)


def lamps(record, emphasis):
    """Compare the kinds of lamp."""
    rows = ["same vessel, window and mains power; umol per mains joule   into gas  absorbed"]
    rows += [f"{r['kind']:<56} {r['into_gas'] * 1e6:9.3f} {r['absorbed'] * 1e6:9.3f}" for r in record["lamps"]]
    text = "Absorbed: all gas as at the inlet. Spectra and factors of the kinds rest on memory: replace them by the maker's."
    return section("OTHER LAMPS", [*rows, paragraph(text)], emphasis)


def notes(record, emphasis):
    """Print the remarks, and what rests on memory."""
    rows = [paragraph(note, "- ") for note in record["notes"]]
    if record["memory"]:
        rows.append(paragraph("From memory, not from a document: " + "; ".join(record["memory"]) + ".", "- "))
    return section("REMARKS", rows, emphasis)


def lamp_sheet(record, emphasis=str):
    """
    Return the lamp data sheet for an enquiry as text.

    Parameters
    ----------
    record : dict
        From `rating.photonic`. [-]
    emphasis : callable
        Wraps headings. [-]
    """
    s = record["sheet"]
    group = f" shared by {s['tubes']} tubes" if s["tubes"] > 1 else ""
    rows = []
    for lamp in s["lamps"]:
        rows += [line("kind", lamp["kind"]), line("number in each vessel", f"{lamp['number']}{group}"),
                 line("mains power, each", f"{figure(lamp['power'])} W"),
                 line("arc (lit) length", f"{lamp['arc'] * 1e3:.0f} mm",
                      f"from {lamp['from']:.3g} m to {lamp['to']:.3g} m from the inlet"),
                 line("light at end of life", f"{100 * lamp['end_of_life']:.0f} %", "of the fresh lamp")]  # fmt: skip
    low, high = (w * 1e9 for w in s["band"])
    need = [
        line("band", f"{low:.0f} to {high:.0f} nm", "chlorine absorbs, data hold"),
        line("photons in band into the gas", f"{s['photons']:.4g} mol/s", "one tube, end of life"),
        line("the same as power", f"{figure(s['power_into_gas'])} W",
             f"mean {s['wavelength'] * 1e9:.0f} nm" if s["wavelength"] else ""),
        line("radiant, all lines", f"{figure(s['radiant'])} W", "end of life, one tube"),
        line("heat to the sleeve", f"{figure(s['heat_to_sleeve'])} W" if s["inner"] else "lamp outside the gas",
             "lamp heat and light kept by the sleeve"),
        line("sleeve skin, hottest gas", NOTHING if s["skin"] is None else f"{s['skin'] - 273.15:.0f} degC",
             "gas side, lamp on, full flow"),
        line("room for the lamp", f"{2e3 * s['bore']:.1f} mm" if s["inner"] else "free", "bore of the sleeve"),
        line("emission law assumed", record["geometry"]["law"]),
        line("vessels", f"{s['vessels']}"),
    ]
    ask = ("Please state: spectrum (W per line or nm, 250 to 550 nm) per 100 W electrical, at start and end of life; polar "
           "distribution; lamp diameter and arc length; driver efficiency; heat to the sleeve by conduction and radiation; "
           "warm-up and re-strike; life at the stated output; highest surface temperature.")  # fmt: skip
    blocks = [section("LAMP", rows, emphasis), section("DUTY", need, emphasis),
              section("ASKED OF THE MAKER", [paragraph(ask)], emphasis), notes(record, emphasis)]
    head = [emphasis(paragraph(f"{record['title']}: lamp data sheet for an enquiry")),
            "PRELIMINARY - scoping calculation, not for construction or operation", ""]
    return "\n".join([*head, *(block for block in blocks if block)]) + "\n"
