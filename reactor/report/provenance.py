"""Where the numbers come from and how far to trust them, for `reactor sources`."""

from reactor import library
from reactor.report.layout import WIDTH, paragraph

WEAK = ("memory", "estimate", "common practice", "invented")
MEANING = {
    "seen": "read in the named document or package",
    "computed": "calculated from seen numbers",
    "estimate": "judged or derived by analogy",
    "common practice": "usual in the trade, no document",
    "memory": "recalled, the document not at hand: check before relying on it",
    "invented": "made up for an example",
    "as typed": "supplied by the user",
}


def relied_on(cited, rates):
    """
    Return the provenance of what one case relies on, weakest first.

    Parameters
    ----------
    cited : sequence of Cited
        What, source key and status of every number.
    rates : sequence of dict
        The rate constants, see `rate_rows`.
    """
    text = [f"{len(cited)} kinds of numbers by source and status", ""]
    for status in sorted({c.status for c in cited}, key=_rank):
        block = [c for c in cited if c.status == status]
        text += [f"{status.upper()} - {MEANING.get(status, 'not stated')} ({len(block)})"]
        text += [paragraph(f"{c.what} [{c.source}]", "  ", "      ") for c in block]
        text.append("")
    keys = {c.source for c in cited} | {rate["source"] for rate in rates}
    return "\n".join([*text, *rate_rows(rates), "", *_titles(keys), ""])


def all_sources(cited, rates):
    """
    Return the provenance of all that the program ships: data files, mechanism, rate constants, sources.

    Parameters
    ----------
    cited : sequence of Cited
        The kinds of numbers in the mechanism.
    rates : sequence of dict
        The rate constants, see `rate_rows`.
    """
    text = []
    for path in sorted(library.folder().rglob("*.csv")):
        table = library.read(path)
        count = {status: table.text("status").count(status) for status in library.STATUS}
        named = ", ".join(f"{number} {status}" for status, number in count.items() if number)
        text.append(paragraph(f"{path.relative_to(library.folder()).as_posix()}: {named}", "", "    "))
        text += _weak_rows(table)
    text += ["", "MECHANISM, thermodynamic and transport data"]
    text += [
        f"  {c.what}: {c.status} [{c.source}]"
        for c in sorted(cited, key=lambda c: (c.what, _rank(c.status)))
        if c.what != "rate constants"
    ]
    return "\n".join([*text, "", *rate_rows(rates), "", *_titles(library.sources()), ""])


def rate_rows(rates):
    """
    Return the rate constants as lines, in the order given: the most uncertain first.

    Parameters
    ----------
    rates : sequence of dict
        Records of what (the reaction), factor (uncertainty at 298 K), valid (from, to K), source, status.
    """
    rows = [
        f"RATE CONSTANTS, the most uncertain first ({len(rates)})",
        f"{'factor':>6}{'valid, K':>13}  reaction",
    ]
    for rate in rates:
        factor = f"{rate['factor']:.2f}" if rate["factor"] > 0 else "-"
        low, high = rate["valid"]
        valid = f"{low:.0f} to {high:.0f}" if low < high else f"{low:.0f}" if low == high else "-"
        head = f"{factor:>6}{valid:>13}  "
        text = f"{rate['what']}  {rate['status']} [{rate['source']}]"
        rows.append(
            head + text
            if len(head + text) <= WIDTH
            else paragraph(rate["what"], head) + "\n" + " " * len(head) + text[len(rate["what"]) + 2 :]
        )
    return rows


def _weak_rows(table):
    """Return the weak entries of a list of single numbers, by name."""
    if "name" not in table.rows[0] or "value" not in table.rows[0]:
        return []
    return [
        paragraph(
            f"{row['name']} = {row['value']} {row['unit']} ({row['status']}, {row['source']})",
            "    ",
            "        ",
        )
        for row in table.rows
        if row["status"] in WEAK
    ]


def _titles(keys):
    known = library.sources()
    text = ["SOURCES"]
    for key in sorted(keys):
        source = known.get(key)
        if source:
            parts = [
                source["title"],
                source.get("author", ""),
                source.get("where", ""),
                f"seen: {source['seen']}",
            ]
            text.append(paragraph(f"{key}: " + "; ".join(part for part in parts if part), "  ", "      "))
    return text


def _rank(status):
    return (status not in WEAK, status)
