"""The product map of a feed as text: split against conversion, what a ratio gives, couplings and alkenes."""

from reactor.report.numbers import figure
from reactor.report.terminal import paragraph, section

LABEL = 34
LEAST = 1e-5  # share of the products below which a row is left out
TRACE = 1e-3  # share of the couplings, likewise
TITLES = {"plug_flow": "PLUG FLOW", "stirred_tank": "STIRRED TANK"}


def render(found, hours=8000.0, emphasis=str):
    """
    Return the product map as text.

    Parameters
    ----------
    found : dict
        From the survey of a feed; with `flow` [mol/s of feed], yearly amounts are given too.
    hours : float
        Running time of a year. [h]
    emphasis : callable
        Wraps headings for a terminal.
    """
    parts = [_head(found)]
    parts += [_map(found, vessel, emphasis) for vessel in TITLES]
    parts += [_at_ratio(found, hours, emphasis), _couplings(found, hours, emphasis), _alkenes(found, hours, emphasis)]
    parts.append(section("CAUTIONS", [paragraph(text, "- ", "  ") for text in found["cautions"]], emphasis))
    parts.append(section("RELIED ON", _sources(found), emphasis))
    return "\n".join(part for part in parts if part) + "\n"


def _head(found):
    fed = ", ".join(f"{_name(found, key)} {figure(100 * share)} %" for key, share in found["feed"].items())
    lines = [paragraph(f"{fed}; {found['temperature'] - 273.15:.1f} degC; up to {found['chlorines']} chlorine atoms"),
             "PRELIMINARY - by rule, before any reactor: the split does not depend on light"]  # fmt: skip
    lines += [paragraph(f"assumed: {text}") for text in found.get("assumed", ())]
    return "\n".join([*lines, ""])


def _name(found, key):
    return found["species"].get(key, {}).get("name", key)


def _label(found, key):
    """Return the name of a species as wide as its column; a longer one takes a line of its own."""
    name = _name(found, key)
    return f"{name:<{LABEL}}" if len(name) < LABEL else name + "\n" + " " * LABEL


def _products(found, row):
    """Return {key: share} of the chlorides that a row holds beyond what was fed."""
    made = {key: max(n - found["feed"].get(key, 0.0), 0.0) for key, n in row.items() if found["species"][key]["chlorine"]}
    total = sum(made.values()) or 1.0
    return {key: n / total for key, n in made.items()}


def _map(found, vessel, emphasis):
    """Return the block of one vessel: share of each product at each conversion of the feed."""
    shares = [row and _products(found, row) for row in found[vessel]]
    reached = [row for row in shares if row]
    if not reached:
        return ""
    keys = [key for key in reached[-1] if max(row[key] for row in reached) >= LEAST]
    keys.sort(key=lambda key: (found["species"][key]["chlorine"], -reached[0][key]))
    head = f"{'feed converted':<{LABEL}}" + "".join(f"{100 * c:>8.3g} %"[-9:] for c in found["conversions"])
    rows = [head]
    for key in keys:
        cells = ["        -" if row is None else f"{100 * row[key]:9.3f}" for row in shares]
        rows.append(_label(found, key) + "".join(cells))
    return section(f"{TITLES[vessel]}: mol % of the chlorides formed", rows, emphasis)


def _yearly(found, key, amount, hours):
    """Return kg a year of a species, or nothing when no flow is known."""
    flow = found.get("flow")
    return "" if flow is None else figure(amount * flow * found["species"][key]["molar_mass"] * 3600.0 * hours)


def _at_ratio(found, hours, emphasis):
    """Return the block of the stated ratio: plug flow and stirred tank side by side."""
    tube, tank = found["at_ratio"].get("plug_flow"), found["at_ratio"].get("stirred_tank")
    if not tube and not tank:
        return ""
    both = {vessel: _products(found, row) for vessel, row in found["at_ratio"].items() if row}
    year = "kg/year" if found.get("flow") is not None else ""
    rows = [f"{'mol % of the chlorides formed':<{LABEL}}{'plug flow':>11}{'tank':>11}{'boils, degC':>12}{year:>12}"]
    first = both.get("plug_flow") or both["stirred_tank"]
    for key in sorted(first, key=lambda key: -first[key]):
        if max(shares[key] for shares in both.values()) < LEAST:
            continue
        cells = [f"{100 * both[vessel][key]:11.3f}" if vessel in both else f"{'-':>11}" for vessel in TITLES]
        boils = found["species"][key]["boiling_point"] - 273.15
        amount = (tube or tank)[key]
        rows.append(f"{_label(found, key)}{''.join(cells)}{boils:12.1f}{_yearly(found, key, amount, hours):>12}")
    return section(f"ALL CHLORINE TAKEN UP AT {found['ratio']:.4g}:1", rows, emphasis)


def _couplings(found, hours, emphasis):
    amounts = found["traces"].get("couplings", {})
    total = sum(amounts.values())
    if not total:
        return ""
    rows = [f"{'mol a million mol fed':<{LABEL}}{'plug flow':>11}{'':>23}{'kg/year' if found.get('flow') else '':>12}"]
    for key in sorted(amounts, key=lambda key: -amounts[key]):
        if amounts[key] >= TRACE * total:
            ppm, year = figure(1e6 * amounts[key], 3), _yearly(found, key, amounts[key], hours)
            rows.append(f"{_label(found, key)}{ppm:>11}{'':>23}{year:>12}")
    rows.append(f"at J = {found['photolysis']:.3g} 1/s; all go with the square root of J")
    return section("COUPLINGS AND THEIR CHLORIDES (a factor 2 to 3)", rows, emphasis)


def _alkenes(found, hours, emphasis):
    amounts = {key: n for key, n in found["traces"].get("alkenes", {}).items() if n > 1e-9}
    if not amounts:
        return ""
    rows = [f"{'mol a million mol fed':<{LABEL}}{'plug flow':>11}"]
    for key in sorted(amounts, key=lambda key: -amounts[key]):
        rows.append(f"{_label(found, key)}{figure(1e6 * amounts[key], 3):>11}")
    rows.append("when 0.1 % of the chlorine is left, which holds them down no longer")
    return section("ALKENES BY LOSS OF CHLORINE (a factor 3)", rows, emphasis)


def _sources(found):
    by_status: dict = {}
    for cited in found["cited"]:
        by_status.setdefault(cited.status, []).append(cited.source)
    return [paragraph(f"{status}: {', '.join(sorted(set(keys)))}", "", "  ") for status, keys in by_status.items()]
