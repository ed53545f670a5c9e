"""Studies: many what-ifs of one case, into one file that survives, on any number of workers."""

from reactor.study.again import rerun
from reactor.study.claims import broken, check, claim
from reactor.study.merging import merge
from reactor.study.sweeps import Crew, design, sweep, sweep_file
from reactor.study.tables import Tables, overview, read

__all__ = [
    "Crew",
    "Tables",
    "broken",
    "check",
    "claim",
    "design",
    "merge",
    "overview",
    "read",
    "rerun",
    "sweep",
]
__all__ += ["sweep_file"]
