"""How far the results of a case may be off: 5-50-95 % of each, and a ranking of what it hangs on."""

from itertools import pairwise

import numpy as np

from reactor.study import banded
from reactor.study.file import writing
from reactor.study.points import Job
from reactor.study.ranking import quantiles, rank_correlation, saltelli, sobol_indices
from reactor.study.run import Tally, run
from reactor.study.sampling import shares
from reactor.study.sweeps import Crew, about
from reactor.study.tables import read
from reactor.study.uncertain import inputs
from reactor.study.variation import Axis, Point

FIRST = 64  # points before the error is looked at; then doubled
MOST = 1024
ERROR = 0.10  # standard error of the 5, 50 and 95 % points, of the width from 5 to 95 %
WATCHED = ("chlorine_slip", "conversion_chlorine", "poly_share_mol", "temperature_hottest")
SALTELLI = 10_000_000  # number of the first point of the Sobol indices, behind all of the band
NAMED = 6  # inputs that get Sobol indices of their own; all others are one group


def band(
    case,
    path,
    *,
    error=ERROR,
    most=MOST,
    seed=1,
    sobol=0,
    result="chlorine_slip",
    crew=None,
    fresh=False,
    tell=lambda tally: None,
    announce=lambda tally: None,
    evaluator=banded.__name__,
    found=None,
):
    """
    Draw the uncertain inputs of a case until the band has converged; all goes into a study file.

    Parameters
    ----------
    case : Case
        The case.
    path : str or Path
        The study file; the same study goes on where it was.
    error : float
        Wanted standard error of the quantiles of the main results, of the width of their band. [-]
    most : int
        Points drawn at most.
    seed : int
        Makes the draw repeatable.
    sobol : int
        Base points for Sobol indices of `result`; 0 leaves them out. Costs 2 + groups times as many ratings.
    result : str
        The result whose variance is shared out.
    crew : Crew
        Who works.
    evaluator, found
        Another evaluator, and its uncertain inputs.

    Returns
    -------
    tally : Tally
        The blocks `bands`, `ranking` and `sobol` are in the file.
    """
    found = inputs(case) if found is None else found
    axes = [Axis(each.name, "1") for each in found]
    scale = 1.0 if case.uncertainty.rates is None else case.uncertainty.rates
    settings = {"inputs": [list(each) for each in found], "rate_scale": scale, "seed": seed}
    what = about("band", case, evaluator, axes, {"form": "band", "seed": seed}, most + 1, settings)
    job = Job(evaluator, (case, settings), (crew or Crew()).budget)
    tally = Tally(min(FIRST, most) + 1)
    with writing(path, what, banded.columns(), fresh) as file, (crew or Crew()).at_work(job) as workers:
        done = file.numbers()
        number = min(FIRST, most)
        tally.skipped = sum(n <= number for n in done)
        announce(tally)
        while True:
            points = [Point(0, (), (0.0,) * len(axes)), *_drawn(len(axes), number, seed)]
            tally.size = len(points)
            tally.skipped = sum(p.number in done for p in points)
            tally.finished = 0
            run(file, [p for p in points if p.number not in done], workers, tally, tell)
            done = file.numbers()
            blocks = summarised(read_points(path, number), error, seed)
            for name, block in blocks.items():
                file.note(name, block)
            if blocks["converged"]["reached"] or number >= most:
                break
            number = min(2 * number, most)
        file.note("due", number + 1)
        if sobol:
            _shared_out(file, path, workers, found, sobol, seed, result, blocks, tally, tell)
    return tally


def _drawn(dimensions, number, seed):
    """
    Return `number` points of normal deviates in Latin hypercubes of doubling size.

    A longer draw begins with a shorter one. Sobol points would not do: in tens of dimensions their first
    hundreds are correlated with each other.
    """
    ends = [0, FIRST]
    while ends[-1] < number:
        ends.append(2 * ends[-1])
    blocks = [deviates(stop - start, dimensions, (seed, stop)) for start, stop in pairwise(ends)]
    rows = [row for block in blocks for row in block][:number]
    return [Point(i, (), tuple(map(float, row))) for i, row in enumerate(rows, 1)]


def deviates(number, dimensions, seed):
    """Return a Latin hypercube of standard normal deviates, shape (number, dimensions)."""
    from scipy.special import ndtri

    drawn = shares("latin", number, dimensions, np.random.default_rng(seed))
    return ndtri(np.clip(drawn, 1e-9, 1 - 1e-9))


