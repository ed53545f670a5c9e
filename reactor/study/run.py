"""Run the points of a study: batches to a crew, a transaction a batch; a dead worker's batch is halved."""

import time
from collections import deque
from dataclasses import dataclass
from itertools import islice

from reactor.study.points import FAILED, Row

SPAN = 0.5  # s of work that a batch should hold: long against the cost of sending it, short against losing it
LARGEST = 500  # points; more would only cost memory
TRIES = 2  # times that a single point may end its worker before it counts as failed


@dataclass
class Tally:
    """How far a study is: points done before, done now, failed (of all), and how many there are."""

    size: int
    skipped: int = 0
    finished: int = 0
    failed: int = 0

    @property
    def left(self):
        """Return how many points are still to do."""
        return self.size - self.skipped - self.finished


def run(file, points, crew, tally, tell=lambda tally: None, stop=lambda: False):
    """
    Evaluate points and write them to a study file, in the order in which they get ready.

    Parameters
    ----------
    file : StudyFile
        Open for writing.
    points : iterable of Point
        What is to be done; asked for only as fast as it is worked off.
    crew : Here, Local or Cluster
        Who evaluates.
    tally : Tally
        Counts on.
    tell : callable
        Hears of the progress after every batch, and twice a second.
    stop : callable
        Ends the run early when it returns True.
    """
    points, flying, size, pace = iter(points), 0, 1, None
    again: deque = deque()
    tries: dict = {}
    while not stop():
        while flying < crew.places + 1:
            batch = again.popleft() if again else list(islice(points, _even(size, tally, crew)))
            if not batch:
                break
            crew.send(batch)
            flying += 1
        if not flying:
            return
        for batch, rows in crew.collect(0.5):
            flying -= 1
            if isinstance(rows, str):
                rows = _buried(batch, rows, again, tries)
            else:
                took = sum(row.seconds for row in rows) / len(rows)
                pace = took if pace is None else 0.7 * pace + 0.3 * took
                size = max(1, min(LARGEST, 8 * size, int(SPAN / max(pace, 1e-9))))
            if rows:
                file.write(rows)
            tally.finished += len(rows)
            tally.failed += sum(row.state == FAILED for row in rows)
        tell(tally)


def _even(size, tally, crew):
    """Return the size of the next batch: near the end smaller, so that all workers end together."""
    return max(1, min(size, -(-tally.left // (2 * crew.places))))


def _buried(batch, why, again, tries):
    """Halve the batch of a dead worker; a single point is tried again, then counts as failed."""
    if len(batch) > 1:
        again.extend((batch[: len(batch) // 2], batch[len(batch) // 2 :]))
        return []
    number = batch[0].number
    tries[number] = tries.get(number, 0) + 1
    if tries[number] < TRIES:
        again.append(batch)
        return []
    return [Row(batch[0], FAILED, why, 0.0, {}, {})]


class Clock:
    """Say how long the rest will take, from the pace of the last minute or so."""

    def __init__(self, now=time.monotonic):
        self.now = now
        self.marks: deque = deque(maxlen=200)

    def left(self, tally):
        """Return the seconds left, or None while nothing is known."""
        if self.marks and tally.finished < self.marks[-1][1]:  # another round has begun
            self.marks.clear()
        self.marks.append((self.now(), tally.finished))
        (first, before), (last, done) = self.marks[0], self.marks[-1]
        if done == before or last == first:
            return None
        return tally.left * (last - first) / (done - before)
