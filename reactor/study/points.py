"""What a worker gets and gives: a `Job`, batches of points, a `Row` each; any fault becomes a reason."""

import importlib
import time
from typing import Any, NamedTuple

from reactor.errors import ReactorError

DONE, FAILED = "done", "failed"


class Job(NamedTuple):
    """
    What all points of a study share.

    `evaluator` names a module with `prepare(job)`, which returns a function of one `Point` that returns
    (values, more): numbers and words by name, and what is kept as JSON. `content` is the evaluator's own;
    `budget` is the time one point may take [s].
    """

    evaluator: str
    content: Any
    budget: float = 120.0


class Row(NamedTuple):
    """What became of one point."""

    point: Any
    state: str
    reason: str
    seconds: float
    values: dict
    more: dict


class OverrunError(ReactorError):
    """Report a point that took longer than its budget."""


def evaluate(job, points):
    """Return a `Row` for every point of a batch, in order; a point that fails says why and stops no other."""
    return prepared(job)(points)


def prepared(job):
    """Return the function batch -> rows; an evaluator with `prepare_batch` gets the batch in one call."""
    module = importlib.import_module(job.evaluator)
    if hasattr(module, "prepare_batch"):
        return module.prepare_batch(job)
    one = module.prepare(job)
    return lambda points: [_row(one, point, job.budget) for point in points]


def _row(one, point, budget):
    began = time.perf_counter()
    values, more, reason = {}, {}, ""
    try:
        with _alarm(budget):
            values, more = one(point)
    except ReactorError as error:
        reason = str(error)
    except Exception as error:  # a fault of the program: the other points go on, this one says what it was
        reason = f"fault of the program: {type(error).__name__}: {error}"
    return Row(point, FAILED if reason else DONE, reason, time.perf_counter() - began, values, more)


class _alarm:  # noqa: N801 - reads as a word in `with`
    """Raise `OverrunError` in the block after `seconds`, in the main thread of a POSIX process."""

    def __init__(self, seconds):
        self.seconds = seconds

    def __enter__(self):
        import signal
        import threading

        self.armed = hasattr(signal, "setitimer") and threading.current_thread() is threading.main_thread()
        if self.armed:
            self.old = signal.signal(signal.SIGALRM, self._ring)
            signal.setitimer(signal.ITIMER_REAL, self.seconds)

    def _ring(self, *_):
        raise OverrunError(f"took longer than its budget of {self.seconds:g} s; raise --budget")

    def __exit__(self, *_):
        import signal

        if self.armed:
            signal.setitimer(signal.ITIMER_REAL, 0)
            signal.signal(signal.SIGALRM, self.old)
