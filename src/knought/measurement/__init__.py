"""What was measured: tables of rate constants and how they are read."""
