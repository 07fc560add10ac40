"""Study files of every kind: settings or a refusal that names the file, in bounded time."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from knought.cli import main
from knought.errors import InputError
from knought.study_file import read_study_file
from knought.study_sections.upstream import read_upstream

if TYPE_CHECKING:
    from pathlib import Path

GOOD = """\
[study]
title = "Like charges"
reference_temperature = "25 °C"
[rates]
file = "rates.csv"
[reaction]
reactants = "A^2- + B^-"
[priors]
ion_size = ["3 Å", "0.6 nm"]
[[shared_errors]]
name = "probe"
kind = "temperature-offset"
u = "0.3 K"
[literature]
file = "literature.csv"
[[candidates]]
name = "direct"
reactants = "A^2- + B^-"
order = "3/2"
[plan]
temperatures = "15 to 45 °C by 10"
runs = 6
repeatability = "3 %"
"""

#: What can stand behind a key.
VALUES = st.sampled_from(
    ["1", "-1", "nan", "inf", "1e308", "9" * 30, "9" * 5000, "true", "[]", "{}", "[[[[]]]]",
     '"x"', '""', '"298.15 K"', '"1e400 K"', '"-5 K"', '"nan K"', '"3 %"', '["1 K", "2 K"]',
     "1979-05-27", "{a={b={c=1}}}", '"\\u202e"', '"\\u0000"', '"1/0"', '"1 to 1e9 K by 1e-9"']
)  # fmt: skip

HUGE = {
    "open brackets": "a=" + "[" * 400_000,
    "brackets": "a=" + "[" * 5000 + "]" * 5000,
    "dotted key": ".".join(["a"] * 100_000) + "=1",
    "dotted section": "[" + ".".join(["a"] * 300_000) + "]",
    "dotted in a table": "a={" + ".".join(["a"] * 100_000) + "=1}",
    "integer": "[study]\nseed=" + "9" * 900_000,
    "hexadecimal": "[study]\nseed=0x" + "f" * 900_000,
    "zeros": "\0" * 900_000,
    "units": '[study]\nreference_temperature="1 ' + "K " * 400_000 + '"',
    "number": '[study]\nreference_temperature="' + "1" * 900_000 + ' K"',
    "reactants": '[reaction]\nreactants="' + "A^2- + " * 100_000 + '"',
    "levels": '[plan]\ntemperatures="' + "1," * 300_000 + ' K"',
    "too large": "#" * 1_000_001,
}


def _read(path: Path, text: str) -> None:
    path.write_text(text, encoding="utf-8", newline="\n")
    for read in (read_study_file, read_upstream):
        refused = None
        try:
            read(path)
        except InputError as error:
            refused = error
        if refused is not None:
            assert len(str(refused)) < 20_000
            assert all(problem.file == path.name for problem in refused.problems)


@pytest.mark.parametrize("case", HUGE)
def test_huge_study_files_are_refused(tmp_path: Path, case: str) -> None:
    path = tmp_path / "study.toml"
    _read(path, HUGE[case])
    with pytest.raises(InputError, match=r"study\.toml"):
        read_study_file(path)


@settings(
    max_examples=60, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture]
)
@given(st.data())
def test_any_value_at_any_key_is_settings_or_a_refusal(tmp_path: Path, data: st.DataObject) -> None:
    lines = GOOD.splitlines()
    for _ in range(data.draw(st.integers(1, 3))):
        place = data.draw(st.integers(0, len(lines) - 1))
        if "=" in lines[place]:
            lines[place] = lines[place].split("=")[0] + "= " + data.draw(VALUES)
    _read(tmp_path / "study.toml", "\n".join(lines))


@settings(
    max_examples=60, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture]
)
@given(st.data())
def test_a_changed_character_is_settings_or_a_refusal(tmp_path: Path, data: st.DataObject) -> None:
    place = data.draw(st.integers(0, len(GOOD) - 1))
    end = place + data.draw(st.integers(0, 3))
    piece = data.draw(st.sampled_from(["", '"', "'", "[", "]", "=", ".", "#", "\n", "\\", "\0"]))
    _read(tmp_path / "study.toml", GOOD[:place] + piece + GOOD[end:])


def test_the_command_refuses_without_a_traceback(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    path = tmp_path / "study.toml"
    for text in ("a=" + "[" * 5000, "[study]\nseed=" + "9" * 5000):
        path.write_text(text, encoding="utf-8")
        assert main(["report", str(path), "--out", str(tmp_path / "out")]) == 2
        said = capsys.readouterr().err
        assert "study.toml" in said
        assert "Traceback" not in said
