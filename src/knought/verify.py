"""A report's folder held against itself and against its study, run again.

The folder holds what the study read (``inputs/``) and the hash of every file
(``datapackage.json``), so that it can be verified anywhere and years later. Everything in it is
data: nothing that is read here is run, and no path in it leads out of the folder.
"""

from __future__ import annotations

import json
import tempfile
from dataclasses import dataclass
from pathlib import Path, PurePosixPath
from typing import TYPE_CHECKING, Any

from knought.errors import InputError, Problem, quoted
from knought.files import os_problem, read_bytes, sha256_of
from knought.measurement.labels import is_plain_text
from knought.reporting.data_package import DESCRIPTOR, descriptor_text
from knought.reporting.record_comparison import TOLERANCE, compare_records
from knought.study import read_study

if TYPE_CHECKING:
    from collections.abc import Callable

    from knought.study import Study

__all__ = ["Verification", "verify"]

#: JSON files larger than this are none of ours.
_LARGEST = 200_000_000

#: What file managers leave in folders.
_LEFT_BY_SYSTEMS = frozenset({".DS_Store", "Thumbs.db", "desktop.ini"})

_LONGEST_PATH = 500

#: Differences that are named one by one; the rest are counted.
_MOST_NAMED = 5


@dataclass(frozen=True)
class Verification:
    """What was found of a folder.

    Attributes
    ----------
    files
        How many files were held against their hash.
    numbers
        How many numbers of the record were held against those of the study run again; 0 where the
        report was made without a study file, so that there is nothing to run.
    problems
        What does not agree, each with its place; none where all agrees.
    """

    files: int
    numbers: int
    problems: tuple[Problem, ...]

    @property
    def agrees(self) -> bool:
        """Whether everything agrees."""
        return not self.problems

    def __str__(self) -> str:
        if self.problems:
            return str(InputError(self.problems))
        again = (
            f"the study was run again: {self.numbers} numbers agree to {TOLERANCE:g}"
            if self.numbers
            else "made without a study file, so that there is nothing to run again"
        )
        return f"{self.files} files are as they were written; {again}."


def verify(
    folder: str | Path,
    study: str | Path | None = None,
    *,
    allow_outside: bool = False,
    progress: Callable[[str, int], None] | None = None,
) -> Verification:
    """Hold every file of a report's folder against its hash, and run its study again.

    Parameters
    ----------
    folder
        A folder that :func:`knought.run_study` wrote.
    study
        A study file to run instead of the one in the folder: says what changed since. Needed for a
        study whose files lay outside its own folder, as the one kept cannot reach them.
    allow_outside
        Whether `study` may name files outside its own folder; the one kept never may.
    progress
        As for :meth:`knought.study.Study.report`.

    Returns
    -------
    Verification

    Raises
    ------
    InputError
        If the folder is none of ours, or its descriptor cannot be read.
    """
    folder = Path(folder)
    descriptor = _descriptor(folder)
    contents, problems = _held_against_hashes(folder, descriptor)
    files = len(descriptor["resources"])
    kept = _kept_inputs(descriptor, contents)
    if study is None and descriptor["study"] is None:
        return Verification(files, 0, tuple(problems))
    record = _record(contents, problems)
    try:
        if study is None:
            again = _run_kept(kept, progress)
            changed: list[Problem] = []
        else:
            other = read_study(study, allow_outside=allow_outside)
            again, changed = _run_other(other, descriptor, progress)
    except InputError as error:
        problems.append(Problem("the study cannot be run again"))
        return Verification(files, 0, (*problems, *error.problems))
    problems += changed
    numbers = 0
    if record is not None:
        differences, numbers = compare_records(record, again)
        if changed:  # their hashes stand in the record too
            differences = [each for each in differences if not each.startswith("inputs.")]
        problems += _told(differences)
    return Verification(files, numbers, tuple(problems))


