"""Lines of text: 80 columns, ASCII, nothing lost when piped."""

import re
import textwrap

WIDTH = 80
LABEL = 34
GLUED = re.compile(
    r"(?<=\d) (?=(?:degC|K|ppm|mbar|m|s|W|%|kg/h|mol %)(?:[\s,;.)]|$))"
)  # number and unit stay together


def section(heading, lines, emphasis):
    """Return a block under its heading; nothing when there are no lines."""
    rule = "-" * (WIDTH - len(heading) - 1)
    return "\n".join([emphasis(f"{heading} {rule}"), *lines, ""]) if lines else ""


def paragraph(text, first="", rest=None):
    """Return text folded to the width, with a hanging first mark."""
    rest = " " * len(first) if rest is None else rest
    glued = GLUED.sub("\0", text)
    return textwrap.fill(
        glued, WIDTH, initial_indent=first, subsequent_indent=rest, break_on_hyphens=False
    ).replace("\0", " ")


def line(label, value, note=""):
    """Return one row: label, value, remark; what does not fit goes on below."""
    row = f"{label:<{LABEL}} {value}"
    if len(row) > WIDTH:
        row = paragraph(label) + "\n" + paragraph(value, " " * (LABEL + 1))
    if not note:
        return row
    joined = f"{row:<52} {note}"
    return joined if len(joined) <= WIDTH else row + "\n" + paragraph(note, " " * (LABEL + 1))


def entry(key, typed, si):
    """Return one row of the design basis: key, as typed, in SI; long ones go on below."""
    si = "" if si == typed else si
    row = f"{key:<34} {typed:<24} {si}".rstrip()
    if len(row) <= WIDTH and len(key) <= 34:
        return row
    value = f"{typed:<24} {si}".rstrip()
    below = " " * 35 + value
    return f"{paragraph(key)}\n" + (
        below if len(below) <= WIDTH else paragraph(" ".join(value.split()), " " * 4)
    )
