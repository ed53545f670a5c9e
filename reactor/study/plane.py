"""A plane of two inputs: cells that split where a boundary runs through them, and the lines in them."""

from dataclasses import dataclass
from typing import NamedTuple

from reactor.study.variation import Axis, point


class Cell(NamedTuple):
    """A square of the lattice: its lower corner and its size, in steps of the finest lattice."""

    i: int
    j: int
    size: int

    @property
    def corners(self):
        """Return the four corners, anticlockwise from the lower left."""
        i, j, s = self
        return (i, j), (i + s, j), (i + s, j + s), (i, j + s)

    @property
    def quarters(self):
        """Return the four cells that it splits into."""
        i, j, s = self.i, self.j, self.size // 2
        return [Cell(i + a, j + b, s) for a in (0, s) for b in (0, s)]


@dataclass(frozen=True)
class Plane:
    """
    The lattice of two axes.

    Parameters
    ----------
    x, y : Axis
        Ranges.
    cells : tuple of int
        Coarse cells along x and y.
    levels : int
        How often a cell may split.
    """

    x: Axis
    y: Axis
    cells: tuple
    levels: int

    @property
    def steps(self):
        """Return the steps of the finest lattice along x and y."""
        return self.cells[0] << self.levels, self.cells[1] << self.levels

    def coarse(self):
        """Return the cells to begin with."""
        size = 1 << self.levels
        return [Cell(i * size, j * size, size) for i in range(self.cells[0]) for j in range(self.cells[1])]

    def number(self, node):
        """Return the number of the point at a node."""
        return node[0] * (self.steps[1] + 1) + node[1]

    def point(self, node):
        """Return the `Point` at a node."""
        texts = [
            axis.at(place / steps)
            for axis, place, steps in zip((self.x, self.y), node, self.steps, strict=True)
        ]
        return point((self.x, self.y), self.number(node), texts)

    def si(self, place):
        """Return a place of the lattice, nodes or between them, as SI values of x and y."""
        return tuple(
            axis.si(axis.at(p / steps))
            for axis, p, steps in zip((self.x, self.y), place, self.steps, strict=True)
        )

    def spec(self):
        """Return what defines the plane, as plain data."""
        ranges = [[a.key, a.low, a.high, a.typed, a.log] for a in (self.x, self.y)]
        return {"form": "plane", "ranges": ranges, "cells": list(self.cells), "levels": self.levels}


def crossed(cell, fields):
    """Tell whether a boundary of `fields` ({node: value or None} each) runs through a cell."""
    for field in fields:
        signs = {None if field.get(node) is None else field[node] >= 0 for node in cell.corners}
        if len(signs) > 1:
            return True
    return False


def lines(cells, field, smooth=True):
    """
    Return the lines in the lattice where a field is 0, each a list of places.

    Parameters
    ----------
    cells : sequence of Cell
        The smallest cells, without overlap.
    field : dict
        {node: value or None}.
    smooth : bool
        Interpolate, else run midway between the nodes.

    Examples
    --------
    >>> field = {(0, 0): -1.0, (1, 0): 1.0, (1, 1): 3.0, (0, 1): -1.0}
    >>> lines([Cell(0, 0, 1)], field)
    [[(0.5, 0.0), (0.25, 1.0)]]
    """
    pieces = [piece for cell in cells for piece in _pieces(cell, field, smooth)]
    return _joined(pieces)


def _pieces(cell, field, smooth):
    """Return the straight pieces of the zero line inside one cell."""
    values = [field.get(node) for node in cell.corners]
    if any(value is None for value in values) or len({value >= 0 for value in values}) == 1:
        return []
    places = []
    for a, b in ((0, 1), (1, 2), (2, 3), (3, 0)):
        if (values[a] >= 0) != (values[b] >= 0):
            share = values[a] / (values[a] - values[b]) if smooth else 0.5
            places.append(
                tuple(
                    float(p + share * (q - p)) for p, q in zip(cell.corners[a], cell.corners[b], strict=True)
                )
            )
    if len(places) == 2:
        return [places]
    middle = sum(values) / 4 >= 0
    around = (places[:2], places[2:]) if middle == (values[0] >= 0) else ((places[3], places[0]), places[1:3])
    return [list(pair) for pair in around]


def _joined(pieces):
    """Return pieces with common ends joined to lines."""

    def key(place):
        return round(place[0], 9), round(place[1], 9)

    ends: dict = {}
    for number, piece in enumerate(pieces):
        for place in (piece[0], piece[-1]):
            ends.setdefault(key(place), []).append(number)
    left, found = set(range(len(pieces))), []
    for number in range(len(pieces)):
        if number in left:
            left.discard(number)
            line = _grown(list(pieces[number]), pieces, ends, left, key)
            found.append(_grown(line[::-1], pieces, ends, left, key)[::-1])
    return found


def _grown(line, pieces, ends, left, key):
    """Return a line with all free pieces that follow on at its end."""
    while (step := next((n for n in ends[key(line[-1])] if n in left), None)) is not None:
        left.discard(step)
        a, b = pieces[step]
        line.append(b if key(a) == key(line[-1]) else a)
    return line
