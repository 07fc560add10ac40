"""What every command keeps to: nothing of the user's is overwritten, and any terminal will do."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path
from typing import TYPE_CHECKING

import pytest

import knought
from knought.cli import main
from knought.cli.main import _SUBCOMMANDS, _parser
from tests.test_cli import LIKE_CHARGES

if TYPE_CHECKING:
    import argparse

PLAN = ["plan", "--temperatures", "15, 25 °C", "--runs", "3", "--repeatability", "3 %", "--csv"]

#: Words of a call that writes the file named behind them.
WRITING = {
    "read": ["read", "rates.csv", "--out"],
    "fit": ["fit", "rates.csv", "--salt-law", "davies", "--json"],
    "medium": ["medium", "NaCl=0.1", "--csv"],
    "plan": PLAN,
}


@pytest.fixture
def place(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    (tmp_path / "rates.csv").write_text(LIKE_CHARGES, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    return tmp_path


@pytest.mark.parametrize("name", WRITING)
def test_a_file_that_is_there_stays_unless_told(
    place: Path, name: str, capsys: pytest.CaptureFixture[str]
) -> None:
    target = place / "mine.csv"
    target.write_text("mine", encoding="utf-8")
    assert main([*WRITING[name], str(target)]) == 2
    assert "mine.csv: exists already and is left as it is" in capsys.readouterr().err
    assert target.read_text(encoding="utf-8") == "mine"
    assert main([*WRITING[name], str(target), "--overwrite"]) == 0
    assert target.read_text(encoding="utf-8") != "mine"


@pytest.mark.parametrize(("name", "words"), [
    ("compare", ["compare", "rates.csv", "rates.csv", "--figure"]),
    ("compensation", ["compensation", "rates.csv", "rates.csv", "--figure"]),
])  # fmt: skip
def test_a_figure_that_is_there_stays_before_any_work(
    place: Path, name: str, words: list[str], capsys: pytest.CaptureFixture[str]
) -> None:
    target = place / f"{name}.svg"
    target.write_text("mine", encoding="utf-8")
    assert main([*words, str(target)]) == 2
    assert capsys.readouterr().err.startswith(f"knought: {name}.svg: exists already")
    assert target.read_text(encoding="utf-8") == "mine"


def test_a_table_is_not_replaced_by_its_own_clean_form(place: Path) -> None:
    assert main(["read", "rates.csv", "--out", "rates.csv"]) == 2
    (place / "clean.schema.json").write_text("mine", encoding="utf-8")
    assert main(["read", "rates.csv", "--out", "clean.csv"]) == 2
    assert not (place / "clean.csv").exists()


def subcommands() -> dict[str, argparse.ArgumentParser]:
    action = next(each for each in _parser()._actions if hasattr(each, "_name_parser_map"))
    found: dict[str, argparse.ArgumentParser] = action._name_parser_map
    return found


@pytest.mark.parametrize("name", [each.NAME for each in _SUBCOMMANDS])
def test_every_command_can_do_without_unicode(name: str) -> None:
    known = {word for each in subcommands()[name]._actions for word in each.option_strings}
    assert "--format" in known
    if known & {"--csv", "--json", "--figure"}:
        assert "--overwrite" in known


def test_a_terminal_that_has_no_such_signs_gets_others_and_no_fault(place: Path) -> None:
    ours = str(Path(knought.__file__).parents[1])
    environment = os.environ | {
        "PYTHONIOENCODING": "ascii", "PYTHONUTF8": "0", "TERM": "xterm", "PYTHONPATH": ours
    }  # fmt: skip
    calls = [["fit", "rates.csv", "--salt-law", "davies", "--format", "text"], ["fit", "--help"]]
    for words in calls:
        done = subprocess.run(
            [sys.executable, "-m", "knought", *words],
            cwd=place, env=environment, capture_output=True, check=False,
        )  # fmt: skip
        assert done.returncode == 0, done.stderr
        assert done.stdout.isascii()
        assert b"\x1b" not in done.stdout + done.stderr  # no colours where no terminal is
        assert done.stderr == b""
