"""What needs further runs of a rated case: deviations, lamp off, sensitivity, curves of steady states."""

from reactor.upsets.record import upset

__all__ = ["upset"]
