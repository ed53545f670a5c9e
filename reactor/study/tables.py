"""Read a study file: what was asked, the columns with their units, the points."""

import json
from dataclasses import dataclass

from reactor.study.file import FIXED, facts, reading


@dataclass(frozen=True)
class Tables:
    """
    A study as plain tables.

    Parameters
    ----------
    about : dict
        What was asked: kind, title, case (TOML text), identity (hashes), design, size, part, and the blocks
        that the study's command added, such as `bands` or `window`.
    units : dict
        {column: SI unit, or kg/h, or "word"}; inputs first, then results.
    inputs, results : tuple of str
        Names of the columns.
    points : dict
        {column: list}, also number, state, reason, seconds, overrides.
    more : list of dict
        Of each point what is no column: shares and products by species, verdicts.
    """

    about: dict
    units: dict
    inputs: tuple
    results: tuple
    points: dict
    more: list

    def __len__(self):
        return len(self.points["number"])

    @property
    def failed(self):
        """Return [(number, reason)] of the points that failed."""
        rows = zip(self.points["number"], self.points["state"], self.points["reason"], strict=True)
        return [(number, reason) for number, state, reason in rows if state == "failed"]

    @property
    def missing(self):
        """Return how many points of the study, or of its part, are not in the file yet."""
        return max(0, self.about.get("due", self.about["size"]) - len(self))

    def frame(self):
        """Return the points as a pandas DataFrame: inputs and results, units in `attrs["units"]`."""
        import pandas

        frame = pandas.DataFrame(
            {name: self.points[name] for name in ("number", *self.inputs, *self.results)}
        )
        for name in ("state", "reason"):
            frame[name] = self.points[name]
        frame = frame.set_index("number")
        frame.attrs["units"] = dict(self.units)
        frame.attrs["about"] = {
            key: self.about[key] for key in ("kind", "title", "identity") if key in self.about
        }
        return frame


def read(path):
    """
    Return a study file as `Tables`; safe while the study runs.

    Parameters
    ----------
    path : str or Path
        The file that `reactor sweep`, `band`, `window` or `frontier` wrote.

    Raises
    ------
    CaseError
        When it is no study file.
    """
    with reading(path) as connection:
        about = facts(connection, path)
        columns = connection.execute("SELECT name, unit, role FROM columns ORDER BY place").fetchall()
        names = [*FIXED, *(name for name, _, _ in columns)]
        listed = ",".join('"' + name.replace('"', '""') + '"' for name in names)
        rows = connection.execute(f"SELECT {listed} FROM points ORDER BY number").fetchall()
    points = {name: [row[i] for row in rows] for i, name in enumerate(names)}
    more = [json.loads(text) for text in points.pop("more")]
    points["overrides"] = [json.loads(text) for text in points["overrides"]]
    role = {
        wanted: tuple(name for name, _, role in columns if role == wanted) for wanted in ("input", "result")
    }
    return Tables(
        about, {name: unit for name, unit, _ in columns}, role["input"], role["result"], points, more
    )


def stream(path, names, batch=1000):
    """Yield tuples of the named columns, point by point, without holding them all."""
    listed = ",".join('"' + name.replace('"', '""') + '"' for name in names)
    with reading(path) as connection:
        last = -1
        while rows := connection.execute(
            f"SELECT number,{listed} FROM points WHERE number > ? ORDER BY number LIMIT ?", (last, batch)
        ).fetchall():
            last = rows[-1][0]
            for row in rows:
                yield row[1:]


@dataclass(frozen=True)
class Overview:
    """
    A study in numbers, taken from the file without loading its points.

    `ranges` holds (column, unit, lowest, highest) of the done points, `words` {column: {word: count}},
    `reasons` [(reason, count, first point)] of the failed ones.
    """

    about: dict
    done: int
    failed: int
    ranges: list
    words: dict
    reasons: list
    columns: tuple

    @property
    def missing(self):
        """Return how many points of the study, or of its part, are not in the file yet."""
        return max(0, self.about.get("due", self.about["size"]) - self.done - self.failed)


def overview(path):
    """Return the `Overview` of a study file; safe while the study runs."""
    with reading(path) as connection:
        about = facts(connection, path)
        columns = connection.execute("SELECT name, unit, role FROM columns ORDER BY place").fetchall()
        count = dict(connection.execute("SELECT state, count(*) FROM points GROUP BY state"))
        ranges, words = [], {}
        for name, unit, _ in columns:
            quoted = '"' + name.replace('"', '""') + '"'
            if unit == "word":
                words[name] = dict(
                    connection.execute(
                        f"SELECT {quoted}, count(*) FROM points WHERE state='done' "
                        f"AND {quoted} IS NOT NULL GROUP BY {quoted} LIMIT 50"
                    )
                )
            else:
                ranges.append(
                    (
                        name,
                        unit,
                        *connection.execute(
                            f"SELECT min({quoted}), max({quoted}) FROM points WHERE state='done'"
                        ).fetchone(),
                    )
                )
        reasons = connection.execute(
            "SELECT reason, count(*), min(number) FROM points WHERE state='failed' "
            "GROUP BY reason ORDER BY 2 DESC LIMIT 12"
        ).fetchall()
    return Overview(
        about, count.get("done", 0), count.get("failed", 0), ranges, words, reasons, tuple(columns)
    )
