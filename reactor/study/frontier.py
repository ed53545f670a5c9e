"""What cannot be bettered: the points of a study where no goal improves without another getting worse."""

import re
from typing import NamedTuple

import numpy as np

from reactor.errors import CaseError
from reactor.result import NAMES
from reactor.study import rated
from reactor.study.file import writing
from reactor.study.points import Job
from reactor.study.run import Tally, run
from reactor.study.sampling import Sample
from reactor.study.sweeps import Crew, about
from reactor.study.tables import read
from reactor.study.variation import point


class Goal(NamedTuple):
    """A result, or an input, that should be small (sign 1) or large (sign -1)."""

    name: str
    sign: float


def goal(text, keys=()):
    """
    Return the `Goal` of `min chlorine_slip` or `max conversion_chlorine`; inputs count too.

    Examples
    --------
    >>> goal("min chlorine_slip"), goal("max lamp.power", ["lamp.power"]).sign
    (Goal(name='chlorine_slip', sign=1.0), -1.0)
    """
    match = re.fullmatch(r"\s*(min|max)\s+(\S+)\s*", text)
    if not match:
        raise CaseError(f'--goal {text}: write it like "min chlorine_slip" or "max hydrogen_chloride_mass"')
    name = match[2]
    if name not in keys and (name not in rated.columns() or rated.columns()[name][0] == "word"):
        from difflib import get_close_matches

        near = get_close_matches(name, [*NAMES, *keys], 2)
        raise CaseError(
            f"--goal {text}: no such number" + (f"; did you mean {' or '.join(near)}?" if near else "")
        )
    return Goal(name, 1.0 if match[1] == "min" else -1.0)


def front(values):
    """
    Return the numbers of the rows that no other row betters in one column without being worse in another.

    Parameters
    ----------
    values : array, shape (n, goals)
        Smaller is better. [any]

    Examples
    --------
    >>> front(np.array([[1.0, 3.0], [2.0, 2.0], [3.0, 1.0], [3.0, 3.0]])).tolist()
    [0, 1, 2]
    """
    order = np.lexsort(values.T[::-1])
    kept: list = []
    for i in order:
        if not kept or not np.any(np.all(values[kept] <= values[i], axis=1)):
            kept.append(i)
    return np.array(kept, dtype=int)


def knee(values):
    """Return which row of a front of two goals lies furthest from the chord between its ends."""
    low, high = values.min(axis=0), values.max(axis=0)
    shares = (values - low) / np.where(high > low, high - low, 1.0)
    return int(shares.sum(axis=1).argmin())


def frontier(
    case,
    axes,
    goals,
    path,
    *,
    number=64,
    rounds=2,
    seed=1,
    claims=(),
    failing=False,
    crew=None,
    fresh=False,
    tell=lambda tally: None,
    announce=lambda tally: None,
    evaluator=rated.__name__,
    columns=None,
):
    """
    Look for the front of two or three goals.

    Points are drawn over the ranges, then in rounds between and beside the members of the front.

    Parameters
    ----------
    case : Case
        The case.
    axes : sequence of Axis
        Ranges of the inputs.
    goals : sequence of Goal
        Two or three.
    path : str or Path
        The study file; the same search goes on where it was.
    number, rounds, seed : int
        Points of the first draw (Sobol), further rounds of half as many, what makes them repeatable.
    claims : sequence of Claim
        Points that break one do not count.
    failing : bool
        Points with a verdict of FAIL count too.

    Returns
    -------
    tally : Tally
        The block `frontier` is in the file.
    """
    if len(goals) not in (2, 3):
        raise CaseError("--goal: two or three goals make a front")
    settings = None
    spec = {
        "form": "frontier",
        "ranges": Sample(axes, "sobol", number, seed).spec()["ranges"],
        "number": number,
        "rounds": rounds,
        "seed": seed,
        "goals": [list(g) for g in goals],
        "claims": [c.text for c in claims],
        "failing": failing,
    }
    size = number + rounds * (number // 2)
    crew = crew or Crew()
    what = about("frontier", case, evaluator, axes, spec, size, settings)
    tally = Tally(size)
    with (
        writing(path, what, columns or rated.columns(), fresh) as file,
        crew.at_work(Job(evaluator, case, crew.budget)) as at,
    ):
        tally.skipped = len(file.numbers())
        announce(tally)
        points = list(Sample(axes, "sobol", number, seed).points())
        for round_ in range(rounds + 1):
            done = file.numbers()
            run(file, [p for p in points if p.number not in done], at, tally, tell)
            kept = members(read(path), goals, claims, failing, number + round_ * (number // 2))
            points = _beside(axes, kept, number // 2, number + round_ * (number // 2), (seed, round_))
        file.note("frontier", kept)
    return tally


def members(tables, goals, claims, failing, below):
    """Return the front among the points numbered below `below`, by the first goal, as plain data."""
    found = []
    for i, n in enumerate(tables.points["number"]):
        values = {name: tables.points[name][i] for name in (*tables.inputs, *tables.results)}
        numbers = [values.get(g.name) for g in goals]
        good = tables.points["state"][i] == "done" and n < below and None not in numbers
        if (
            good
            and (failing or values.get("worst") != "FAIL")
            and all(_holds(c, values, tables.more[i]) for c in claims)
        ):
            found.append(
                (
                    n,
                    [v * g.sign for v, g in zip(numbers, goals, strict=True)],
                    [values[k] for k in tables.inputs],
                )
            )
    if not found:
        return {"goals": [list(g) for g in goals], "points": [], "knee": None, "counted": 0}
    kept = front(np.array([row[1] for row in found]))
    rows = [
        {
            "number": found[i][0],
            "inputs": dict(zip(tables.inputs, found[i][2], strict=True)),
            "goals": {g.name: g.sign * v for g, v in zip(goals, found[i][1], strict=True)},
        }
        for i in kept
    ]
    best = (
        found[kept[knee(np.array([found[i][1] for i in kept]))]][0]
        if len(goals) == 2 and len(kept) > 2
        else None
    )
    return {"goals": [list(g) for g in goals], "points": rows, "knee": best, "counted": len(found)}


def _holds(claim, values, more):
    return claim.holds(
        more.get(claim.name, {}).get(claim.species, 0.0) if claim.species else values.get(claim.name)
    )


def _beside(axes, kept, number, first, seed):
    """Return points between neighbours of a front, and beside its members, moved a little."""
    rng = np.random.default_rng(seed)
    rows = [[each.share(row["inputs"][each.key]) for each in axes] for row in kept["points"]]
    if not rows:
        rows = rng.random((2, len(axes))).tolist()
    shares = np.array(rows)
    found = []
    for i in range(number):
        a = i % len(shares)
        b = min(a + 1, len(shares) - 1)
        middle = shares[a] + rng.random() * (shares[b] - shares[a])
        moved = np.clip(middle + 0.05 * rng.standard_normal(len(axes)), 0.0, 1.0)
        texts = [each.at(float(s)) for each, s in zip(axes, moved, strict=True)]
        found.append(point(axes, first + i, texts))
    return found
