"""
Targets in, equipment out.

Find inputs for wanted results, and say how many tubes, stages and watts that takes.
"""

from reactor.sizing.run import PARTS, PLAIN, Options, run

__all__ = ["PARTS", "PLAIN", "Options", "run"]
