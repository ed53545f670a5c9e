"""A sweep from end to end: a case, a design of points, a study file, a crew."""

import os
import tempfile
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from reactor.errors import CaseError
from reactor.study import rated
from reactor.study.file import writing
from reactor.study.points import Job
from reactor.study.run import Tally, run
from reactor.study.sampling import Sample
from reactor.study.scenarios import from_csv, table
from reactor.study.tables import read
from reactor.study.variation import Axis, Grid, axis

BUDGET = 120.0  # s that one point may take


@dataclass(frozen=True)
class Crew:
    """
    Who works on a study.

    Parameters
    ----------
    jobs : int
        Local worker processes; None: one a processor; 0: this process.
    scheduler : str
        Address of a Dask scheduler, instead of local workers.
    budget : float
        Time that one point may take. [s]
    """

    jobs: int | None = None
    scheduler: str | None = None
    budget: float = BUDGET

    @contextmanager
    def at_work(self, job):
        """Start the workers for a job, and end them."""
        from reactor.study import cluster, crew

        found: Any = None
        if self.scheduler:
            found = cluster.Cluster(job, self.scheduler)
        else:
            found = crew.Here(job) if self.jobs == 0 else crew.Local(job, self.jobs)
        try:
            yield found
        finally:
            found.close()


def design(case, vary=(), zipped=False, sample=None, seed=1, scenarios=None):
    """
    Return the points that the options of a sweep mean.

    Parameters
    ----------
    case : Case
        The case that is varied.
    vary : sequence of str
        Each `key=values`, see `reactor.study.variation`.
    zipped : bool
        Go through the axes together, not through every combination.
    sample : str
        `latin 200` or `sobol 256`: draw that many points over the ranges.
    seed : int
        Makes a sample repeatable.
    scenarios : str or Path
        A CSV file of points, instead of `vary`.
    """
    if scenarios is not None:
        if vary or sample:
            raise CaseError("--scenarios: the table says all points; leave out --vary and --sample")
        return from_csv(scenarios, case)
    axes = tuple(axis(text, case) for text in vary)
    if not axes:
        raise CaseError('nothing varies; add --vary "lamp.power=0.5..5 kW, 10 log" or --scenarios FILE')
    keys = [each.key for each in axes]
    if twice := {key for key in keys if keys.count(key) > 1}:
        raise CaseError(f"--vary {', '.join(sorted(twice))}: stands twice")
    if sample is None:
        return Grid(axes, zipped)
    way, _, number = sample.partition(" ")
    return Sample(axes, way, int(number) if number.strip().isdigit() else 0, seed)


def part_of(text):
    """
    Return (place, of) of `3/40`, counted from 0; None is all.

    Examples
    --------
    >>> part_of("3/40")
    (2, 40)
    """
    if text is None:
        return 0, 1
    place, _, of = str(text).partition("/")
    if not (place.isdigit() and of.isdigit() and 1 <= int(place) <= int(of)):
        raise CaseError(f"--part {text}: write it like 3/40, the first part is 1/40")
    return int(place) - 1, int(of)


def about(kind, case, evaluator, axes, spec, size, settings=None, **more):
    """Return the facts that define a study and go into its file."""
    from reactor.case import dump
    from reactor.chemistry import mechanism
    from reactor.rating.identity import identity

    gas = mechanism(case.chemistry.mechanism and case.path(case.chemistry.mechanism))
    return {
        "kind": kind,
        "title": case.title,
        "case": dump(case),
        "folder": str(Path(case.folder).resolve()),
        "identity": identity(case, gas),
        "evaluator": evaluator,
        "design": spec,
        "axes": {a.key: a.unit for a in axes},
        "size": size,
        "settings": settings,
        "part": None,
        **more,
    }


