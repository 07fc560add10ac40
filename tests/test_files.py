"""Files and folders are written whole or not at all, whatever happens on the way."""

from __future__ import annotations

import errno
import hashlib
import os
import subprocess
import sys
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from knought import files
from knought.errors import InputError
from knought.files import (
    atomic_write_bytes,
    atomic_write_text,
    os_problem,
    safe_name,
    sha256_of,
    whole_folder,
)


def _names(folder: Path) -> list[str]:
    return sorted(each.name for each in folder.iterdir())


def _fail_half_way(target: Path) -> None:
    with whole_folder(target, overwrite=True) as folder:
        (folder / "a").write_text("new")
        raise RuntimeError("half way")


def test_text_is_written_as_utf_8_with_unix_line_ends(tmp_path: Path) -> None:
    target = tmp_path / "a.txt"
    atomic_write_text(target, "ä\n")
    atomic_write_text(str(target), "å\nb")
    assert target.read_bytes() == "å\nb".encode()
    assert _names(tmp_path) == ["a.txt"]


def test_a_write_that_fails_leaves_the_old_file_and_nothing_else(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    target = tmp_path / "a.txt"
    atomic_write_text(target, "old")

    def full(_: int) -> None:
        raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))

    monkeypatch.setattr(os, "fsync", full)
    with pytest.raises(
        InputError, match=r"a\.txt: cannot be written: No space left.*Free some space"
    ):
        atomic_write_text(target, "new")
    assert target.read_text() == "old"
    assert _names(tmp_path) == ["a.txt"]


def test_permissions_and_links_survive_a_rewrite(tmp_path: Path) -> None:
    target, link = tmp_path / "a.txt", tmp_path / "b.txt"
    atomic_write_text(target, "old")
    target.chmod(0o640)
    link.symlink_to(target)
    atomic_write_text(link, "new")
    assert link.is_symlink()
    assert target.read_text() == "new"
    assert target.stat().st_mode & 0o777 == 0o640


def test_a_device_is_written_to_as_it_stands() -> None:
    atomic_write_bytes("/dev/null", b"gone")
    assert Path("/dev/null").is_char_device()


@pytest.mark.parametrize("name", ["missing/a.txt", "folder", "file/a.txt", "x" * 300])
def test_a_place_that_cannot_be_written_to_is_refused(tmp_path: Path, name: str) -> None:
    (tmp_path / "folder").mkdir()
    (tmp_path / "file").write_text("")
    with pytest.raises(InputError) as refusal:
        atomic_write_text(tmp_path / name, "x")
    assert "cannot be written" in str(refusal.value)
    assert str(tmp_path) not in str(refusal.value)
    assert refusal.value.problems[0].remedy


def test_a_folder_appears_when_it_is_whole(tmp_path: Path) -> None:
    target = tmp_path / "deep" / "out"
    with whole_folder(target) as folder:
        (folder / "a").write_text("1")
        assert not target.exists()
    assert _names(target) == ["a"]
    assert _names(target.parent) == ["out"]


def test_a_folder_that_fails_leaves_nothing(tmp_path: Path) -> None:
    with pytest.raises(RuntimeError, match="half way"):
        _fail_half_way(tmp_path / "out")
    assert _names(tmp_path) == []


def test_an_existing_folder_is_left_alone_unless_told(tmp_path: Path) -> None:
    target = tmp_path / "out"
    with whole_folder(target) as folder:
        (folder / "a").write_text("old")
    with pytest.raises(InputError, match="out: exists already"), whole_folder(target):
        pytest.fail("nothing is begun")
    (target / ".DS_Store").write_text("left by a file manager")
    with whole_folder(target, overwrite=True) as folder:
        (folder / "a").write_text("new")
        (folder / "b").write_text("more")
    assert (target / "a").read_text() == "new"
    assert _names(target) == ["a", "b"]
    assert _names(tmp_path) == ["out"]


def test_overwriting_that_fails_leaves_the_old_folder(tmp_path: Path) -> None:
    target = tmp_path / "out"
    with whole_folder(target) as folder:
        (folder / "a").write_text("old")
    with pytest.raises(RuntimeError, match="half way"):
        _fail_half_way(target)
    assert (target / "a").read_text() == "old"
    assert _names(tmp_path) == ["out"]


