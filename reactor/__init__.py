"""Design calculator for continuous photochlorination reactors."""
