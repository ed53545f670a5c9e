"""The operating window: a map over two inputs, its boundaries refined, its forbidden zones by name."""

from reactor.errors import CaseError
from reactor.study import rated
from reactor.study.file import writing
from reactor.study.plane import Plane, crossed, lines
from reactor.study.points import Job
from reactor.study.rules import NO_ANSWER, rules
from reactor.study.run import Tally, run
from reactor.study.sweeps import Crew, about
from reactor.study.tables import read
from reactor.study.variation import Spaced, axis
from reactor.units import from_si

CELLS, LEVELS = 6, 2
REACH = 3.0  # a range that is not typed runs from a third of the case's value to three times


def plane(case, x, y, cells=CELLS, levels=LEVELS):
    """
    Return the `Plane` over two inputs.

    Parameters
    ----------
    case : Case
        The case.
    x, y : str
        `lamp.power=0.5..5 kW, log`, or only `lamp.power`: then from a third to three times the case's value.
    cells : int
        Coarse cells along each axis; `0.5..5 kW, 9` asks for 8 along its own.
    levels : int
        How often a cell that a boundary runs through is quartered.
    """
    axes = [_axis(text, case) for text in (x, y)]
    if axes[0].key == axes[1].key:
        raise CaseError(f"--y {axes[1].key}: is on the other axis already")
    counts = tuple(len(a.values) - 1 if isinstance(a.values, Spaced) else cells for a in axes)
    return Plane(axes[0], axes[1], counts, levels)


def _axis(text, case):
    """Return the axis of a text; without a range it lies round the value of the case."""
    if "=" in text:
        found = axis(text, case)
        if found.low != found.low:
            raise CaseError(f'"{text}": a map wants a range, like "{found.key}=1..5"')
        return found
    key = axis(f"{text}=1", case).key
    typed = {name: value for name, value in case.typed.items() if _without_number(name) == key or name == key}
    if not typed or not isinstance(next(iter(typed.values())).si, float):
        raise CaseError(f'{key}: has no typed number in the case; give its range, like "{key}=1..5"')
    value = next(iter(typed.values()))
    number, _, unit = value.text.partition(" ")
    if float(number) <= 0 or unit in ("degC", "degF", "barg", "psig"):
        raise CaseError(f'{key}: give its range, like "{key}=20..40 {unit}"')
    low, high = float(number) / REACH, float(number) * REACH
    return axis(f"{key}={low:.4g}..{high:.4g} {unit}, log".replace(" ,", ","), case)


def _without_number(key):
    """Return a key without the number of an entry, `lamp.1.power` as `lamp.power`."""
    return ".".join(part for part in key.split(".") if not part.isdigit())


def window(
    case,
    place,
    path,
    *,
    claims=(),
    contours=(),
    crew=None,
    fresh=False,
    tell=lambda tally: None,
    announce=lambda tally: None,
    evaluator=rated.__name__,
    columns=None,
):
    """
    Map a case over a plane into a study file; cells that a boundary runs through are quartered.

    Parameters
    ----------
    case : Case
        The case; its limits are the boundaries.
    place : Plane
        Where.
    path : str or Path
        The study file; the same map goes on where it was.
    claims, contours : sequence of Claim
        Further limits; lines to draw.
    crew : Crew
        Who works.

    Returns
    -------
    tally : Tally
        The block `window` is in the file.
    """
    asked = rules(case, claims, contours)
    settings = None
    steps = place.steps
    what = about(
        "window", case, evaluator, (place.x, place.y), place.spec(), (steps[0] + 1) * (steps[1] + 1), settings
    )
    cells = place.coarse()
    tally = Tally(len(_nodes(cells)))
    crew = crew or Crew()
    with (
        writing(path, what, columns or rated.columns(), fresh) as file,
        crew.at_work(Job(evaluator, case, crew.budget)) as at,
    ):
        tally.skipped = len(file.numbers() & {place.number(node) for node in _nodes(cells)})
        announce(tally)
        for level in range(place.levels + 1):
            done = file.numbers()
            nodes = _nodes(cells)
            tally.size, tally.finished = len(nodes), 0
            tally.skipped = sum(place.number(node) in done for node in nodes)
            run(file, [place.point(n) for n in nodes if place.number(n) not in done], at, tally, tell)
            fields = _fields(path, place, nodes, asked)
            if level < place.levels:
                cells = [
                    part for cell in cells for part in (cell.quarters if crossed(cell, fields) else [cell])
                ]
        file.note("due", len(nodes))
        file.note("window", block(place, cells, asked, fields) | {"case": _own(case, place)})
    return tally


def _own(case, place):
    """Return where the case itself lies in the map, or None."""
    found = []
    for axis_ in (place.x, place.y):
        typed = [value.si for key, value in case.typed.items() if axis_.key in (key, _without_number(key))]
        if len(typed) != 1 or not isinstance(typed[0], int | float):
            return None
        found.append(float(typed[0]))
    inside = [
        axis_.low <= from_si(value, axis_.typed or "-") <= axis_.high
        for axis_, value in zip((place.x, place.y), found, strict=True)
    ]
    return found if all(inside) else None


def _nodes(cells):
    """Return the corners of all cells, in order, each once."""
    return sorted({node for cell in cells for node in cell.corners})


def _fields(path, place, nodes, asked):
    """Return {node: value} of every rule."""
    tables = read(path)
    found = {}
    for i, number in enumerate(tables.points["number"]):
        if tables.points["state"][i] == "done":
            values = {name: tables.points[name][i] for name in tables.results}
            found[number] = values, tables.more[i]
    failed = {rule.name: -1.0 if rule.name == NO_ANSWER else None for rule in asked}
    return [
        {
            node: rule.value(*found[n]) if (n := place.number(node)) in found else failed[rule.name]
            for node in nodes
        }
        for rule in asked
    ]


def block(place, cells, asked, fields):
    """Return the map as plain data: axes, nodes and cells, rules with their lines in SI and shares."""
    nodes = sorted(fields[0])
    rows = []
    for rule, field in zip(asked, fields, strict=True):
        known = [value for value in field.values() if value is not None]
        if not known:
            continue
        drawn = [[place.si(p) for p in line] for line in lines(cells, field, rule.smooth)]
        outside = sum(cell.size**2 for cell in cells if _mean(cell, field) < 0)
        rows.append(
            {
                "name": rule.name,
                "forbids": rule.forbids,
                "smooth": rule.smooth,
                "lines": drawn,
                "share": outside / (place.steps[0] * place.steps[1]),
                "values": [field[node] for node in nodes],
            }
        )
    free = sum(
        cell.size**2
        for cell in cells
        if all(_mean(cell, f) >= 0 for r, f in zip(asked, fields, strict=True) if r.forbids)
    )
    where = {node: i for i, node in enumerate(nodes)}
    return {
        "x": _described(place.x),
        "y": _described(place.y),
        "nodes": [place.si(node) for node in nodes],
        "cells": [[where[node] for node in cell.corners] for cell in cells],
        "rules": rows,
        "free_share": free / (place.steps[0] * place.steps[1]),
    }


def _mean(cell, field):
    """Return the mean of a field over the known corners; nothing known counts as allowed."""
    values = [field.get(node) for node in cell.corners]
    known = [value for value in values if value is not None]
    return 1.0 if not known else sum(known) / len(known)


def _described(axis):
    return {
        "key": axis.key,
        "unit": axis.unit,
        "low": axis.si(axis.at(0.0)),
        "high": axis.si(axis.at(1.0)),
        "typed": axis.typed,
        "log": axis.log,
    }
