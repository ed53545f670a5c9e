"""
One local worker: a process that reads batches of points on its input and answers with rows.

It is started as a program of its own (`python -m reactor.study.worker`), so a script that calls
`reactor.sweep` needs no guard, and it ends when its input closes, so it does not outlive the study.
"""

import os
import pickle
import signal
import sys


def main():
    """Serve batches until the input ends."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)  # Ctrl-C is the parent's: it keeps what is finished
    given, answers = sys.stdin.buffer, os.fdopen(os.dup(1), "wb")
    os.dup2(2, 1)  # what a rating prints must not get among the answers
    sys.path[:] = pickle.load(given)
    from reactor.study.points import prepared

    rows_of = prepared(pickle.load(given))
    while True:
        try:
            points = pickle.load(given)
        except EOFError:
            return
        rows = rows_of(points)
        try:
            pickle.dump(rows, answers, pickle.HIGHEST_PROTOCOL)
            answers.flush()
        except BrokenPipeError:  # the study has gone
            os._exit(0)


if __name__ == "__main__":
    main()
