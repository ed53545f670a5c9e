"""Where the numbers come from and how far to trust them, for `reactor sources`."""

from reactor import library
from reactor.report.terminal import paragraph

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


def relied_on(cited):
    """
    Return the provenance of what one case relies on, weakest first.

    Parameters
    ----------
    cited : sequence of Cited
        What, source key and status of every number.
    """
    text = [f"{len(cited)} numbers relied on", ""]
    for status in sorted({c.status for c in cited}, key=_rank):
        block = [c for c in cited if c.status == status]
        text += [f"{status.upper()} - {MEANING.get(status, '')} ({len(block)})"]
        text += [paragraph(f"{c.what} [{c.source}]", "  ", "      ") for c in block]
        text.append("")
    return "\n".join([*text, *_titles({c.source for c in cited}), ""])


def all_sources():
    """Return the provenance of all that the program ships: each data file with its rows by status, then the sources."""
    text = []
    for path in sorted(library.folder().rglob("*.csv")):
        table = library.read(path)
        count = {status: table.text("status").count(status) for status in library.STATUS}
        named = ", ".join(f"{number} {status}" for status, number in count.items() if number)
        text.append(paragraph(f"{path.relative_to(library.folder()).as_posix()}: {named}", "", "    "))
        text += _weak_rows(table)
    return "\n".join([*text, "", *_titles(library.sources()), ""])


def _weak_rows(table):
    """Return the weak entries of a list of single numbers, by name."""
    if "name" not in table.rows[0] or "value" not in table.rows[0]:
        return []
    return [paragraph(f"{row['name']} = {row['value']} {row['unit']} ({row['status']}, {row['source']})", "    ", "        ")
            for row in table.rows if row["status"] in WEAK]


def _titles(keys):
    known = library.sources()
    text = ["SOURCES"]
    for key in sorted(keys):
        source = known.get(key)
        if source:
            parts = [source["title"], source.get("author", ""), source.get("where", ""), f"seen: {source['seen']}"]
            text.append(paragraph(f"{key}: " + "; ".join(part for part in parts if part), "  ", "      "))
    return text


def _rank(status):
    return (status not in WEAK, status)
