"""Exports of a saved result."""

import csv
import io


def profile_csv(result):
    """
    Return the profile as CSV (RFC 4180), one station a row, the unit in each header.

    Parameters
    ----------
    result : Result
        A rated case.

    Returns
    -------
    text : str
        Lines end in CR LF, as the standard asks.
    """
    out = io.StringIO(newline="")
    writer = csv.writer(out)
    writer.writerow(result.profile)
    writer.writerows(zip(*result.profile.values(), strict=True))
    return out.getvalue()


def study_csv(columns, rows, file):
    """
    Write the points of a study as CSV, one a line, the unit in each header.

    Parameters
    ----------
    columns : dict
        {name: unit}.
    rows : iterable of tuple
        The points, in the order of the columns.
    file : text file
        Where to write, opened without translation of line ends.
    """
    writer = csv.writer(file)
    writer.writerow([name if unit in ("1", "word", "") else f"{name} [{unit}]" for name, unit in columns.items()])
    writer.writerows(rows)


def contour_csv(block, file):
    """
    Write the boundaries and lines of a map as CSV: what, which piece, x and y in SI.

    Parameters
    ----------
    block : dict
        The block `window` of a study file.
    file : text file
        Where to write, opened without translation of line ends.
    """
    writer = csv.writer(file)
    heads = [axis["key"] if axis["unit"] in ("1", "word") else f"{axis['key']} [{axis['unit']}]" for axis in
             (block["x"], block["y"])]
    writer.writerow(["boundary", "kind", "piece", *heads])
    for rule in block["rules"]:
        for piece, line in enumerate(rule["lines"], 1):
            writer.writerows([rule["name"], "limit" if rule["forbids"] else "line", piece, x, y] for x, y in line)
