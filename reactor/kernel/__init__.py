"""Numerics on plain arrays: rates, balances, steady states. Knows no file, no unit, no species by name."""