def test_overwriting_never_takes_away_a_file_that_is_not_made_anew(tmp_path: Path) -> None:
    target = tmp_path / "out"
    target.mkdir()
    (target / "thesis.tex").write_text("years")
    with (
        pytest.raises(InputError, match=r"holds what is not made anew: thesis\.tex"),
        whole_folder(target, overwrite=True) as folder,
    ):
        (folder / "a").write_text("new")
    assert _names(target) == ["thesis.tex"]
    assert _names(tmp_path) == ["out"]


def test_the_folder_one_works_in_is_never_replaced(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    for place in (".", tmp_path, tmp_path.parent):
        with (
            pytest.raises(InputError, match="folder you are working in"),
            whole_folder(place, overwrite=True),
        ):
            pytest.fail("nothing is begun")


def test_a_file_in_the_place_of_a_folder_is_refused(tmp_path: Path) -> None:
    (tmp_path / "out").write_text("")
    with pytest.raises(InputError, match="no folder"), whole_folder(tmp_path / "out"):
        pytest.fail("nothing is begun")
    with pytest.raises(InputError, match="cannot be made"), whole_folder(tmp_path / "out" / "x"):
        pytest.fail("nothing is begun")


def test_a_full_disk_is_the_users_and_a_missing_file_is_ours(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="No space left"), whole_folder(tmp_path / "out"):
        raise OSError(errno.ENOSPC, "full")
    with pytest.raises(FileNotFoundError), whole_folder(tmp_path / "out") as folder:
        (folder / "missing").read_text()
    assert _names(tmp_path) == []


def test_without_an_exchange_of_names_the_folder_is_swapped_in_two_steps(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(files, "_exchanged", lambda *_: False)
    for text in ("old", "new"):
        with whole_folder(tmp_path / "out", overwrite=True) as folder:
            (folder / "a").write_text(text)
    assert (tmp_path / "out" / "a").read_text() == "new"
    assert _names(tmp_path) == ["out"]


def test_a_killed_process_leaves_the_old_folder(tmp_path: Path) -> None:
    with whole_folder(tmp_path / "out") as folder:
        (folder / "a").write_text("old")
    script = (
        "import os, signal, sys\nfrom pathlib import Path\nfrom knought.files import whole_folder\n"
        "with whole_folder(sys.argv[1], overwrite=True) as folder:\n"
        "    (folder / 'a').write_text('new')\n    os.kill(os.getpid(), signal.SIGKILL)\n"
    )
    source = str(Path(files.__file__).parents[1])
    killed = subprocess.run(
        [sys.executable, "-c", script, str(tmp_path / "out")],
        check=False,
        env={**os.environ, "PYTHONPATH": source},
    )
    assert killed.returncode < 0
    assert (tmp_path / "out" / "a").read_text() == "old"


def test_the_hash_of_a_file_is_that_of_its_bytes(tmp_path: Path) -> None:
    data = b"a" * 3_000_000
    (tmp_path / "a").write_bytes(data)
    # FIPS 180-4 example: SHA-256 of "abc".
    assert sha256_of(b"abc") == "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
    assert sha256_of(tmp_path / "a") == sha256_of(data) == hashlib.sha256(data).hexdigest()
    with pytest.raises(InputError, match="b: cannot be read"):
        sha256_of(tmp_path / "b")


def test_a_refusal_of_the_system_is_said_in_its_words() -> None:
    problem = os_problem(PermissionError(errno.EACCES, "no"), "a.txt", "read")
    assert str(problem) == (
        "a.txt: cannot be read: Permission denied. Check the permissions or choose another place."
    )


@pytest.mark.parametrize(
    ("text", "name"),
    [
        ("k(T, I)", "k(T, I)"), ("a/b\\c:d", "a-b-c-d"), ("CON", "-CON"), ("nul.txt", "-nul.txt"),
        ("com1", "-com1"), ("..", "unnamed"), ("", "unnamed"), (".hidden", "hidden"), ("a. ", "a"),
        ("<script>", "-script-"), ("x" * 300, "x" * 100), ("ä" * 80, "ä" * 50), ("a\u202eb", "a-b"),
    ],
)  # fmt: skip
def test_a_name_is_made_safe(text: str, name: str) -> None:
    assert safe_name(text) == name


@settings(max_examples=40, deadline=None)
@given(st.text(max_size=150))
def test_any_text_makes_a_name_that_every_system_takes(text: str) -> None:
    name = safe_name(text)
    assert name
    assert len(name.encode("utf-8")) <= 100
    assert not set(name) & set('<>:"/\\|?*\0')
    assert name == name.strip(". ") or name.startswith("-")
    assert safe_name(name) == name
