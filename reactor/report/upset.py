"""The upset table as text and as CSV in the columns of a HAZOP worksheet, from a plain record."""

import csv
import io

from reactor.report.numbers import figure, in_unit
from reactor.report.terminal import line, paragraph, section

COLUMNS = (
    "No",
    "Guide word",
    "Element",
    "Deviation",
    "Possible causes",
    "Consequences",
    "Safeguards",
    "Comments",
    "Actions required",
    "Action allocated to",
)
FIGURES = (
    ("time_to_limit", "s", "time to the limit"),
    ("peak", "degC", "peak temperature"),
    ("chlorine_released", "kg", "chlorine released"),
    ("chlorine_flow", "kg/h", "chlorine to the scrubber"),
    ("naoh", "kg/h", "NaOH for it"),
    ("latent_heat", "kJ", "heat stored in chlorine"),
    ("dew_margin", "K", "dew point margin"),
    ("duty", "1", "duty over the steady one"),
    ("pressure_ratio", "1", "closed-volume pressure ratio"),
    ("light_off", "degC", "wall that ignites"),
    ("tolerated", "1", "segregation tolerated"),
)


def render(record, emphasis=str):
    """
    Return an upset record as text.

    Parameters
    ----------
    record : dict
        From `reactor.upsets.upset`, fresh or saved.
    emphasis : callable
        Wraps headings for a terminal; leave it for plain text.
    """
    head = [
        emphasis(paragraph(record["title"])),
        f"revision {record['revision']}    date {record['date'] or 'not given'}",
        "UPSETS - screening values of a scoping calculation; no hazard study",
        "",
    ]
    blocks = (headline, regimes, sensitivity, curves, paths, table, leaks, assumed, cautions)
    parts = [block(record, emphasis) for block in blocks]
    return "\n".join([*head, *[part for part in parts if part]]) + "\n"


def headline(record, emphasis):
    """Give the numbers a process-safety review asks for first."""
    h = record["headline"]
    worst = f"worst of three: {h['worst_model']}"
    rows = [
        line("hottest gas, steady", in_unit(h["hottest"], "degC")),
        line("dark chain runs away above", in_unit(h["light_off_temperature"], "degC"), "upper bound, in 10 s"),
        *_dark_feed(h),
        line("MTSR (leftover chlorine reacts)", in_unit(h["mtsr"], "degC"), f"severity {h['severity']}"),
        line("fastest warming, no cooling", in_unit(h["heating_rate"], "K/s")),
        line("shortest time to the limit", in_unit(h["time_to_limit"], "s"), "by the chlorine inside"),
        line("direct trip, valve shut after", in_unit(h["direct_trip"], "s")),
        line("temperature trip, valve shut after", in_unit(h["temperature_trip"], "s")),
        line("sweep after the valve is shut", in_unit(h["sweep"], "s")),
        line(
            "chlorine inside",
            in_unit(h["chlorine_inside"], "kg"),
            f"{in_unit(h['latent_heat'], 'kJ')} stored",
        ),
        line("feed reacts completely: T", in_unit(h["worst_temperature"], "degC"), worst),
        line("  pressure ratio, closed volume", in_unit(h["worst_pressure_ratio"], "1")),
    ]
    rows += [line(f"  chlorine: {i['section']}"[:34], in_unit(i["mass"], "kg")) for i in record["inventory"]]
    for state in record["dark_states"]:
        label = "dark tank: steady state" if state["stable"] else "dark tank: unstable state"
        rows.append(line(label, in_unit(state["temperature"], "degC")))
    rows += [paragraph(text) for text in remarks(h)]
    return section("HEADLINE", rows, emphasis)


def _dark_feed(h):
    """Give the feed temperature at which a dark tube lights off; a tank has states instead."""
    if h["dark_feed_temperature"]["value"] is not None:
        T = in_unit(h["dark_feed_temperature"], "degC")
        yield line("dark tube uses half its Cl2 from", T, "feed; mechanism")


def remarks(h):
    """Say what the headline means for lamp-off and for the trips."""
    off, hottest = h["light_off_temperature"]["value"], h["hottest"]["value"]
    if off is not None and hottest > off:
        yield "The steady gas is hotter than the dark chain needs at most: lamp-off alone may not stop it."
    margin, trip = h["time_to_limit"]["value"], h["direct_trip"]["value"]
    if margin is not None:
        late = "no trip acts in time: the margin has to lie in the design"
        yield f"Against the fastest warming, {late if margin < trip else 'a direct trip acts in time'}."


