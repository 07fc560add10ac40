"""Chromium, driven by Playwright, and one report to open; skips where either is missing."""

from __future__ import annotations

import shutil
from pathlib import Path
from typing import TYPE_CHECKING

import pytest

if TYPE_CHECKING:
    from collections.abc import Iterator

    from playwright.sync_api import Browser

    import knought as kn

DATASETS = Path(__file__).parent.parent.parent / "datasets"

#: Names under which distributions install it.
_NAMES = ("chromium", "chromium-browser", "google-chrome")

#: Nothing that would ask the network for anything of its own.
_FLAGS = [
    "--no-sandbox",
    "--disable-gpu",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
]

PLAN = """
[plan]
temperatures = "15, 25, 35 °C"
ionic_strengths = "0.005, 0.05, 0.3 mol/L"
runs = 4
repeatability = "3 %"
aim = "activation_energy"
"""


@pytest.fixture(scope="session")
def browser() -> Iterator[Browser]:
    """A running Chromium."""
    playwright = pytest.importorskip(
        "playwright.sync_api", reason="Playwright is not installed: pip install 'knought[browser]'"
    )
    found = next((path for name in _NAMES if (path := shutil.which(name))), None)
    if found is None:
        pytest.skip("Chromium is not installed: apt-get install chromium")
    with playwright.sync_playwright() as running:
        chromium = running.chromium.launch(executable_path=found, args=_FLAGS)
        yield chromium
        chromium.close()


@pytest.fixture(scope="session")
def report(tmp_path_factory: pytest.TempPathFactory) -> kn.Report:
    """An invented study with literature, candidates and next runs."""
    from knought.study import read_study

    folder = tmp_path_factory.mktemp("study")
    for source in (DATASETS / "opposite-charges").iterdir():
        (folder / source.name).write_bytes(source.read_bytes())
    study = folder / "study.toml"
    study.write_text(study.read_text(encoding="utf-8") + PLAN, encoding="utf-8")
    return read_study(study).report()


@pytest.fixture(scope="session")
def page_file(report: kn.Report, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The page of that study as a file."""
    from knought.reporting.page import page

    path = tmp_path_factory.mktemp("page") / "report.html"
    path.write_text(page(report), encoding="utf-8")
    return path
