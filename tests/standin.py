"""A stand-in for the rating in tests of the study's machinery: a cheap formula, and ways to misbehave."""

import math
import os
import signal
import time

from reactor.errors import RangeError

COLUMNS = {
    "chlorine_slip": ("1", "a formula"),
    "temperature_hottest": ("K", "a formula"),
    "worst": ("word", "a word"),
}


def prepare(job):
    """Return the function of one point; the environment says how long it takes and which one kills."""
    pause, deadly = float(os.environ.get("STANDIN_PAUSE", 0)), os.environ.get("STANDIN_DEADLY", "")

    def one(point):
        x = [value for value in point.inputs if not isinstance(value, str)]
        if pause:
            time.sleep(pause)
        if deadly and str(point.number) in deadly.split(","):
            os.kill(os.getpid(), signal.SIGKILL)
        if x[0] < 0:
            raise RangeError("below nought")
        if x[0] > 1e8:
            while True:
                time.sleep(0.01)
        slip = math.exp(-sum(x) / 1000.0) * (1 + 0.1 * math.sin(sum(x)))
        values = {"chlorine_slip": slip, "temperature_hottest": 300.0 + math.sqrt(abs(x[0])), "worst": "PASS"}
        return values, {"share_mol": {"CH3Cl": 1 - slip}}

    return one
