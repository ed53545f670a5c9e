"""Many tubes: a sweep of full ratings with all workers against the same loop with Cantera's reactors."""

import os
import tempfile
import time
from pathlib import Path

import reactor
import reactor.case
from benchmarks.single import GATE, reference
from reactor import chemistry, study
from reactor.rating.plant import lamps, plant
from reactor.study.crew import cores

CASE = Path(__file__).parent.parent / "cases" / "lapwing_ten.toml"
POINTS, SECONDS = 10_000, 60.0  # as many points as asked for, or as fit into this time
FEWEST, THEIRS = 2, 12  # points of the first look at the pace; points of Cantera's loop, enough for its mean


def run():
    """Yield the lines of this figure."""
    case = reactor.load(CASE, ['cooling.mode="none"'])
    with tempfile.TemporaryDirectory() as folder:
        began = time.perf_counter()
        swept(case, FEWEST * cores(), os.path.join(folder, "first.study"))
        pace = (time.perf_counter() - began) / (FEWEST * cores())
        number = max(2 * cores(), min(POINTS, int(SECONDS / pace)))
        path = os.path.join(folder, "sweep.study")
        began = time.perf_counter()
        swept(case, number, path)
        ours = (time.perf_counter() - began) / number
        tables = study.read(path)
    theirs, gap = loop(case, tables, max(1, number // THEIRS))
    yield (
        f"# study: {number} full ratings, {1e3 * ours:.1f} ms each on {cores()} workers, in a study file; "
        f"Cantera's bare reactor {1e3 * theirs:.1f} ms each in one loop; gap {gap:.1e}"
    )
    if gap > GATE:
        yield f"# study: the two disagree by more than {GATE:g}: no ratio"
        return
    yield f"ratio study {theirs / ours:.2f}"


def swept(case, number, path):
    """Sweep the lamp power into a study file."""
    points = study.design(case, [f"lamp.power=100..400 W, {number}"])
    study.sweep_file(case, points, path)


def loop(case, tables, every):
    """Return the seconds a point of Cantera's loop, and its largest relative gap to the study."""
    gas = chemistry.mechanism()
    took, gap, count = 0.0, 0.0, 0
    for i in range(0, len(tables), every):
        began = time.perf_counter()
        changed = reactor.case.changed(case, tables.points["overrides"][i])
        conversion, T = reference(
            changed, plant(changed, gas, lamps(changed)), tables.points["residence_time"][i]
        )
        took += time.perf_counter() - began
        count += 1
        gap = max(
            gap,
            abs(tables.points["conversion_chlorine"][i] / conversion - 1),
            abs(tables.points["temperature_outlet"][i] / T - 1),
        )
    return took / count, gap
