"""Only whole, ordinary files of a sensible size are opened, and each refusal is quick."""

from __future__ import annotations

import io
import os
import socket
import time
import tracemalloc
from pathlib import Path
from typing import TYPE_CHECKING

import pytest

from knought.errors import InputError
from knought.measurement.reading import archive as archive_module
from knought.measurement.reading import grid as grid_module
from knought.measurement.reading import read_rates, read_text
from knought.measurement.reading.opening import LARGEST_FILE
from tests.corpus.workbooks import raw_xlsx, sheet_xml

if TYPE_CHECKING:
    from collections.abc import Callable

TEXT = "T/K,k/s^-1\n298.15,2.41e-3\n"


def _fifo(path: Path) -> None:
    os.mkfifo(path)


def _socket(path: Path) -> None:
    with socket.socket(socket.AF_UNIX) as made:
        made.bind(str(path))


def _sparse(path: Path) -> None:
    with path.open("wb") as file:
        file.truncate(1_000_000_000)


@pytest.mark.parametrize(
    ("make", "what"),
    [
        (Path.mkdir, "is a folder and no table"),
        (_fifo, "is a pipe and no table"),
        (_socket, "is a socket and no table"),
        (_sparse, "is larger than 200 MB"),
        (lambda path: None, "cannot be read: No such file"),
        (lambda path: path.symlink_to(path), "cannot be read: Too many levels of symbolic links"),
        (lambda path: path.symlink_to("/dev/zero"), "is a device and no table"),
    ],
)
def test_what_is_no_file_of_a_sensible_size_is_refused_at_once(
    make: Callable[[Path], None], what: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    # The path of a socket must be short.
    monkeypatch.chdir(tmp_path)
    make(Path("rates.csv"))
    start = time.monotonic()
    with pytest.raises(InputError, match=rf"^rates\.csv: {what}"):
        read_rates("rates.csv")
    assert time.monotonic() - start < 5


def test_a_path_that_no_system_takes_is_refused() -> None:
    with pytest.raises(InputError, match="no path"):
        read_rates("a\0b.csv")
    with pytest.raises(InputError, match="cannot be read"):
        read_rates("x" * 5000)


def test_a_file_that_may_not_be_read_is_refused(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    path = tmp_path / "rates.csv"
    path.write_text(TEXT)

    def denied(*_: object, **__: object) -> None:
        raise PermissionError(13, "Permission denied")

    monkeypatch.setattr(Path, "open", denied)
    with pytest.raises(InputError, match=r"rates\.csv: cannot be read: Permission denied"):
        read_rates(path)


def test_a_file_that_changes_while_it_is_read_is_refused(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    path = tmp_path / "rates.csv"
    path.write_text(TEXT)
    plain_open = Path.open

    def meddled(self: Path, mode: str = "r") -> object:
        with plain_open(self, "a") as file:
            file.write("300,1\n")
        return plain_open(self, mode)

    monkeypatch.setattr(Path, "open", meddled)
    with pytest.raises(InputError, match="changed while it was read"):
        read_rates(path)


def test_open_files_of_text_and_of_bytes_are_read_as_well(tmp_path: Path) -> None:
    path = tmp_path / "rates.csv"
    path.write_text(TEXT)
    expected = read_rates(path)
    with path.open(encoding="utf-8") as text, path.open("rb") as data:
        for table in (read_rates(text), read_rates(data), read_text(TEXT)):
            assert table.same_runs(expected)
    assert read_rates(io.StringIO(TEXT)).source is not None


def test_too_much_text_is_refused() -> None:
    with pytest.raises(InputError, match="larger than 200 MB"):
        read_rates(io.BytesIO(bytes(LARGEST_FILE + 1)))


@pytest.mark.parametrize(
    ("limit", "value", "what"),
    [("MOST_ROWS", 1, "more than 1 rows"), ("MOST_CELLS", 3, "more than 3 cells")],
)
def test_a_text_with_too_many_rows_or_cells_is_refused(
    limit: str, value: int, what: str, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(grid_module, limit, value)
    with pytest.raises(InputError, match=what):
        read_text(TEXT)


@pytest.mark.parametrize(
    ("limit", "value"), [("_MOST_ELEMENTS", 10), ("_MOST_CHARACTERS", 5), ("_MOST_PARTS", 2)]
)
def test_a_workbook_with_too_much_in_it_is_refused(
    limit: str, value: int, monkeypatch: pytest.MonkeyPatch
) -> None:
    book = raw_xlsx(sheet_xml("A1=T/K|B1=k/s^-1", "A2=#298.15|B2=#0.5"))
    assert len(read_rates(io.BytesIO(book))) == 1
    monkeypatch.setattr(archive_module, limit, value)
    with pytest.raises(InputError, match="far too large unpacked"):
        read_rates(io.BytesIO(book))


def _rows(count: int) -> bytes:
    lines = ["run,T/K,I/(mol/L),k/(L mol^-1 s^-1),u(k)/(L mol^-1 s^-1)"]
    lines += [
        f"{i},{280 + i % 40}.15,0.0{1 + i % 9},{i * 1.7e-3 + 1},0.0{1 + i % 7}"
        for i in range(count)
    ]
    return "\n".join(lines).encode()


def test_time_and_memory_grow_in_proportion_to_the_rows() -> None:
    small, large = _rows(2_000), _rows(16_000)
    times = []
    for data in (small, large):
        best = float("inf")
        for _ in range(2):
            start = time.process_time()
            read_rates(io.BytesIO(data))
            best = min(best, time.process_time() - start)
        times.append(best)
    # Eight times the rows; a quadratic step would show as sixty-four.
    assert times[1] < 20 * times[0]
    tracemalloc.start()
    try:
        read_rates(io.BytesIO(small))
        _, fixed = tracemalloc.get_traced_memory()
        tracemalloc.reset_peak()
        read_rates(io.BytesIO(large))
        _, peak = tracemalloc.get_traced_memory()
    finally:
        tracemalloc.stop()
    # 450 bytes a row are 450 MB for a million of them.
    assert (peak - fixed) / 14_000 < 450