def read_json(content: bytes, name: str) -> Any:
    """Return the data of a JSON file that may be broken or hostile.

    Parameters
    ----------
    content
        The bytes.
    name
        Name of the file, for messages.

    Raises
    ------
    InputError
        If it is no JSON of plain data: not UTF-8, broken, nested too deeply, with a key twice, or
        with numbers that JSON does not have.
    """
    if len(content) > _LARGEST:
        raise InputError(Problem("is too large for a file of a report", file=name))

    def once(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
        made = dict(pairs)
        if len(made) != len(pairs):
            raise ValueError("a key stands twice in one object")
        return made

    def no_number(text: str) -> float:
        raise ValueError(f"{text} is no number of JSON")

    try:
        return json.loads(content.decode("utf-8"), object_pairs_hook=once, parse_constant=no_number)
    except (ValueError, RecursionError) as error:
        cause = "nested too deeply" if isinstance(error, RecursionError) else str(error)
        raise InputError(
            Problem(f"is no JSON that can be read: {cause[:200]}", _ANEW, file=name)
        ) from error


_ANEW = "take the folder from where it was kept, or make the report anew"


def _descriptor(folder: Path) -> dict[str, Any]:
    """Read the descriptor and check its shape; its own hash is checked with the files.

    Raises
    ------
    InputError
        If it is not there, or no descriptor of ours.
    """
    if not folder.is_dir():
        raise InputError(
            Problem("is no folder", "name the folder of a report", file=folder.name or str(folder))
        )
    if not (folder / DESCRIPTOR).is_file():
        raise InputError(
            Problem(
                f"holds no {DESCRIPTOR}, so that it is no folder of a report",
                "name the folder that `knought report` made",
                file=folder.resolve().name,
            )
        )
    found = read_json(read_bytes(folder / DESCRIPTOR), DESCRIPTOR)
    wrong = _wrong_with(found)
    if wrong:
        raise InputError(Problem(wrong, _ANEW, file=DESCRIPTOR))
    made: dict[str, Any] = found
    return made


def _wrong_with(found: Any) -> str:
    """Return what is wrong with the shape of a descriptor; empty for nothing."""
    if not isinstance(found, dict) or not isinstance(found.get("resources"), list):
        return "lists no files"
    if not isinstance(found.get("study"), str | None):
        return "does not say which file is the study"
    paths = []
    for each in found["resources"]:
        if not isinstance(each, dict) or not isinstance(each.get("path"), str):
            return "lists a file without a path"
        paths.append(each["path"])
        for name in (each["path"], each.get("input", "x")):
            if not isinstance(name, str) or not _inside(name):
                return f"names a path that is not in the folder, {quoted(str(name))}"
        if not isinstance(each.get("hash"), str) or not isinstance(each.get("bytes"), int):
            return f"gives no hash or size of {quoted(each['path'])}"
    if len(set(paths)) != len(paths):
        return "lists a file twice"
    if found["study"] is not None and found["study"] not in paths:
        return "names a study file that it does not list"
    return ""


def _inside(path: str) -> bool:
    parts = PurePosixPath(path).parts
    return (
        bool(parts)
        and len(path) <= _LONGEST_PATH
        and not path.startswith("/")
        and ".." not in parts
        and "\n" not in path
        and is_plain_text(path)
    )


def _there(folder: Path, path: str) -> bool:
    """Whether a listed file is there, and in the folder whatever links say."""
    target = folder / path
    try:
        return target.is_file() and target.resolve().is_relative_to(folder.resolve())
    except OSError:  # no such name can be on this system
        return False


def _held_against_hashes(
    folder: Path, descriptor: dict[str, Any]
) -> tuple[dict[str, bytes], list[Problem]]:
    """Return the content of every listed file that can be read, and what does not agree.

    Raises
    ------
    InputError
        If the folder cannot be read.
    """
    contents: dict[str, bytes] = {}
    problems = []
    written = read_bytes(folder / DESCRIPTOR)
    if written.decode("utf-8") != descriptor_text(descriptor):
        problems.append(Problem("was changed since it was written", _ANEW, file=DESCRIPTOR))
    listed = {DESCRIPTOR}
    for each in descriptor["resources"]:
        path = each["path"]
        listed.add(path)
        if not _there(folder, path):
            problems.append(Problem("is missing", _ANEW, file=path))
            continue
        content = read_bytes(folder / path)
        contents[path] = content
        if len(content) != each["bytes"] or f"sha256:{sha256_of(content)}" != each["hash"]:
            what = "this input was changed" if "input" in each else "was changed"
            problems.append(Problem(f"{what} since it was written", _ANEW, file=path))
    try:
        there = sorted(
            path.relative_to(folder).as_posix() for path in folder.rglob("*") if not path.is_dir()
        )
    except OSError as error:
        raise InputError(os_problem(error, folder.name, "read")) from error
    problems += [
        Problem("was added since the folder was written", "move it elsewhere", file=path)
        for path in there
        if path not in listed and path.rpartition("/")[2] not in _LEFT_BY_SYSTEMS
    ]
    return contents, problems


def _kept_inputs(descriptor: dict[str, Any], contents: dict[str, bytes]) -> dict[str, bytes]:
    """Return what the study reads by the names that it uses, the study file first."""
    inputs = [each for each in descriptor["resources"] if "input" in each]
    inputs.sort(key=lambda each: each["path"] != descriptor["study"])
    return {each["input"]: contents[each["path"]] for each in inputs if each["path"] in contents}


def _record(contents: dict[str, bytes], problems: list[Problem]) -> Any:
    """Return the record of the folder; None, and a problem more, where it cannot be read."""
    if "results.json" not in contents:
        if not any(each.file == "results.json" for each in problems):
            problems.append(
                Problem("is not among the files of the folder", _ANEW, file="results.json")
            )
        return None
    try:
        return read_json(contents["results.json"], "results.json")
    except InputError as error:
        problems += error.problems
        return None


def _run_other(
    study: Study, descriptor: dict[str, Any], progress: Callable[[str, int], None] | None
) -> tuple[Any, list[Problem]]:
    """Return the record of another study file, and which of its inputs are others than before."""
    report = study.report(progress)
    hashes = {each["input"]: each["hash"] for each in descriptor["resources"] if "input" in each}
    changed = [
        Problem("this input is another than when the report was made", file=name)
        for name, digest in report.inputs
        if hashes.get(name) != f"sha256:{digest}"
    ]
    return json.loads(report.record()), changed


def _run_kept(kept: dict[str, bytes], progress: Callable[[str, int], None] | None) -> Any:
    """Return the record of the study in the folder, run again.

    Raises
    ------
    InputError
        If the study cannot be run.
    """
    if not kept:
        raise InputError(Problem("no input is left in the folder", _ANEW))
    with tempfile.TemporaryDirectory(prefix="knought-") as place:
        for name, content in kept.items():
            target = Path(place, name)
            if not target.resolve().is_relative_to(Path(place).resolve()):
                raise InputError(Problem("no file can have this name here", file=name))
            try:
                target.parent.mkdir(parents=True, exist_ok=True)
                target.write_bytes(content)
            except OSError as error:
                raise InputError(os_problem(error, name, "written")) from error
        report = read_study(Path(place, next(iter(kept)))).report(progress)
        return json.loads(report.record())


def _told(differences: list[str]) -> list[Problem]:
    told = [
        Problem(f"differs from the study run again: {text}", file="results.json")
        for text in differences[:_MOST_NAMED]
    ]
    if len(differences) > _MOST_NAMED:
        more = len(differences) - _MOST_NAMED
        told.append(Problem(f"{more} more differences", file="results.json"))
    return told
