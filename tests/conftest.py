"""How the suite runs: one thread a worker, and the same examples every time.

Tests run on all cores already, and small matrices gain nothing from more threads. Hypothesis
draws its examples from the test's own code, so that a change is judged by what it changes; longer
searches with new examples run on demand (``tests/benchmarks``).
"""

import os

from hypothesis import settings

for name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS"):
    os.environ.setdefault(name, "1")

settings.register_profile("suite", derandomize=True, deadline=None)
settings.load_profile(os.environ.get("HYPOTHESIS_PROFILE", "suite"))