REGIME = (
    ("activation", "kJ/mol", "activation energy, kJ/mol"),
    ("rate", "mol/m3/s", "rate at wall temp., mol/m3/s"),
    ("S", "1", "S"),
    ("N_over_S", "1", "N/S"),
    ("critical_N_over_S", "1", "  least, van Welsenaere-Froment"),
    ("barkelew_N_over_S", "1", "  least, Barkelew fit"),
    ("hot_spot_limit", "degC", "hot spot limit, degC"),
    ("semenov_wall", "degC", "mixed gas runs away, wall, degC"),
    ("stagnant_wall", "degC", "dead leg runs away, wall, degC"),
    ("time_to_maximum_rate", "s", "hottest gas runs away in, s"),
)
COLDEST = 250.01  # K; a critical wall at the end of the search means any wall


def regimes(record, emphasis):
    """Give the classical criteria in the lit and the dark regime side by side."""
    names = list(record["regimes"])
    rows = [f"{'':<32}" + "".join(f"{name.replace('dark, upper bound', 'dark, bound'):>15}" for name in names)]
    for key, unit, label in REGIME:
        cells = [_cell(record["regimes"][name][key], key, unit) for name in names]
        rows.append(f"{label:<32}" + "".join(f"{cell:>15}" for cell in cells))
    cells = ["possible" if record["regimes"][name]["several_states"] else "no" for name in names]
    rows.append(f"{'several states if stirred':<32}" + "".join(f"{cell:>15}" for cell in cells))
    rows.append(
        paragraph(
            "Screening values; dark, bound: chlorine atoms in equilibrium, no termination. With light the "
            "rate hardly depends on temperature: the criteria then only say that the wall cannot hold the "
            "rise."
        )
    )
    return section("RUNAWAY, LIT AND DARK", rows, emphasis)


def _cell(record, key, unit):
    """Return one number of a regime without its unit."""
    if record["value"] is None:
        return "-"
    if key.endswith("_wall") and record["value"] < COLDEST:
        return "any"
    return in_unit(record, unit).split(" ")[0]


def sensitivity(record, emphasis):
    """Give how far the hottest gas moves with each input."""
    rows = [f"{'hottest gas moves, in K':<34}{'lit':>12}{'dark':>12}"]
    for r in record["sensitivity"]:
        values = [r[name]["value"] for name in ("lit", "dark")]
        cells = ["-" if v is None else figure(round(v, 6), 3) for v in values]
        rows.append(f"{r['input'] + ' + ' + r['step']:<34}{cells[0]:>12}{cells[1]:>12}")
    return section("PARAMETRIC SENSITIVITY", rows, emphasis)


def curves(record, emphasis):
    """Give ignition and extinction of a tank."""
    rows = []
    for curve in record["curves"]:
        turns = [f"{word} at {figure(value)} (gas at {T - 273.15:.0f} degC)" for value, T, word in curve["turns"]]
        unit = "factor on the light" if curve["parameter"] == "light" else "K of feed"
        span = f"{figure(min(curve['value']))} to {figure(max(curve['value']))}"
        found = "; ".join(turns) or "one steady state throughout"
        rows.append(paragraph(f"against {curve['parameter']} ({unit}, {span}): {found}"))
    return section("STEADY STATES OF THE TANK", rows, emphasis)


def paths(record, emphasis):
    """Give the class met by bad mixing and along the filling paths."""
    rows = []
    for p in record["paths"]:
        rows.append(line(p["where"], p["class"]) if len(p["where"]) <= 34 else f"{p['where']}: {p['class']}")
        if "tolerated" in p and p["tolerated"]["value"] is not None:
            share = figure(100 * p["tolerated"]["value"], 3)
            rows.append(paragraph(f"parcels stay {p['mean']} up to an intensity of segregation of {share} %", "    "))
    return section("BETWEEN THE STREAMS", rows, emphasis)


