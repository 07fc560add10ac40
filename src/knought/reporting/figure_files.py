"""Figures as files: each picture at both column widths as SVG, PDF and 600-dpi PNG."""

from __future__ import annotations

import io
import struct
import warnings
import zlib
from contextlib import contextmanager
from typing import TYPE_CHECKING, Any

import numpy as np

from knought.errors import InputError
from knought.reporting.style import DOUBLE_COLUMN, SINGLE_COLUMN, STYLE

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from matplotlib.figure import Figure
    from numpy.typing import NDArray

__all__ = ["FIGURE_FORMATS", "WIDTHS", "check_formats", "figure_bytes", "laid_out"]

#: Formats of the figures in a report's folder.
FIGURE_FORMATS = ("svg", "pdf", "png")

#: Folder of each width, in inches (86 mm and 178 mm).
WIDTHS = {"single-column": SINGLE_COLUMN, "double-column": DOUBLE_COLUMN}

#: Resolution of bitmaps in dots per inch, as printers ask it of line art with text.
_DPI = 600

#: Level of zlib: higher ones take longer and hardly make a drawing smaller.
_COMPRESSION = 3


def check_formats(formats: Sequence[str]) -> None:
    """Refuse formats in which figures cannot be written.

    Raises
    ------
    InputError
        If a format is none of ``"svg"``, ``"pdf"`` and ``"png"``.
    """
    unknown = [each for each in formats if each not in FIGURE_FORMATS]
    if unknown:
        raise InputError(
            f"figures cannot be written as {', '.join(unknown)}",
            f"choose among {', '.join(FIGURE_FORMATS)}",
        )


def laid_out(figure: Figure) -> Figure:
    """Place everything once and keep it there, so that no format has to place it again."""
    import matplotlib as mpl

    with mpl.rc_context(STYLE), _no_glyph_warnings():
        engine = figure.get_layout_engine()
        if engine is not None:
            engine.execute(figure)
    figure.set_layout_engine("none")
    return figure


def figure_bytes(figure: Figure, file_format: str, salt: str) -> bytes:
    """Return a figure as the content of a file that is the same for the same figure.

    Parameters
    ----------
    figure
        The figure.
    file_format
        ``"svg"``, ``"pdf"`` or ``"png"``.
    salt
        Goes into the ids of an SVG, so that they do not depend on chance.
    """
    import matplotlib as mpl

    buffer = io.BytesIO()
    with mpl.rc_context({**STYLE, "svg.hashsalt": salt}), _no_glyph_warnings():
        {"svg": _write_svg, "pdf": _write_pdf, "png": _write_png}[file_format](figure, buffer)
    return buffer.getvalue()


# Each canvas is asked itself: figure.savefig would draw once more to place what is placed already.
# Nothing that changes from day to day goes into a file, so that the same study gives the same.


def _write_svg(figure: Figure, buffer: io.BytesIO) -> None:
    from matplotlib.backends.backend_svg import FigureCanvasSVG

    canvas: Any = FigureCanvasSVG(figure)
    canvas.print_svg(buffer, metadata={"Date": None, "Creator": None})


def _write_pdf(figure: Figure, buffer: io.BytesIO) -> None:
    from matplotlib.backends.backend_pdf import FigureCanvasPdf

    canvas: Any = FigureCanvasPdf(figure)
    canvas.print_pdf(buffer, metadata={"CreationDate": None, "Creator": None, "Producer": None})


def _write_png(figure: Figure, buffer: io.BytesIO) -> None:
    from matplotlib.backends.backend_agg import FigureCanvasAgg

    dpi = figure.get_dpi()
    figure.set_dpi(_DPI)
    canvas: Any = FigureCanvasAgg(figure)
    canvas.draw()
    _write_pixels(np.asarray(canvas.buffer_rgba())[..., :3], buffer)
    figure.set_dpi(dpi)


def _write_pixels(pixels: NDArray[np.uint8], buffer: io.BytesIO) -> None:
    """Write an RGB bitmap as PNG (ISO/IEC 15948), without the alpha channel that printers refuse.

    Rows are not filtered: drawings are runs of one colour, which compress as well as they are, and
    trying filters takes most of the time of the usual writers.
    """
    rows, columns, _ = pixels.shape
    lines = np.zeros((rows, 1 + 3 * columns), dtype=np.uint8)
    lines[:, 1:].reshape(rows, columns, 3)[...] = pixels
    per_metre = round(_DPI / 0.0254)
    buffer.write(b"\x89PNG\r\n\x1a\n")
    for name, content in (
        (b"IHDR", struct.pack(">IIBBBBB", columns, rows, 8, 2, 0, 0, 0)),
        (b"pHYs", struct.pack(">IIB", per_metre, per_metre, 1)),
        (b"IDAT", zlib.compress(lines.data, _COMPRESSION)),
        (b"IEND", b""),
    ):
        buffer.write(struct.pack(">I", len(content)) + name + content)
        buffer.write(struct.pack(">I", zlib.crc32(name + content)))


@contextmanager
def _no_glyph_warnings() -> Iterator[None]:
    """Names in scripts that the font lacks are drawn as boxes; the tables have them in full."""
    with warnings.catch_warnings():
        warnings.filterwarnings("ignore", message="Glyph .* missing from font")
        yield
