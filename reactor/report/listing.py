"""What a case says, for `reactor check`: typed, assumed, taken from the data, overridden."""

from reactor.report.layout import entry, paragraph


def listing(case):
    """
    Return the entries of a checked case as text.

    Parameters
    ----------
    case : Case
        A case without faults (faults are reported before one exists).
    """
    rows = case.listing()
    text = [paragraph(case.title), ""]
    for origin, heading in (
        ("typed", "TYPED"),
        ("assumed", "ASSUMED, not supplied"),
        ("data", "TAKEN FROM THE DATA"),
    ):
        block = [_row(*row) for row in rows if row[3] == origin]
        text += [f"{heading} ({len(block)})", *block, ""] if block else []
    text += [
        paragraph(f"changed on the command line: {key} = {new} (file: {old})", "", "    ")
        for key, old, new in case.deviations
    ]
    return "\n".join([*text, f"case {case.hash()[:12]}: no fault found", ""])


def _row(key, typed, si, origin, why):
    if origin == "typed":
        return entry(key, typed, si)
    return paragraph(f"{key} = {si}: {why}" if si not in ("", "None") else f"{key}: {why}", "", "    ")
