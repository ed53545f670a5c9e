"""A stand-in for the rating in tests of bands: a formula whose quantiles and Sobol indices are known."""

import math

from reactor.study.uncertain import Uncertain

INPUTS = tuple(
    Uncertain(name, "stream", name, 2.0, 0.5, "invented", "invented") for name in ("a", "b", "c", "idle")
)
WEIGHTS = (3.0, 2.0, 1.0, 0.0)


def prepare(job):
    """Return the function of one point: a sum of independent normal deviates, and its exponential."""

    def one(point):
        total = sum(w * x for w, x in zip(WEIGHTS, point.inputs, strict=True))
        values = {
            "temperature_hottest": 400.0 + total,
            "chlorine_slip": math.exp(0.1 * total),
            "poly_share_mol": 0.05,
        }
        return values, {}

    return one
