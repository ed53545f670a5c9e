"""Send the batches of a study to a running Dask cluster."""

import pickle
import queue

from reactor.errors import CaseError, ReactorError
from reactor.study.points import prepared

RETRIES = 3  # times that a batch may lose its worker
_prepared: dict = {}  # in a worker: the job of the study that it works on


def rows_of(job, points):
    """Return the rows of a batch, in a worker; the job is prepared once."""
    if job not in _prepared:
        _prepared.clear()
        _prepared[job] = prepared(pickle.loads(job))
    return _prepared[job](points)


def program():
    """Return the hashes of program and data, in a worker."""
    from reactor.rating.identity import digest

    return {"program": digest("code"), "data": digest("data")}


class Cluster:
    """
    Evaluate on the workers of a Dask scheduler.

    Parameters
    ----------
    job : Job
        What all points share.
    address : str
        The scheduler, such as tcp://127.0.0.1:8786.
    patience : float
        Time that the scheduler may take to answer. [s]
    """

    def __init__(self, job, address, patience=30.0):
        try:
            from distributed import Client
        except ImportError:
            raise CaseError(
                '--scheduler needs Dask: python -m pip install "photochlorination-reactor[cluster]"'
            ) from None
        self.job = pickle.dumps(job)
        self.ready: queue.Queue = queue.Queue()
        self.futures: dict = {}
        try:
            self.client = Client(address, timeout=patience, set_as_default=False)
        except (OSError, ValueError) as error:
            raise CaseError(
                f"{address}: no Dask scheduler answers ({error}); start one with: dask scheduler"
            ) from None
        self._check(address)

    @property
    def places(self):
        """Return how many batches the workers take at a time, as many workers as there are now."""
        threads = self.client.nthreads()
        return max(1, sum(threads.values()))

    def _check(self, address):
        """Refuse workers that run another program or other data: their numbers would not be ours."""
        found = self.client.run(program, on_error="return")
        if not found:
            raise CaseError(
                f"{address}: the scheduler has no workers; start one with: dask worker {address} --nthreads 1"
            )
        for worker, theirs in found.items():
            if not isinstance(theirs, dict):
                raise CaseError(
                    f"{worker}: cannot load this program ({theirs}); install the same version there"
                )
            if theirs != program():
                raise CaseError(
                    f"{worker}: runs another version of the program or its data; install the same one there"
                )

    def send(self, points):
        """Give a batch to the cluster."""
        future = self.client.submit(rows_of, self.job, points, pure=False, retries=RETRIES)
        self.futures[future.key] = (future, points)
        future.add_done_callback(self.ready.put)

    def collect(self, timeout):
        """Return [(batch, rows)] of what is ready; rows is a sentence where every try lost its worker."""
        try:
            future = self.ready.get(timeout=timeout)
        except queue.Empty:
            if self.client.status != "running":
                raise ReactorError(
                    "the Dask scheduler is gone; what was finished is kept: start it and run the same "
                    "command again"
                ) from None
            return []
        _, points = self.futures.pop(future.key)
        if future.status == "finished":
            return [(points, future.result())]
        return [(points, f"the worker ended while this point ran ({future.exception()})")]

    def close(self):
        """Give up what is in flight and leave the cluster running."""
        self.client.cancel([future for future, _ in self.futures.values()])
        self.client.close()
