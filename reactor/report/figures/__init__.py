"""Figures, drawn with Matplotlib from saved results; nothing here solves anything."""
