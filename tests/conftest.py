"""How the suite runs: one thread a worker, and the same examples every time.

Tests run on all cores already, and small matrices gain nothing from more threads. Hypothesis
draws its examples from the test's own code, so that a change is judged by what it changes; longer
searches with new examples run on demand (``tests/benchmarks``).
"""

import os

import pytest
from hypothesis import settings

for name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS"):
    os.environ.setdefault(name, "1")

settings.register_profile("suite", derandomize=True, deadline=None)
settings.load_profile(os.environ.get("HYPOTHESIS_PROFILE", "suite"))


def pytest_addoption(parser: pytest.Parser) -> None:
    """Add the only way in which golden files are written anew."""
    parser.addoption(
        "--renew-golden",
        action="store_true",
        help="write the golden files anew instead of comparing with them; then look at git diff",
    )


@pytest.fixture
def undrawn(monkeypatch: pytest.MonkeyPatch) -> None:
    """Leave the figures of pages blank, for tests of what stands around them."""
    leave_figures_blank(monkeypatch)


def leave_figures_blank(monkeypatch: pytest.MonkeyPatch) -> None:
    """Draw nothing into pages, as long as the patch holds."""
    blank = '<svg role="img"><title>blank</title></svg>'
    monkeypatch.setattr("knought.reporting.page._drawing", lambda report, picture: blank)
