"""No path in a study file reads outside its folder, on any system, unless that is allowed."""

from __future__ import annotations

import os
from typing import TYPE_CHECKING

import pytest

import knought as kn
from knought.beside import Beside, shown_name
from knought.cli import main
from knought.study import read_study
from tests.test_cli import LIKE_CHARGES

if TYPE_CHECKING:
    from pathlib import Path

OUTSIDE = [
    "../secret.csv",
    "sub/../../secret.csv",
    "/etc/passwd",
    "link.csv",
    "C:\\secret.csv",
    "C:secret.csv",
    "\\\\server\\share\\secret.csv",
    "//server/share/secret.csv",
    "\\\\?\\C:\\secret.csv",
    "NUL",
    "sub/con.csv",
    "COM1",
]

#: A study whose one path is {path}, for every key that holds one.
STUDIES = {
    "[rates] file": "[rates]\nfile = '{path}'",
    "[literature] file": "[rates]\nfile = 'rates.csv'\n[literature]\nfile = '{path}'",
    "[traces] runs": "[traces]\nruns = '{path}'",
    "[traces] file": "[traces]\nruns = 'runs.csv'\nfile = '{path}'",
    "column trace": "[traces]\nruns = 'named.csv'",
}


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    (tmp_path / "secret.csv").write_text(LIKE_CHARGES, encoding="utf-8")
    study = tmp_path / "study"
    (study / "sub").mkdir(parents=True)
    (study / "rates.csv").write_text(LIKE_CHARGES, encoding="utf-8")
    (study / "runs.csv").write_text("run,T/K\n1,298.15\n", encoding="utf-8")
    (study / "link.csv").symlink_to(tmp_path / "secret.csv")
    return study


@pytest.mark.parametrize("path", OUTSIDE)
@pytest.mark.parametrize("key", STUDIES)
def test_no_key_reads_outside_the_folder(folder: Path, key: str, path: str) -> None:
    (folder / "named.csv").write_text(f"run,T/K,trace\n1,298.15,{path}\n", encoding="utf-8")
    (folder / "study.toml").write_text(STUDIES[key].format(path=path), encoding="utf-8")
    with pytest.raises(kn.InputError, match="outside the folder") as caught:
        read_study(folder / "study.toml").report()
    assert caught.value.problems[0].column == key
    assert caught.value.problems[0].file == "study.toml"
    assert "--allow-outside" in str(caught.value)


def test_reduce_stays_in_the_folder_too(folder: Path, capsys: pytest.CaptureFixture[str]) -> None:
    (folder / "study.toml").write_text("[traces]\nruns = '../secret.csv'", encoding="utf-8")
    out = folder / "out"
    assert main(["reduce", str(folder / "study.toml"), "--out", str(out)]) == 2
    assert "outside the folder" in capsys.readouterr().err
    assert not out.exists()


def test_a_file_outside_is_read_where_that_is_allowed(folder: Path) -> None:
    (folder / "study.toml").write_text("[rates]\nfile = '../secret.csv'", encoding="utf-8")
    report = read_study(folder / "study.toml", allow_outside=True).report()
    assert [name for name, _ in report.inputs] == ["study.toml", "secret.csv"]


@pytest.mark.parametrize("path", ["", " ", "a\0b", "x" * 5000, "sub"])
def test_what_is_no_path_to_a_file_is_refused(folder: Path, path: str) -> None:
    with pytest.raises(kn.InputError, match=r"is no path|cannot be reached|no ordinary file"):
        Beside(folder / "study.toml").find(path, "[rates] file")


@pytest.mark.skipif(not hasattr(os, "mkfifo"), reason="this system has no named pipes")
def test_a_pipe_is_refused_before_it_is_waited_for(folder: Path) -> None:
    os.mkfifo(folder / "pipe.csv")
    with pytest.raises(kn.InputError, match="no ordinary file"):
        Beside(folder / "study.toml").find("pipe.csv", "[rates] file")


def test_names_in_a_record_hold_no_folders_of_a_machine() -> None:
    assert shown_name("sub/rates.csv") == "sub/rates.csv"
    assert [shown_name(each) for each in OUTSIDE[:3]] == ["secret.csv", "secret.csv", "passwd"]
    assert shown_name("C:\\a\\b.csv") == "b.csv"
