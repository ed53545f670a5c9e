"""Figures of speed as ratios, each measured side by side in one run: `python -m benchmarks`."""
