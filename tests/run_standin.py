"""Run a study on the stand-in as a program of its own, for tests that kill it: FILE POINTS JOBS."""

import sys
from pathlib import Path

import standin

from reactor.case import load
from reactor.study.sweeps import Crew, design, sweep_file

CASE = Path(__file__).parent.parent / "cases" / "fulmar.toml"


def main(path, points, jobs, scheduler=None):
    """Sweep and print how much was skipped, and the peak memory of this process [kB]."""
    import resource

    case = load(CASE)
    asked = design(case, [f"lamp.power=1..3000 W, {points}"])
    tally = sweep_file(
        case, asked, path, Crew(int(jobs), scheduler, 60.0), evaluator="standin", columns=standin.COLUMNS
    )
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
    sys.stdout.write(f"{tally.skipped} {tally.finished} {tally.failed} {peak}\n")


if __name__ == "__main__":
    main(*sys.argv[1:])
