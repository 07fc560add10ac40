"""Quantities and units, species, water, activity: what a solution is made of."""
