"""Who evaluates the batches: this process, or local worker processes of one thread each."""

import contextlib
import os
import pickle
import queue
import subprocess
import sys
import threading
from pathlib import Path

from reactor.errors import ReactorError
from reactor.study.points import evaluate

ONE_THREAD = (
    "OMP_NUM_THREADS",
    "OPENBLAS_NUM_THREADS",
    "MKL_NUM_THREADS",
    "NUMEXPR_NUM_THREADS",
    "VECLIB_MAXIMUM_THREADS",
)
GRACE = 30.0  # s beyond the budgets of its points before a worker that does not answer is ended
START = 60.0  # s more for the first batch: the worker loads the program


def cores():
    """Return the number of processors that this process may use."""
    return len(os.sched_getaffinity(0)) if hasattr(os, "sched_getaffinity") else os.cpu_count() or 1


class Here:
    """Evaluate in this process, one batch at a time."""

    places = 1

    def __init__(self, job):
        self.job, self.waiting = job, []

    def send(self, points):
        """Take a batch."""
        self.waiting.append(points)

    def collect(self, timeout):
        """Return [(batch, rows)] of what is ready."""
        points = self.waiting.pop(0)
        return [(points, evaluate(self.job, points))]

    def close(self):
        """End the work."""


class Local:
    """
    Worker processes on this machine, each with one thread of arithmetic.

    A thread of the parent stands by each process. A process that dies, or does not answer in time, is
    replaced; its batch comes back with a sentence.
    """

    def __init__(self, job, workers=None):
        self.job, self.places = job, workers or cores()
        self.tasks: queue.Queue = queue.Queue()
        self.ready: queue.Queue = queue.Queue()
        self.processes: dict = {}
        self.closed = False
        self.threads = [
            threading.Thread(target=self._stand_by, args=(place,), daemon=True)
            for place in range(self.places)
        ]
        for thread in self.threads:
            thread.start()

    def send(self, points):
        """Give a batch to the next free worker."""
        self.tasks.put(points)

    def collect(self, timeout):
        """Return [(batch, rows)] of what is ready; rows is a sentence where the worker died."""
        found = []
        with contextlib.suppress(queue.Empty):
            found.append(self.ready.get(timeout=timeout))
            while True:
                found.append(self.ready.get_nowait())
        for _, rows in found:
            if isinstance(rows, BaseException):
                raise rows
        return found

    def close(self):
        """End the workers; a batch in flight is given up."""
        self.closed = True
        for process in list(self.processes.values()):
            process.kill()
        for _ in self.threads:
            self.tasks.put(None)
        for thread in self.threads:
            thread.join()

    def _stand_by(self, place):
        """Feed one worker, and replace it when it dies."""
        process = None
        while (points := self.tasks.get()) is not None and not self.closed:
            try:
                fresh = process is None
                process = self._started(place) if fresh else process
                answer = self._answer(process, points, START if fresh else 0.0)
            except (OSError, EOFError, pickle.UnpicklingError) as error:
                answer = f"the worker ended while this point ran ({_ended(process) if process else error})"
                if process is None:  # no worker can be started at all: the study cannot go on
                    answer = ReactorError(f"no worker process could be started ({error})")
                process = None
            self.ready.put((points, answer))
        if process is not None:
            _ended(process)

    def _started(self, place):
        package = str(Path(__file__).parent.parent.parent)
        known = os.environ.get("PYTHONPATH")
        environment = (
            os.environ
            | dict.fromkeys(ONE_THREAD, "1")
            | {"PYTHONPATH": package + (os.pathsep + known if known else "")}
        )
        process = subprocess.Popen(
            [sys.executable, "-m", "reactor.study.worker"],
            stdin=subprocess.PIPE,
            stdout=subprocess.PIPE,
            env=environment,
        )
        self.processes[place] = process
        if self.closed:
            process.kill()
        assert process.stdin is not None
        pickle.dump(sys.path, process.stdin)
        pickle.dump(self.job, process.stdin)
        process.stdin.flush()
        return process

    def _answer(self, process, points, more):
        limit = threading.Timer(more + GRACE + self.job.budget * len(points), process.kill)
        limit.daemon = True
        limit.start()
        try:
            pickle.dump(points, process.stdin)
            process.stdin.flush()
            return pickle.load(process.stdout)
        finally:
            limit.cancel()


def _ended(process):
    """End a process with its pipes, and return in words how it ended."""
    process.kill()
    for pipe in (process.stdin, process.stdout):
        with contextlib.suppress(OSError):  # what was still in the pipe has no reader
            pipe.close()
    code = process.wait()
    return f"signal {-code}: killed, out of memory, or beyond its budget" if code < 0 else f"exit code {code}"