def table(record, emphasis):
    """Give the table row by row."""
    lines = []
    for row in record["rows"]:
        lines.append(emphasis(f"{row['id']}  {row['guideword']}: {row['parameter']}"))
        if row["assessed"] != "computed":
            lines.append(paragraph(f"{row['assessed']}: {row['why']}", "     "))
            continue
        lines.append(paragraph(f"{row['changed']}; class met: {row['class_reached']}", "     "))
        lines.append(paragraph("; ".join(words(row)), "     "))
        lines.append(paragraph(f"{row['acts']}. Usual: {row['safeguards']}", "     "))
        lines += [paragraph(text, "     - ") for text in row["assumptions"]]
    return section("UPSETS", lines, emphasis)


def words(row):
    """Return the figures of a row in words; a limit that is not reached is said."""
    found = []
    for key, unit, name in FIGURES:
        if key not in row["results"]:
            continue
        if key == "time_to_limit" and row["results"][key]["value"] is None:
            found.append("limit not reached")
        else:
            found.append(f"{name} {in_unit(row['results'][key], unit)}".removesuffix(" 1"))
    return found or ["class only"]


def leaks(record, emphasis):
    """Give, for each toxic substance, how far a leak has to be diluted."""
    worst: dict = {}
    for leak in record["leaks"]:
        if leak["figure"] in ("IDLH", "lower limit in air"):
            worst[leak["substance"]] = leak
    rows = []
    for name, leak in worst.items():
        label = f"{name}: {leak['figure']} {figure(1e6 * leak['fraction']['value'])} ppm"
        rows.append(line(label, f"{leak['times']['value']:.0f} times in the gas", leak["status"]))
    return section("WHAT COULD LEAK", rows, emphasis)


def assumed(record, emphasis):
    """List what the case did not state."""
    rows = [paragraph(f"{a['key']} = {a['value']}: {a['why']}", "  ", "    ") for a in record["assumed"]]
    return section("ASSUMED, NOT SUPPLIED", rows, emphasis)


def cautions(record, emphasis):
    """Print the cautions; there is no way to leave them out."""
    return section("CAUTIONS", [paragraph(text, "* ") for text in record["cautions"]], emphasis)


def worksheet_csv(record):
    """
    Return the table as CSV (RFC 4180): first the columns of a HAZOP worksheet, then the figures with units.

    Parameters
    ----------
    record : dict
        From `reactor.upsets.upset`, fresh or saved.
    """
    out = io.StringIO(newline="")
    writer = csv.writer(out)
    writer.writerow([*COLUMNS, "Class met", "Assessed", *(f"{name} [{unit}]" for _, unit, name in FIGURES)])
    for row in record["rows"]:
        said = "; ".join(words(row)) if row["assessed"] == "computed" else f"{row['assessed']}: {row['why']}"
        safeguards = f"{row['safeguards']} ({row['acts']})" if row["acts"] else row["safeguards"]
        writer.writerow(
            [
                row["id"],
                row["guideword"],
                row["parameter"],
                row["changed"],
                row["cause"],
                f"{row['consequence']}; {said}",
                safeguards,
                "; ".join(row["assumptions"]),
                "",
                "",
                row["class_reached"],
                row["assessed"],
                *(_plain(row["results"].get(key), unit) for key, unit, _ in FIGURES),
            ]
        )
    return out.getvalue()


def _plain(record, unit):
    """Return a number in its column's unit, empty where there is none."""
    if record is None or record["value"] is None:
        return ""
    return in_unit(record, unit).split(" ")[0]


def triangle_csv(data):
    """
    Return the triangle as CSV: one point a row, with what it belongs to and its class where it has one.

    Parameters
    ----------
    data : dict
        `ternary` of an upset record.
    """
    out = io.StringIO(newline="")
    writer = csv.writer(out)
    writer.writerow(["part", "fuel [1]", "chlorine [1]", "inert [1]", "class"])
    parts = [
        ("grid", data["grid"]),
        ("feed", data["feed"]),
        ("corner", data["corners"]),
        ("path", data["path"]),
    ]
    parts += [(one["name"], one) for one in data["lines"]]
    for name, points in parts:
        if points:
            size = len(points["fuel"])
            classes = points.get("class", [""] * size)
            rows = zip(points["fuel"], points["chlorine"], points["inert"], classes, strict=True)
            writer.writerows([name, *(f"{v:.6g}" for v in row[:3]), row[3]] for row in rows)
    return out.getvalue()
