"""
Find and read `data/`: every number comes with its source and its status.

A table is a CSV file whose header gives the unit in brackets, as printed in the source:
`wavelength [nm],cross_section [cm^2],source,place,status,note`. Lines that begin with # are remarks.
A list of single numbers ("data sheet") has the columns
`name,value,unit,low,high,valid,source,place,status,note`.
"""

import csv
import tomllib
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import NamedTuple

import numpy as np

from reactor import units
from reactor.errors import CaseError

STATUS = ("seen", "computed", "estimate", "common practice", "memory", "invented")


class Cited(NamedTuple):
    """One number that a result relied on: what it is, the key of its source, how far to trust it."""

    what: str
    source: str
    status: str


@dataclass(frozen=True)
class Datum:
    """One number with its provenance; `value`, `low` and `high` are SI floats (low/high may be nan)."""

    name: str
    value: float
    unit: str
    low: float
    high: float
    valid: str
    source: str
    status: str
    note: str

    @property
    def cited(self):
        """Return the entry that a result lists for this number."""
        return Cited(self.name, self.source, self.status)


class Table:
    """A data file in columns: `si("wavelength")` gives SI floats, `text("source")` the words."""

    def __init__(self, path, rows):
        self.path, self.rows = path, rows
        self._header = {head.split(" [")[0]: head for head in rows[0]} if rows else {}

    def __len__(self):
        return len(self.rows)

    def text(self, column):
        """Return one column as words."""
        return [row[self._header[column]].strip() for row in self.rows]

    def si(self, column):
        """Return one column as an array of SI floats; an empty cell is nan."""
        head = self._header[column]
        unit = head.partition("[")[2].rstrip("]") or "-"
        numbers = [float(row[head]) if row[head].strip() else np.nan for row in self.rows]
        return units.to_si(np.array(numbers), unit)

    def where(self, column, value):
        """Return the rows whose `column` reads `value`, as a table."""
        head = self._header[column]
        return Table(self.path, [row for row in self.rows if row[head].strip() == value])

    def cited(self, what):
        """Return one entry for each pair of source and status that stands in this table."""
        pairs = dict.fromkeys(zip(self.text("source"), self.text("status"), strict=True))
        return tuple(Cited(what, source, status) for source, status in pairs)


@cache
def folder(name="data"):
    """Return the folder `data/` or `cases/`: inside the installed package, else beside it."""
    here = Path(__file__).parent
    for place in (here / name, here.parent / name):
        if place.is_dir():
            return place
    raise CaseError(f"the folder {name}/ that belongs to the program is missing; install it again")


@cache
def table(name):
    """Read `data/<name>` (a CSV file) as a `Table`."""
    return read(folder() / name)


def read(path):
    """Read any CSV file in the form described at the top of this module as a `Table`."""
    try:
        with open(path, encoding="utf-8", newline="") as file:
            rows = list(csv.DictReader(line for line in file if not line.startswith("#")))
    except OSError as error:
        raise CaseError(f"{path}: cannot be read ({error.strerror}); check the path") from None
    if not rows:
        raise CaseError(f"{path}: holds no row; a header line and at least one row are needed")
    return Table(path, rows)


@cache
def sheet(name):
    """Read `data/<name>` (a list of single numbers) as {name: Datum}."""
    data = {}
    for row in table(name).rows:
        numbers = [float(row[key]) if row[key].strip() else np.nan for key in ("value", "low", "high")]
        value, low, high = (float(units.to_si(number, row["unit"])) for number in numbers)
        words = (row["valid"], row["source"], row["status"], row["note"])
        data[row["name"]] = Datum(row["name"], value, row["unit"], low, high, *words)
    return data


@cache
def sources():
    """Return every source the data cite, {key: {title, author, where, seen}}."""
    found: dict[str, dict] = {}
    for path in sorted((folder() / "sources").glob("*.toml")):
        with open(path, "rb") as file:
            found |= tomllib.load(file)
    return found
