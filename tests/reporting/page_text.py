"""The text of a page as it is read: a line for each paragraph, heading, item and row of a table."""

from __future__ import annotations

from html.parser import HTMLParser

__all__ = ["page_text"]

_SILENT = {"script", "style", "svg", "title"}
_BLOCKS = {"p", "h1", "h2", "h3", "li", "tr", "figcaption", "dt", "dd"}
_CELLS = {"th", "td"}


class _Reader(HTMLParser):
    def __init__(self) -> None:
        super().__init__()
        self.lines: list[str] = []
        self.line: list[str] = []
        self.silent = 0

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.silent += tag in _SILENT
        if tag in {"h1", "h2", "h3"}:
            self.lines.append("")
        if tag == "br":
            self.line.append(" ")

    def handle_endtag(self, tag: str) -> None:
        self.silent -= tag in _SILENT
        if tag in _CELLS:
            self.line.append(" | ")
        if tag in _BLOCKS:
            text = " ".join("".join(self.line).split()).removesuffix(" |")
            if text:
                self.lines.append(text)
            self.line = []

    def handle_data(self, data: str) -> None:
        if not self.silent:
            self.line.append(data)


def page_text(html: str) -> str:
    """Return what a reader of `html` reads, figures and scripts left out."""
    reader = _Reader()
    reader.feed(html)
    return "\n".join(reader.lines).strip() + "\n"
