"""The folder of a report: its record, its package, and whether a changed byte is found."""

from __future__ import annotations

import json
import os
import re
import shutil
import sys
from typing import TYPE_CHECKING, Any

import pytest

import knought as kn
from knought.cli import main
from knought.reporting.data_package import descriptor_text
from knought.reporting.record import schema_text
from knought.reporting.record_comparison import compare_records
from knought.study import read_study, write_report
from knought.verify import read_json, verify
from tests.conftest import leave_figures_blank
from tests.reporting.test_golden import STATES
from tests.test_cli import LIKE_CHARGES

if TYPE_CHECKING:
    from pathlib import Path

STUDY = """\
[study]
title = "Like charges"
[rates]
file = "rates.csv"
[predict]
temperatures = "25, 37 °C"
ionic_strengths = "0, 0.15 mol/L"
[[candidates]]
name = "two anions"
reactants = "A^2- + B^-"
"""
CHECKS = """
[checks]
bootstrap = 100
monte_carlo = 1000
"""


@pytest.fixture(scope="module")
def written(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("study")
    (folder / "rates.csv").write_text(LIKE_CHARGES, encoding="utf-8")
    (folder / "study.toml").write_text(STUDY, encoding="utf-8")
    with pytest.MonkeyPatch.context() as patch:
        leave_figures_blank(patch)
        kn.run_study(folder / "study.toml", folder / "out", figure_formats=())
    return folder


@pytest.fixture
def copy(written: Path, tmp_path: Path) -> Path:
    shutil.copytree(written / "out", tmp_path / "out")
    return tmp_path / "out"


def test_a_folder_comes_out_again(written: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["verify", str(written / "out")]) == 0
    said = capsys.readouterr().out
    numbers = re.search(r"run again: (\d+) numbers agree to 1e-09", said)
    assert numbers is not None
    assert int(numbers[1]) > 300


def test_the_package_is_one_that_frictionless_takes(written: Path) -> None:
    frictionless: Any = pytest.importorskip("frictionless")
    report = frictionless.validate(str(written / "out" / "datapackage.json"))
    assert report.valid, report.flatten(["title", "message"])
    package = json.loads((written / "out" / "datapackage.json").read_text(encoding="utf-8"))
    paths = {each["path"] for each in package["resources"]}
    there = {p.relative_to(written / "out").as_posix() for p in (written / "out").rglob("*.*")}
    assert paths == there - {"datapackage.json"}
    assert len({each["name"] for each in package["resources"]}) == len(paths)
    tables = [each for each in package["resources"] if each["path"].endswith(".csv")]
    assert sum("schema" in each for each in tables) > 8


@pytest.mark.parametrize("state", [*STATES, "study"])
def test_the_record_follows_its_schema(state: str, written: Path) -> None:
    jsonschema: Any = pytest.importorskip("jsonschema")
    if state == "study":
        (written / "checks.toml").write_text(STUDY + CHECKS, encoding="utf-8")
        text = read_study(written / "checks.toml").report().record()
    else:
        text = STATES[state]().record()
    checker = jsonschema.Draft202012Validator(json.loads(schema_text()))
    data = json.loads(text)
    assert [error.message for error in checker.iter_errors(data)] == []
    # Nothing can be added, or left out, unless the schema is told.
    assert not checker.is_valid(data | {"more": 1})
    for key in data:
        assert key not in json.loads(schema_text())["required"] or not checker.is_valid(
            {other: value for other, value in data.items() if other != key}
        )


def test_the_schema_itself_is_sound_and_closed() -> None:
    jsonschema: Any = pytest.importorskip("jsonschema")
    schema = json.loads(schema_text())
    jsonschema.Draft202012Validator.check_schema(schema)
    pending, objects = [schema], 0
    while pending:
        each = pending.pop()
        if each.get("type") == "object":
            objects += 1
            assert each["additionalProperties"] is not True
            assert set(each.get("required", ())) <= set(each.get("properties", ()))
        pending += [v for v in each.values() if isinstance(v, dict)]
        pending += [v for values in each.values() if isinstance(values, list)
                    for v in values if isinstance(v, dict)]  # fmt: skip
    assert objects > 15


def test_a_changed_byte_is_found_anywhere_and_so_is_a_file_too_many_or_too_few(
    copy: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    """In every file at once, one digit each, so that what it holds can still be read."""
    (copy / "summary.txt").unlink()
    names = {path.relative_to(copy).as_posix() for path in copy.rglob("*.*")}
    for name in names:
        content = bytearray((copy / name).read_bytes())
        place = max(i for i, byte in enumerate(content) if 48 <= byte <= 57)
        content[place] = 48 + (content[place] - 47) % 10
        (copy / name).write_bytes(content)
    (copy / "tables" / "mine.txt").write_text("mine", encoding="utf-8")
    (copy / ".DS_Store").write_bytes(b"")
    found = verify(copy)
    whats = {str(problem.file): problem.what for problem in reversed(found.problems)}
    assert {name for name, what in whats.items() if "was changed since" in what} >= names
    assert whats["inputs/rates.csv"].startswith("this input was changed")
    assert whats["summary.txt"] == "is missing"
    assert whats["tables/mine.txt"].startswith("was added")
    assert ".DS_Store" not in whats
    assert str(copy) not in str(found)
    (copy / "inputs" / "study.toml").unlink()
    assert main(["verify", str(copy)]) == 2
    assert capsys.readouterr().err.count("knought:") == 1


def test_a_number_that_does_not_come_out_again_is_named(copy: Path) -> None:
    """Whoever makes all hashes anew is found out by the study itself."""
    record = json.loads((copy / "results.json").read_text(encoding="utf-8"))
    record["parameters"]["charge_product"]["value"] *= 1 + 3e-9
    content = (json.dumps(record, indent=1) + "\n").encode()
    (copy / "results.json").write_bytes(content)
    package = json.loads((copy / "datapackage.json").read_text(encoding="utf-8"))
    entry = next(each for each in package["resources"] if each["path"] == "results.json")
    entry["bytes"] = len(content)
    entry["hash"] = f"sha256:{kn.files.sha256_of(content)}"
    (copy / "datapackage.json").write_text(descriptor_text(package), encoding="utf-8", newline="\n")
    (problem,) = verify(copy).problems
    assert "parameters.charge_product.value" in str(problem)


def test_an_input_that_is_another_than_before_is_named(written: Path, copy: Path) -> None:
    elsewhere = copy.parent / "study"
    elsewhere.mkdir()
    for name in ("study.toml", "rates.csv"):
        shutil.copy(written / name, elsewhere / name)
    assert verify(copy, elsewhere / "study.toml").agrees
    (elsewhere / "rates.csv").write_text(LIKE_CHARGES + "\n", encoding="utf-8")
    (problem,) = verify(copy, elsewhere / "study.toml").problems
    assert problem.file == "rates.csv"
    assert "another" in problem.what


def test_a_study_that_reads_outside_its_folder_is_verified_from_where_it_lies(
    written: Path, tmp_path: Path
) -> None:
    study = tmp_path / "inner" / "study.toml"
    study.parent.mkdir()
    shutil.copy(written / "rates.csv", tmp_path / "rates.csv")
    study.write_text('[rates]\nfile = "../rates.csv"\n[laws]\nsalt = "davies"\n', encoding="utf-8")
    with pytest.MonkeyPatch.context() as patch:
        leave_figures_blank(patch)
        kn.run_study(study, tmp_path / "out", figure_formats=(), allow_outside=True)
    assert "outside the folder" in str(verify(tmp_path / "out"))
    assert verify(tmp_path / "out", study, allow_outside=True).agrees


def test_a_record_that_cannot_be_read_is_a_problem_and_no_fault(copy: Path) -> None:
    (copy / "results.json").write_bytes(b"[" * 100_000)
    whats = [problem.what for problem in verify(copy).problems]
    assert whats[0].startswith("was changed")
    assert whats[1] == "is no JSON that can be read: nested too deeply"


def test_inputs_that_no_folder_can_hold_are_a_problem_and_no_fault(copy: Path) -> None:
    package = json.loads((copy / "datapackage.json").read_text(encoding="utf-8"))
    inputs = [each for each in package["resources"] if "input" in each]
    inputs[0]["input"], inputs[1]["input"] = "a", "a/b"
    (copy / "datapackage.json").write_text(descriptor_text(package), encoding="utf-8", newline="\n")
    assert "cannot be written" in str(verify(copy))


@pytest.mark.usefixtures("undrawn")
def test_a_report_without_a_study_is_held_against_its_hashes_alone(tmp_path: Path) -> None:
    write_report(STATES["warnings"](), tmp_path / "out", figure_formats=())
    found = verify(tmp_path / "out")
    assert found.agrees
    assert found.numbers == 0
    assert "nothing to run again" in str(found)


HOSTILE = [
    b"",
    b"\xff\xfe{}",
    b"[" * 100_000,
    b'{"resources": [], "resources": []}',
    b'{"resources": NaN, "study": null}',
    b"[]",
    b'{"resources": [1], "study": null}',
    b'{"resources": [], "study": "study.toml"}',
    b'{"resources": [{"path": "../x", "hash": "", "bytes": 1}], "study": null}',
    b'{"resources": [{"path": "/etc/passwd", "hash": "", "bytes": 1}], "study": null}',
    b'{"resources": [{"path": "\\ud800", "hash": "", "bytes": 1}], "study": null}',
    b'{"resources": [{"path": "a\\u0000b", "hash": "", "bytes": 1}], "study": null}',
    b'{"resources": [{"path": "a", "input": "../b", "hash": "", "bytes": 1}], "study": null}',
    b'{"resources": [{"path": "a", "hash": "", "bytes": 1' + b"0" * 5000 + b'}], "study": null}',
]


@pytest.mark.parametrize("content", HOSTILE, ids=range(len(HOSTILE)))
def test_a_hostile_descriptor_gives_one_clear_message(
    tmp_path: Path, content: bytes, capsys: pytest.CaptureFixture[str]
) -> None:
    (tmp_path / "datapackage.json").write_bytes(content)
    assert main(["verify", str(tmp_path)]) == 2
    said = capsys.readouterr().err
    assert said.startswith("knought: datapackage.json: ")
    assert len(said) < 600


def test_bytes_broken_at_random_never_escape_as_another_error(copy: Path) -> None:
    import random

    whole = (copy / "datapackage.json").read_bytes()
    chance = random.Random(20250101)  # noqa: S311
    for _ in range(150):
        broken = bytearray(whole)
        for _ in range(chance.randint(1, 4)):
            place = chance.randrange(len(broken))
            broken[place : place + chance.randint(0, 3)] = chance.randbytes(chance.randint(0, 3))
        try:
            data = read_json(bytes(broken), "datapackage.json")
        except kn.InputError:
            continue
        compare_records(data, json.loads(whole))


@pytest.mark.skipif(sys.platform == "win32", reason="links need a right on Windows")
def test_a_link_out_of_the_folder_is_not_followed(copy: Path) -> None:
    secret = copy.parent / "elsewhere.txt"
    shutil.copy(copy / "summary.txt", secret)
    (copy / "summary.txt").unlink()
    os.symlink(secret, copy / "summary.txt")
    assert {problem.file for problem in verify(copy).problems} == {"summary.txt"}


@pytest.mark.parametrize(
    ("old", "new", "places"),
    [
        ({"a": 1.0}, {"a": 1.0 + 5e-10}, 0),
        ({"a": 1.0}, {"a": 1.0 + 5e-9}, 1),
        ({"a": 1e-15}, {"a": 1.1e-15}, 1),
        (
            {"value": 1e-15, "standard_uncertainty": 2.0},
            {"value": 3e-15, "standard_uncertainty": 2.0},
            0,
        ),
        ({"a": [1.0, 1e-17]}, {"a": [1.0, 0.0]}, 0),
        ({"a": [1.0]}, {"a": [1.0, 2.0]}, 1),
        ({"a": None}, {"a": 1.0}, 1),
        ({"a": True}, {"a": 1}, 1),
        ({"a": "x"}, {"b": "x"}, 2),
        ({"knought": "1"}, {"knought": "2"}, 0),
        ({"a": 10**400}, {"a": 1.0}, 1),
    ],
)  # fmt: skip
def test_records_agree_or_not(old: Any, new: Any, places: int) -> None:
    assert len(compare_records(old, new)[0]) == places
