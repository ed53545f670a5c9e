"""Points from a table: a CSV file with a column a key, `lamp.power [kW]`, and a row a point."""

import csv
import hashlib
from dataclasses import dataclass
from pathlib import Path

from reactor.errors import CaseError
from reactor.study.variation import Axis, axis, point


@dataclass(frozen=True)
class Scenarios:
    """The rows of a table as points; `texts` holds what each row types for each axis."""

    axes: tuple
    texts: tuple
    name: str = "table"

    @property
    def size(self):
        """Return the number of points."""
        return len(self.texts)

    @property
    def words(self):
        """Return how the size comes about."""
        return f"{self.size} rows of {self.name}"

    def spec(self):
        """Return what defines the points, as plain data."""
        digest = hashlib.sha256(repr(self.texts).encode()).hexdigest()
        return {"form": "table", "keys": [each.key for each in self.axes], "rows": digest}

    def points(self, start=0):
        """Yield the points from number `start` on."""
        for number in range(start, self.size):
            yield point(self.axes, number, self.texts[number])


def from_csv(path, case=None):
    """
    Return the `Scenarios` of a CSV file.

    Parameters
    ----------
    path : str or Path
        The header holds keys of the case, each with its unit in brackets where the cells hold bare numbers.
        Lines that begin with # are remarks.
    case : Case
        Resolves `feed.ratio`.

    Raises
    ------
    CaseError
        When the file cannot be read or a row has too few or too many cells; names the line.
    """
    try:
        text = Path(path).read_text(encoding="utf-8-sig")
    except (OSError, UnicodeDecodeError) as error:
        raise CaseError(f"{path}: cannot be read ({error}); a CSV file in UTF-8 is due") from None
    rows = [
        (n, row)
        for n, row in enumerate(csv.reader(text.splitlines()), 1)
        if row and not row[0].startswith("#")
    ]
    if len(rows) < 2:
        raise CaseError(f'{path}: a header line of keys and one row a point are due, like "lamp.power [kW]"')
    head = [cell.strip() for cell in rows[0][1]]
    faults = [
        f"{path}:{n}: {len(row)} cells, {len(head)} are due" for n, row in rows[1:] if len(row) != len(head)
    ]
    faults += [
        f"{path}:{n}: {key}: the cell is empty"
        for n, row in rows[1:]
        for key, cell in zip(head, row, strict=False)
        if not cell.strip()
    ]
    if faults:
        raise CaseError(faults)
    return table(head, [row for _, row in rows[1:]], case, Path(path).name)


def table(head, rows, case=None, name="table"):
    """Return the `Scenarios` of rows of cells under `head` (`key` or `key [unit]`)."""
    columns = []
    for place, title in enumerate(head):
        key, _, typed = title.partition(" [")
        typed = typed.rstrip("]")
        cells = [str(row[place]).strip() for row in rows]
        columns.append(
            axis(f"{key}=" + ",".join(f"{cell} {typed}".strip() for cell in cells), case)
            if not any("," in cell or ".." in cell for cell in cells)
            else Axis(key, "word", tuple(cells))
        )
    return Scenarios(tuple(columns), tuple(zip(*(column.values for column in columns), strict=True)), name)
