"""Studies in words: what a sweep found, what a rerun differs in."""

from reactor.report.numbers import figure

SHOWN = ("conversion_chlorine", "chlorine_slip", "poly_share_mol", "temperature_hottest", "exotherm_margin")


def announced(tally, words, path):
    """Return the sentence that says the size of a study before it runs."""
    skipped = f"; skipping {tally.skipped} of {tally.size} done" if tally.skipped else ""
    return f"{tally.size} points ({words}) into {path}{skipped}"


def summary(found, path, emphasis=str):
    """
    Return what a sweep found: counts, ranges of the inputs and of the main results, verdicts, failures.

    Parameters
    ----------
    found : Overview
        Of the study file.
    path : str
        Its name.
    emphasis : callable
        Wraps headings for a terminal.
    """
    inputs = {name for name, _, role in found.columns if role == "input"}
    lines = [
        emphasis(found.about["title"]),
        f"{found.done + found.failed} points in {path}: {found.done} done, "
        f"{found.failed} failed, {found.missing} missing",
        "",
        f"{'column':<38}{'unit':>7}{'lowest':>13}{'highest':>13}",
    ]
    for name, unit, low, high in found.ranges:
        if name in (*inputs, *SHOWN) and low is not None:
            lines.append(f"{name:<38}{unit:>7}{figure(low):>13}{figure(high):>13}")
    lines += [
        f"{name:<38}{'word':>7}  {', '.join(words)}" for name, words in found.words.items() if name in inputs
    ]
    if worst := found.words.get("worst"):
        lines += ["", "worst verdict: " + ", ".join(f"{word} at {n}" for word, n in worst.items())]
    if found.reasons:
        lines += ["", "failed:"]
        lines += [
            f"  {n} x, first point {first}: {reason.splitlines()[0]}" for reason, n, first in found.reasons
        ]
    return "\n".join(lines) + "\n"


def checked(check, claims, fail_on):
    """Return what claims and verdicts say, point by point where they break."""
    lines = [f"does not hold at point {number}: {claim.text}" for claim, number in check.broken]
    lines += [f"{word} at point {number}" for number, word in check.bad]
    if not lines:
        asked = [claim.text for claim in claims] + ([f"no point at {fail_on} or worse"] if fail_on else [])
        lines = [f"holds at every point: {text}" for text in asked]
    return "\n".join(lines) + "\n"


def differences(again):
    """Return what a point made again differs in."""
    lines = [f"point {again.number}: {' '.join(again.overrides)}"]
    lines += [f"{what} differs: {old[:12]} then, {str(new)[:12]} now" for what, old, new in again.identity]
    if again.row.state != again.state:
        lines.append(f"was {again.state}, is {again.row.state} now ({again.row.reason or 'it works now'})")
    for name, unit, old, new in again.numbers:
        change = ""
        if isinstance(old, float) and isinstance(new, float) and old:
            change = f" ({100 * (new / old - 1):+.3g} %)"
        lines.append(
            f"{name}: {old!r} then, {new!r} now {unit if unit not in ('1', 'word') else ''}{change}".rstrip()
        )
    lines.append(
        "the same to the last digit"
        if again.same
        else f"{len(again.numbers)} of {again.compared} results differ"
    )
    return "\n".join(lines) + "\n"


def _range(name, axis):
    """Say what an axis of a map runs over."""
    text = f"{name}: {axis['key']} from {figure(axis['low'])} to {figure(axis['high'])} {axis['unit']}"
    return text.removesuffix(" 1")


def mapped(found, path, emphasis=str):
    """Return what a map found: how much is allowed, what forbids the rest."""
    block = found.about["window"]
    x, y = block["x"], block["y"]
    lines = [
        emphasis(found.about["title"]),
        f"{found.done + found.failed} points in {path}, {found.failed} failed",
        "",
        _range("across", x),
        _range("upwards", y),
        f"allowed: {100 * block['free_share']:.0f} % of the map (an estimate)",
        "",
    ]
    for rule in sorted(block["rules"], key=lambda rule: -rule["share"]):
        if rule["forbids"] and rule["share"] > 0:
            edge = f", boundary in {len(rule['lines'])} piece(s)" if rule["lines"] else ", everywhere"
            lines.append(f"{rule['name']}: forbids {100 * rule['share']:.0f} % of the map{edge}")
        elif not rule["forbids"]:
            lines.append(f"line {rule['name']}: {len(rule['lines'])} piece(s)")
    return "\n".join(lines) + "\n"


def front(found, path, emphasis=str):
    """Return the front that a search found, the knee marked."""
    block = found.about["frontier"]
    units = {name: unit for name, unit, _ in found.columns}
    lines = [
        emphasis(found.about["title"]),
        f"{found.done + found.failed} points in {path}, {found.failed} failed; {block['counted']} count",
        "",
    ]
    if not block["points"]:
        return (
            "\n".join(
                [
                    *lines,
                    "no point counts: every one fails a verdict or breaks a claim (--failing counts them)",
                ]
            )
            + "\n"
        )
    names = list(dict.fromkeys([name for name, _ in block["goals"]] + list(block["points"][0]["inputs"])))
    signs = {name: "min" if sign > 0 else "max" for name, sign in block["goals"]}
    width = {name: max(12, len(name) + 6) for name in names}
    lines.append(
        "".join(f"{name + (' ' + signs[name] if name in signs else ''):>{width[name]}}" for name in names)
    )
    lines.append("".join(f"{units[name]:>{width[name]}}" for name in names))
    for row in block["points"]:
        values = row["inputs"] | row["goals"]
        text = "".join(
            f"{figure(values[name]) if isinstance(values[name], float) else values[name]:>{width[name]}}"
            for name in names
        )
        lines.append(text + ("   <- knee" if row["number"] == block["knee"] else ""))
    return "\n".join(lines) + "\n"
