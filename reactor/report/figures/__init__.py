"""Figures from plain records: each takes its data and an Axes, and returns the Axes."""