def sweep_file(
    case,
    points,
    path,
    crew=None,
    part=None,
    fresh=False,
    retry=False,
    tell=lambda tally: None,
    announce=lambda tally: None,
    evaluator=rated.__name__,
    columns=None,
):
    """
    Run a design of points into a study file, and return the `Tally`; what is in the file already is skipped.

    Parameters
    ----------
    case : Case
        What is varied.
    points : Grid, Sample or Scenarios
        The points.
    path : str or Path
        The study file; the same study goes on where it was, another one is refused.
    crew : Crew
        Who works.
    part : str
        `3/40`: only the third of forty equal shares of the points.
    fresh, retry : bool
        Replace the file; try failed points again.
    tell, announce : callable
        Hear of progress; hear of the size before anything runs.
    evaluator, columns
        Another module than `reactor.study.rated`, and its columns.

    Raises
    ------
    CaseError
        For a point that cannot be read, before anything runs, and for a file that holds another study.
    ReactorError
        When the file cannot be written; what was finished is kept.
    """
    place, of = part_of(part)
    due = len(range(place, points.size, of))
    what = about(
        "sweep",
        case,
        evaluator,
        points.axes,
        points.spec(),
        points.size,
        part=f"{place + 1}/{of}" if of > 1 else None,
        due=due,
    )
    if evaluator == rated.__name__:
        first_readable(case, points)
    crew = crew or Crew()
    with writing(path, what, columns or rated.columns(), fresh) as file:
        done = file.done(points.size, retry)
        failed = 0 if retry else file.count().get("failed", 0)
        tally = Tally(due, skipped=sum(done[place::of]), failed=failed)
        announce(tally)
        todo = (p for p in points.points() if p.number % of == place and not done[p.number])
        if tally.left:
            with crew.at_work(Job(evaluator, case, crew.budget)) as workers:
                run(file, todo, workers, tally, tell)
    return tally


def first_readable(case, points):
    """Read the case of the first point, so that a wrong key or unit is told before anything runs."""
    from reactor.case import changed

    first = next(iter(points.points()))
    try:
        changed(case, first.overrides)
    except CaseError as error:
        unknown = [
            fault for fault in error.faults if "unknown" in fault or "unit" in fault or "is due" in fault
        ]
        if unknown:
            raise CaseError(unknown) from None


def sweep(
    case,
    vary,
    *,
    zipped=False,
    sample=None,
    seed=1,
    jobs=None,
    scheduler=None,
    out=None,
    tell=lambda tally: None,
):
    """
    Rate a case at many points and return a pandas DataFrame, units in `attrs["units"]`.

    Parameters
    ----------
    case : Case
        From `reactor.load`.
    vary : dict or DataFrame
        {key: values}: a list (`["1 kW", "2 kW"]`, `[5, 10]`) or text (`"0.5..5 kW, 10 log"`). Or a DataFrame
        with a column a key (`lamp.power [kW]`, or the unit in `attrs["units"]`) and a row a point.
    zipped, sample, seed
        As `design`.
    jobs, scheduler
        As `Crew`.
    out : str or Path
        Keep the study file there, and go on with it where it is; else it is dropped.

    Examples
    --------
    >>> import reactor
    >>> frame = sweep(reactor.load("cases/fulmar.toml"), {"feed.ratio": [6]}, jobs=0)
    >>> frame.attrs["units"]["temperature_hottest"], frame.attrs["units"]["feed.chlorine.ratio"], len(frame)
    ('K', '1', 1)
    """
    points = _frame(vary, case) if hasattr(vary, "columns") else _asked(case, vary, zipped, sample, seed)
    if out is not None:
        sweep_file(case, points, out, Crew(jobs, scheduler), tell=tell)
        return read(out).frame()
    with tempfile.TemporaryDirectory() as folder:
        path = os.path.join(folder, "sweep.study")
        sweep_file(case, points, path, Crew(jobs, scheduler), tell=tell)
        return read(path).frame()


def _asked(case, vary, zipped, sample, seed):
    """Return the design of {key: values}; a list of numbers or words may hold any of them."""
    texts = [
        f"{key}={values if isinstance(values, str) else ','.join(map(_typed, values))}"
        for key, values in vary.items()
    ]
    return design(case, texts, zipped, sample, seed)


def _typed(value):
    return value if isinstance(value, str) else repr(value.item() if hasattr(value, "item") else value)


def _frame(frame, case):
    """Return the points of a DataFrame."""
    units = frame.attrs.get("units", {})
    head = [
        f"{name} [{units[name]}]"
        if units.get(name, "1") not in ("1", "-", "word", "") and " [" not in name
        else name
        for name in map(str, frame.columns)
    ]
    return table(
        head, [[_typed(cell) for cell in row] for row in frame.itertuples(index=False)], case, "frame"
    )


__all__ = ["Axis", "Crew", "about", "design", "part_of", "sweep", "sweep_file"]
