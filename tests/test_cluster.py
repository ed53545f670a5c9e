"""A study on a Dask cluster: scheduler and workers as processes of their own on the loopback interface."""

import json
import os
import subprocess
import sys
import time
from pathlib import Path

import pytest
import standin

from reactor import study
from reactor.case import load
from reactor.errors import CaseError

pytest.importorskip("distributed", reason="the extra [cluster] is not installed")

HERE = Path(__file__).parent
CASE = HERE.parent / "cases" / "fulmar.toml"
VARY = ["lamp.power=1..500 W, 400"]
PAUSE = {"STANDIN_PAUSE": "0.01"}


def start(*words, **environment):
    known = os.pathsep.join([str(HERE.parent), str(HERE), os.environ.get("PYTHONPATH", "")])
    return subprocess.Popen(
        [sys.executable, "-W", "ignore", "-m", *words],
        stdout=subprocess.DEVNULL,
        stderr=subprocess.DEVNULL,
        env=os.environ | {"PYTHONPATH": known} | environment,
    )


@pytest.fixture
def cluster(tmp_path):
    """Yield the address of a scheduler and its two workers."""
    file = tmp_path / "scheduler.json"
    running = [
        start(
            "distributed.cli.dask_scheduler",
            "--host",
            "127.0.0.1",
            "--port",
            "0",
            "--no-dashboard",
            "--scheduler-file",
            str(file),
        )
    ]
    try:
        deadline = time.monotonic() + 60
        while not (file.exists() and file.read_text().strip()):
            assert time.monotonic() < deadline, "the scheduler did not start"
            time.sleep(0.05)
        address = json.loads(file.read_text())["address"]
        workers = [
            start(
                "distributed.cli.dask_worker",
                address,
                "--host",
                "127.0.0.1",
                "--nthreads",
                "1",
                "--no-nanny",
                "--no-dashboard",
                "--local-directory",
                str(tmp_path),
                **PAUSE,
            )
            for _ in range(2)
        ]
        running += workers
        _wait(address, 2)
        yield address, workers
    finally:
        for process in running[::-1]:
            process.kill()
            process.wait()


def _wait(address, number):
    from distributed import Client

    with Client(address, timeout=60, set_as_default=False) as client:
        client.wait_for_workers(number, timeout=60)


def rows(path):
    tables = study.read(path)
    names = [name for name in tables.points if name != "seconds"]
    return [[tables.points[name][i] for name in names] for i in range(len(tables))]


def test_a_cluster_that_loses_a_worker_gives_the_same_numbers_as_one_process(tmp_path, cluster):
    address, workers = cluster
    case = load(CASE)
    points = study.design(case, VARY)
    killed = []

    def tell(tally):
        if tally.finished > 60 and not killed:
            killed.append(tally.finished)
            workers[0].kill()

    what = {"evaluator": "standin", "columns": standin.COLUMNS}
    tally = study.sweep_file(
        case, points, tmp_path / "far.study", study.Crew(scheduler=address), tell=tell, **what
    )
    assert killed
    assert workers[0].wait() == -9
    assert (tally.finished, tally.failed) == (400, 0)
    study.sweep_file(case, points, tmp_path / "here.study", study.Crew(0), **what)
    assert rows(tmp_path / "far.study") == rows(tmp_path / "here.study")


def test_no_scheduler_is_told_in_a_sentence(tmp_path):
    from reactor.study.cluster import Cluster
    from reactor.study.points import Job

    with pytest.raises(CaseError, match="no Dask scheduler answers"):
        Cluster(Job("standin", None), "tcp://127.0.0.1:1", patience=0.5)
