"""Least squares, distributions and seeds: mathematics that knows no chemistry."""
