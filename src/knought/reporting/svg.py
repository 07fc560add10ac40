"""Figures as SVG that can stand in a page: own ids, a title on every point, a text alternative."""

from __future__ import annotations

import io
import re
from collections import Counter
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Mapping
    from xml.etree.ElementTree import Element

    from matplotlib.figure import Figure

__all__ = ["inline_svg", "plain_svg"]

_SVG = "http://www.w3.org/2000/svg"
_XLINK = "http://www.w3.org/1999/xlink"

_REFERENCE = re.compile(r"url\(#([^)]+)\)")


def plain_svg(figure: Figure, salt: str) -> str:
    """Return a figure as an SVG file that is the same for the same figure.

    Parameters
    ----------
    figure
        The figure.
    salt
        Goes into the ids, so that they do not depend on chance.
    """
    import matplotlib as mpl

    from knought.reporting.style import STYLE

    buffer = io.StringIO()
    with mpl.rc_context({**STYLE, "svg.hashsalt": salt}):
        figure.savefig(buffer, format="svg", metadata={"Date": None, "Creator": None})
    return buffer.getvalue()


def inline_svg(svg: str, salt: str, alternative: str, titles: Mapping[str, str]) -> str:
    """Return an SVG file as an ``<svg>`` element for a page.

    Parameters
    ----------
    svg
        The text of the file, as :func:`plain_svg` makes it.
    salt
        Prefix of every id, so that figures on one page do not share any.
    alternative
        What the figure shows, for those who cannot see it.
    titles
        What each group of that gid is; shown by browsers when pointed at.
    """
    from defusedxml.ElementTree import fromstring

    root: Element = fromstring(svg)
    for element in list(root):
        if element.tag == f"{{{_SVG}}}metadata":
            root.remove(element)
    _title_groups(root, titles)
    _salt_ids(root, salt)
    root.attrib.pop("width", None)
    root.attrib.pop("height", None)
    root.set("role", "img")
    root.set("aria-label", alternative)
    return _written(root)


def _title_groups(root: Element, titles: Mapping[str, str]) -> None:
    from xml.etree.ElementTree import SubElement

    for group in root.iter(f"{{{_SVG}}}g"):
        text = titles.get(group.get("id", ""))
        if text is not None:
            title = SubElement(group, f"{{{_SVG}}}title")
            title.text = text
            # A title must be the first child to be read by every browser.
            group.remove(title)
            group.insert(0, title)


def _salt_ids(root: Element, salt: str) -> None:
    given: Counter[str] = Counter()
    for element in root.iter():
        for name, value in list(element.attrib.items()):
            if name == "id":
                # A run stands in several panels of one figure: count its later appearances.
                given[value] += 1
                again = f"-{given[value]}" if given[value] > 1 else ""
                element.set(name, f"{salt}-{value}{again}")
            elif name in {"href", f"{{{_XLINK}}}href"} and value.startswith("#"):
                element.set(name, f"#{salt}-{value[1:]}")
            elif "url(#" in value:
                element.set(name, _REFERENCE.sub(rf"url(#{salt}-\1)", value))


def _written(root: Element) -> str:
    from xml.etree.ElementTree import register_namespace, tostring

    register_namespace("", _SVG)
    register_namespace("xlink", _XLINK)
    return tostring(root, encoding="unicode")
