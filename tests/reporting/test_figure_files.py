"""Figures as files: formats, widths, and the same bytes for the same study."""

from __future__ import annotations

import io

import pytest
from PIL import Image

import knought as kn
from knought.reporting.style import plain_text
from tests.fitting.test_assess import table


@pytest.fixture(scope="module")
def report() -> kn.Report:
    # Runs at one temperature and without a salt have one figure, so that bitmaps cost little.
    return kn.Report(kn.assess(kn.RateTable.from_arrays([298.15] * 4, [1.0, 2.1, 1.7, 1.4])), "x")


def test_every_picture_comes_in_both_widths_and_every_format(report: kn.Report) -> None:
    files = dict(report.figure_files())
    assert set(files) == {
        f"{width}/{picture.name}.{ending}"
        for picture in report.pictures
        for width in ("single-column", "double-column")
        for ending in ("svg", "pdf", "png")
    }
    assert files["single-column/residuals.svg"].startswith(b"<?xml")
    assert files["single-column/residuals.pdf"].startswith(b"%PDF")
    for width, mm in (("single-column", 86), ("double-column", 178)):
        bitmap = Image.open(io.BytesIO(files[f"{width}/residuals.png"]))
        assert bitmap.width == pytest.approx(mm / 25.4 * 600, abs=1)
        assert bitmap.mode == "RGB"
        assert bitmap.getpixel((0, 0)) == (255, 255, 255)
        assert len(bitmap.getcolors(1 << 20) or ()) > 10  # something is drawn
        assert bitmap.info["dpi"] == pytest.approx((600, 600), abs=0.1)


def test_the_same_study_gives_the_same_bytes(report: kn.Report) -> None:
    again = kn.Report(report.assessment, "x")
    formats = ("svg", "pdf")
    assert dict(report.figure_files(formats)) == dict(again.figure_files(formats))


def test_nothing_is_drawn_where_no_format_is_asked_for(report: kn.Report) -> None:
    untouched = kn.Report(report.assessment, "x")
    assert dict(untouched.figure_files(())) == {}
    assert not untouched._drawings
    with pytest.raises(kn.InputError, match="cannot be written as tiff"):
        dict(report.figure_files(["tiff"]))


def test_text_of_the_user_is_no_mathematics() -> None:
    assert plain_text("a$b_c$") == r"a\$b_c\$"
    assert plain_text("x" * 60) == "x" * 43 + "…"


def test_a_hostile_name_is_drawn_as_it_stands() -> None:
    error = kn.SharedError("$\\frac$ <script>", kind="factor", u=0.03)
    report = kn.Report(kn.assess(table(), shared_errors=[error]), "x")
    budget = next(each for each in report.pictures if each.name == "budget")
    legend = budget.draw().axes[0].get_legend()
    assert legend is not None
    labels = [text.get_text() for text in legend.get_texts()]
    assert r"\$\frac\$ <script>" in labels