def read_points(path, number):
    """Return the tables of a band with only its drawn points, and the nominal values of its results."""
    tables = read(path)
    keep = [
        i
        for i, n in enumerate(tables.points["number"])
        if n <= number and tables.points["state"][i] == "done"
    ]
    nominal = {
        name: tables.points[name][i]
        for i in keep[:1]
        for name in tables.results
        if tables.points["number"][i] == 0
    }
    return tables, [i for i in keep if tables.points["number"][i] > 0], nominal


def summarised(found, error, seed):
    """
    Return the blocks of a band: `bands`, `ranking`, `converged`.

    A result that is missing at some points is summarised over the others, and says over how many.
    """
    tables, keep, nominal = found
    x = np.array([[tables.points[name][i] for name in tables.inputs] for i in keep])
    bands, ranking, worst = {}, {}, ("", 0.0)
    for name in (name for name in tables.results if tables.units[name] != "word"):
        y = np.array([np.nan if tables.points[name][i] is None else tables.points[name][i] for i in keep])
        good = np.isfinite(y)
        if good.sum() < 8:
            continue
        (low, mid, high), errors = quantiles(y[good], seed)
        width = high - low
        relative = float(errors.max() / width) if width > 1e-12 * abs(mid) else 0.0
        bands[name] = {
            "value": nominal.get(name),
            "unit": tables.units[name],
            "low": float(low),
            "mid": float(mid),
            "high": float(high),
            "error": relative,
            "points": int(good.sum()),
        }
        if name in WATCHED and relative > worst[1]:
            worst = name, relative
        if width > 1e-9 * abs(mid):
            ranking[name] = _ranked(tables.inputs, rank_correlation(x[good], y[good]))
    noise = noise_level(len(keep), len(tables.inputs))
    return {
        "bands": bands,
        "ranking": ranking,
        "converged": {
            "reached": worst[1] <= error,
            "error": worst[1],
            "wanted": error,
            "result": worst[0],
            "points": len(keep),
            "failed": len(tables.failed),
            "noise": noise,
        },
    }


def noise_level(points, inputs):
    """
    Return the rank correlation that the best of `inputs` idle inputs reaches in 1 of 20 draws.

    Examples
    --------
    >>> print(f"{noise_level(64, 1):.2f} {noise_level(1024, 91):.2f}")
    0.25 0.11
    """
    from scipy.special import ndtri

    return float(min(1.0, -ndtri(0.025 / max(inputs, 1)) / np.sqrt(max(points - 1, 1))))


def _ranked(names, correlation):
    """Return the inputs by the size of their correlation, with their share of the sum of squares."""
    order = np.argsort(-np.abs(correlation))
    squares = correlation**2
    total = max(squares.sum(), 1e-300)
    return [
        {"input": names[i], "rank_correlation": float(correlation[i]), "share": float(squares[i] / total)}
        for i in order
    ]


def _shared_out(file, path, workers, found, number, seed, result, blocks, tally, tell):
    """Add the Sobol indices of one result: its first inputs one by one, all others as one group."""
    names = [each.name for each in found]
    ranked = [row["input"] for row in blocks["ranking"].get(result, [])][:NAMED] or names[:NAMED]
    groups = [[names.index(name)] for name in ranked]
    rest = [i for i, name in enumerate(names) if name not in ranked]
    labels = [*ranked, f"all {len(rest)} others"] if rest else ranked
    a, b = (deviates(number, len(names), (seed, SALTELLI, half)) for half in (0, 1))
    rows = saltelli(a, b, [*groups, rest] if rest else groups)
    points = [Point(SALTELLI + i, (), tuple(map(float, row))) for i, row in enumerate(rows)]
    done = file.numbers()
    tally.size, tally.finished = len(points), 0
    tally.skipped = sum(p.number in done for p in points)
    run(file, [p for p in points if p.number not in done], workers, tally, tell)
    tables = read(path)
    value = {n: y for n, y in zip(tables.points["number"], tables.points[result], strict=True)}
    y = np.array([np.nan if value.get(p.number) is None else value[p.number] for p in points])
    shares_ = sobol_indices(y, labels, seed)
    file.note("sobol", {"result": result, "base": number, "shares": [each._asdict() for each in shares_]})
