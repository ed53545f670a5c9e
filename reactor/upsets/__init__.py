"""What needs further runs of a rated case: deviations, lamp off, sensitivity, curves of steady states."""
