"""A stand-in for the rating in tests of maps: limits on a circle and on a line, known exactly."""

import math

COLUMNS = {"chlorine_slip": ("1", "a formula"), "exotherm_margin": ("K", "a formula")}


def prepare(job):
    """Return the function of one point: the slip is at its limit on a circle, the margin 0 on a line."""
    limit = job.content.limits.chlorine_slip or 0.02

    def one(point):
        x, y = point.inputs
        r = math.hypot(math.log(x / 10.0), math.log(y / 100.0))
        return {"chlorine_slip": limit * math.exp(r - 1.0), "exotherm_margin": 10.0 * (x - 6.0)}, {
            "verdicts": {}
        }

    return one
