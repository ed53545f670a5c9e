"""Make a stored point once more and say what differs: case, data, program, and the numbers."""

import json
from typing import NamedTuple

from reactor.case import loads
from reactor.errors import CaseError
from reactor.study.file import FIXED, facts, reading
from reactor.study.points import Job, Row, evaluate
from reactor.study.sweeps import BUDGET
from reactor.study.variation import Point


class Again(NamedTuple):
    """A stored point and the same point made now."""

    number: int
    overrides: tuple
    state: str
    row: Row
    identity: list  # (what, stored, now) where they differ
    numbers: list  # (name, unit, stored, now) where they differ
    compared: int

    @property
    def same(self):
        """Tell whether the point came out the same."""
        return not self.numbers and self.row.state == self.state


def rerun(path, number, budget=BUDGET):
    """
    Return what a stored point gives now, as `Again`.

    Parameters
    ----------
    path : str or Path
        The study file.
    number : int
        The point.
    budget : float
        Time that it may take. [s]

    Raises
    ------
    CaseError
        When the file has no such point.
    """
    from reactor.chemistry import mechanism
    from reactor.rating.identity import identity

    with reading(path) as connection:
        about = facts(connection, path)
        columns = connection.execute("SELECT name, unit, role FROM columns ORDER BY place").fetchall()
        listed = ",".join(f'"{name}"' for name in (*FIXED, *(name for name, _, _ in columns)))
        row = connection.execute(f"SELECT {listed} FROM points WHERE number = ?", (number,)).fetchone()
    if row is None:
        raise CaseError(
            f"{path}: holds no point {number}; it has up to {about['size']} points, counted from 0"
        )
    stored = dict(zip((*FIXED, *(name for name, _, _ in columns)), row, strict=True))
    case = loads(about["case"], about["folder"], name="stored case")
    inputs = tuple(stored[name] for name, _, role in columns if role == "input")
    point = Point(number, tuple(json.loads(stored["overrides"])), inputs)
    job = Job(about["evaluator"], _content(about, case), budget)
    new = evaluate(job, [point])[0]
    gas = mechanism(case.chemistry.mechanism and case.path(case.chemistry.mechanism))
    now = identity(case, gas)
    changed = [(name, old, now.get(name)) for name, old in about["identity"].items() if now.get(name) != old]
    results = [(name, unit) for name, unit, role in columns if role == "result"]
    numbers = [
        (name, unit, stored[name], new.values.get(name))
        for name, unit in results
        if stored[name] != new.values.get(name)
    ]
    return Again(number, point.overrides, stored["state"], new, changed, numbers, len(results))


def _content(about, case):
    """Return what the evaluator of a study wants beside the points."""
    return case if about["settings"] is None else (case, about["settings"])
