"""The notebooks run from top to bottom, and the outputs that are kept are those of a fresh run."""

from __future__ import annotations

import re
from pathlib import Path
from typing import Any

import pytest

pytestmark = pytest.mark.notebook

NOTEBOOKS = sorted((Path(__file__).parent.parent / "notebooks").glob("*.ipynb"))

_NUMBER = re.compile(r"[-−+]?\d+(?:\.\d+)?(?:e[-+]?\d+)?")


def printed(cell: Any) -> str:
    """Everything that a cell printed."""
    outputs = cell.get("outputs", [])
    return "".join(each["text"] for each in outputs if each["output_type"] == "stream")


def pictures(cell: Any) -> int:
    """How many figures a cell shows."""
    return sum("image/png" in each.get("data", {}) for each in cell.get("outputs", []))


def test_there_are_notebooks_to_run() -> None:
    assert len(NOTEBOOKS) >= 3


@pytest.mark.parametrize("path", NOTEBOOKS, ids=lambda path: path.stem)
def test_a_notebook_runs_and_says_what_it_kept(path: Path) -> None:
    nbformat = pytest.importorskip("nbformat", reason="nbformat is not installed")
    nbclient = pytest.importorskip("nbclient", reason="nbclient is not installed")
    pytest.importorskip("ipykernel", reason="ipykernel is not installed")
    kept, fresh = (nbformat.read(path, as_version=4) for _ in range(2))
    nbformat.validate(kept)
    # A kernel of its own Python; a cell that fails raises.
    nbclient.NotebookClient(fresh, timeout=300, kernel_name="python3").execute()
    for one, other in zip(kept.cells, fresh.cells, strict=True):
        assert pictures(one) == pictures(other)
        said, again = printed(one), printed(other)
        assert _NUMBER.sub("#", said) == _NUMBER.sub("#", again)
        # Digits may turn in their last place on another machine.
        for first, second in zip(_NUMBER.findall(said), _NUMBER.findall(again), strict=True):
            a, b = (float(each.replace("−", "-")) for each in (first, second))
            assert b == pytest.approx(a, rel=0.02, abs=0.02)
    assert sum(pictures(cell) for cell in kept.cells) >= 2


@pytest.mark.parametrize("path", NOTEBOOKS, ids=lambda path: path.stem)
def test_a_notebook_keeps_no_path_and_says_that_its_data_are_invented(path: Path) -> None:
    text = path.read_text(encoding="utf-8")
    assert "invented" in text
    assert not re.search(r"/(?:home|root|tmp|Users|work)/", text)
    assert len(text) < 400_000
