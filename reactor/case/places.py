"""Find the line on which each key of a TOML text stands; `tomllib` does not tell."""

import re

_PART = r"""(?:"[^"\n]*"|'[^'\n]*'|[A-Za-z0-9_-]+)"""
_KEY = rf"{_PART}(?:\s*\.\s*{_PART})*"
_HEADER = re.compile(rf"\s*(\[\[?)\s*({_KEY})\s*\]")
_PAIR = re.compile(rf"\s*({_KEY})\s*=")
_TOKEN = re.compile(r'''"""|\'\'\'|"(?:\\.|[^"\\])*"|'[^']*'|#.*|[\[\]{}]''')


def lines(text):
    r"""
    Return {dotted key: line number}; entries of an array of tables are counted from 1.

    Examples
    --------
    >>> lines('[[lamp]]\npower = "1 kW"\n[vessel]\nlength = "3 m"')
    {'lamp.1': 1, 'lamp': 1, 'lamp.1.power': 2, 'vessel': 3, 'vessel.length': 4}
    """
    found: dict[str, int] = {}
    counts: dict[str, int] = {}
    prefix, open_string, depth = "", "", 0
    for number, line in enumerate(text.splitlines(), start=1):
        rest = line
        if not open_string and not depth:
            if header := _HEADER.match(line):
                prefix = _prefix(header[2], header[1] == "[[", counts)
                found.setdefault(prefix, number)
                found.setdefault(_dotted(header[2]), number)
                continue
            if pair := _PAIR.match(line):
                found.setdefault(".".join(filter(None, (prefix, _dotted(pair[1])))), number)
                rest = line[pair.end() :]
        open_string, depth = _left_open(rest, open_string, depth)
    return found


def _dotted(key):
    """Return a TOML key without its quotes and spaces."""
    return ".".join(part.strip("\"'") for part in re.findall(_PART, key))


def _prefix(key, array, counts):
    """Return the dotted name of a table header; the entry's number is put behind an array of tables."""
    name = ""
    parts = _dotted(key).split(".")
    for place, part in enumerate(parts):
        name = f"{name}.{part}" if name else part
        if array and place == len(parts) - 1:
            counts[name] = counts.get(name, 0) + 1
        if name in counts:
            name = f"{name}.{counts[name]}"
    return name


def _left_open(text, open_string, depth):
    """Return the multi-line string and the bracket depth that are still open at the end of a line."""
    if open_string:
        _, closed, text = text.partition(open_string)
        if not closed:
            return open_string, depth
    place = 0
    while token := _TOKEN.search(text, place):
        place = token.end()
        if token[0] in ('"""', "'''"):
            end = text.find(token[0], place)
            if end < 0:
                return token[0], depth
            place = end + 3
        elif token[0] in "[{":
            depth += 1
        elif token[0] in "]}":
            depth = max(0, depth - 1)
    return "", depth


def line_of(places, key):
    """Return the line of a key, or of the nearest table around it; 0 when there is none."""
    while key:
        if key in places:
            return places[key]
        key = key.rpartition(".")[0]
    return 0
