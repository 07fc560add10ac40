"""One thread a worker: the tests run on all cores already, and small matrices gain nothing."""

import os

import pytest

for name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS"):
    os.environ.setdefault(name, "1")


def pytest_addoption(parser: pytest.Parser) -> None:
    """Add the only way in which golden files are written anew."""
    parser.addoption(
        "--renew-golden",
        action="store_true",
        help="write the golden files anew instead of comparing with them; then look at git diff",
    )
