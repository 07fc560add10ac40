"""From a table of rate constants to parameters and what their uncertainty means."""
