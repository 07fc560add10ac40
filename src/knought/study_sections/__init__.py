"""The sections of a study file, each beside what it fills."""
