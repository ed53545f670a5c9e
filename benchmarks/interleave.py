"""Time two pieces of code turn by turn, so that both see the same machine."""

import statistics
import time


def interleave(first, second, rounds=7):
    """
    Return the median times [s] of two functions called alternately, and their last answers.

    One call of each goes before and is not counted.
    """
    answers = [first(), second()]
    times = ([], [])
    for _ in range(rounds):
        for number, function in enumerate((first, second)):
            began = time.perf_counter()
            answers[number] = function()
            times[number].append(time.perf_counter() - began)
    return tuple(statistics.median(t) for t in times), answers
