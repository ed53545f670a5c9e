"""Order and fill of a sparse elimination without pivoting, found once per mechanism."""

import heapq
from typing import NamedTuple

import numpy as np


class Elimination(NamedTuple):
    """
    The matrix by rows with its fill, and what each step of the elimination touches.

    Row i holds places row[i] to row[i + 1]; `diagonal` is the place of each pivot. Each entry below the diagonal
    (`lower_at`, by rows in `lower_row`) subtracts a multiple of its pivot's row from the places `update_to`, from
    `update_first` on.
    """

    row: np.ndarray
    column: np.ndarray
    diagonal: np.ndarray
    lower_at: np.ndarray
    lower_row: np.ndarray
    update_first: np.ndarray
    update_to: np.ndarray

    def place(self, i, k):
        """Return where entry (i, k) stands."""
        start = self.row[i]
        return int(start + np.searchsorted(self.column[start:self.row[i + 1]], k))


def order_species(pattern, species):
    """
    Return the species in the order of elimination that makes little fill: fewest (row - 1) (column - 1) first.

    Parameters
    ----------
    pattern : iterable of (int, int)
        Entries (row, column) that are not zero.
    species : int
        Number of species.
    """
    rows, columns = [{i} for i in range(species)], [{i} for i in range(species)]
    for i, k in pattern:
        rows[i].add(k)
        columns[k].add(i)
    heap = [(0, i) for i in range(species)]
    order, done = [], set()
    while heap:
        cost, k = heapq.heappop(heap)
        if k in done:
            continue
        now = (len(rows[k]) - 1) * (len(columns[k]) - 1)
        if now > cost:
            heapq.heappush(heap, (now, k))
            continue
        order.append(k)
        done.add(k)
        above, left = rows[k] - {k}, columns[k] - {k}
        for i in left:
            rows[i] |= above
            rows[i].discard(k)
        for i in above:
            columns[i] |= left
            columns[i].discard(k)
        for i in above | left:
            heapq.heappush(heap, ((len(rows[i]) - 1) * (len(columns[i]) - 1), i))
    return np.array(order)


def eliminate(pattern, size):
    """
    Return the `Elimination` of a matrix of `size` rows in the given order.

    Parameters
    ----------
    pattern : iterable of (int, int)
        Entries (row, column) that are not zero; the diagonal is added.
    size : int
        Number of rows.
    """
    rows = [{i} for i in range(size)]
    for i, k in pattern:
        rows[i].add(k)
    above: list = []
    for i in range(size):
        for k in range(i):
            if k in rows[i]:
                rows[i] |= above[k]
        above.append({j for j in rows[i] if j > i})
    column = [sorted(r) for r in rows]
    row = np.concatenate(([0], np.cumsum([len(c) for c in column])))
    place = [{k: int(row[i]) + n for n, k in enumerate(c)} for i, c in enumerate(column)]
    lower = [[(place[i][k], [place[i][j] for j in sorted(above[k])]) for k in c if k < i]
             for i, c in enumerate(column)]
    flat = [entry for entries in lower for entry in entries]
    counts = [len(to) for _, to in flat]
    return Elimination(
        row, np.concatenate(column), np.array([place[i][i] for i in range(size)]),
        np.array([at for at, _ in flat], int), np.concatenate(([0], np.cumsum([len(e) for e in lower]))),
        np.concatenate(([0], np.cumsum(counts))).astype(int),
        np.array([t for _, to in flat for t in to], int),
    )
