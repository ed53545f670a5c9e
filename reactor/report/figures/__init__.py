"""Figures: each takes a record and draws it; matplotlib is loaded inside."""
