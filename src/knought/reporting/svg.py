"""Figures as SVG that can stand in a page: own ids, a title on every point, a text alternative."""

from __future__ import annotations

import re
from collections import Counter
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Mapping
    from xml.etree.ElementTree import Element

__all__ = ["inline_svg"]

_SVG = "http://www.w3.org/2000/svg"
_XLINK = "http://www.w3.org/1999/xlink"

#: Radius in points within which a mark answers to the pointer.
_REACH = "5.5"

_REFERENCE = re.compile(r"url\(#([^)]+)\)")


def inline_svg(svg: str, salt: str, alternative: str, titles: Mapping[str, str]) -> str:
    """Return an SVG file as an ``<svg>`` element for a page that allows no style in its markup.

    Parameters
    ----------
    svg
        The text of the file, as matplotlib writes it.
    salt
        Prefix of every id, so that figures on one page do not share any.
    alternative
        What the figure shows, for those who cannot see it.
    titles
        What each group of that gid is: its text alternative, and shown when pointed at.
    """
    from defusedxml.ElementTree import fromstring

    root: Element = fromstring(svg)
    _without_style(root)
    found = _title_groups(root, titles)
    _salt_ids(root, salt)
    root.attrib.pop("width", None)
    root.attrib.pop("height", None)
    # An image hides what is inside; points that can be reached must not be hidden.
    root.set("role", "group" if found else "img")
    root.set("aria-label", alternative)
    return _written(root)


def _without_style(root: Element) -> None:
    """Turn every style into attributes, which a content security policy does not forbid."""
    for parent in list(root.iter()):
        for child in list(parent):
            if child.tag in {f"{{{_SVG}}}style", f"{{{_SVG}}}metadata"}:
                parent.remove(child)
    for element in root.iter():
        for declaration in element.attrib.pop("style", "").split(";"):
            name, _, value = declaration.partition(":")
            if value.strip():
                element.set(name.strip(), value.strip())
    # What matplotlib's style sheet says of every element; both are inherited.
    root.set("stroke-linejoin", "round")
    root.set("stroke-linecap", "butt")


def _title_groups(root: Element, titles: Mapping[str, str]) -> int:
    """Give each titled group its text and a field that is easier to point at; count them."""
    from xml.etree.ElementTree import Element, SubElement

    found = 0
    for group in root.iter(f"{{{_SVG}}}g"):
        text = titles.get(group.get("id", ""))
        if text is None:
            continue
        found += 1
        title = Element(f"{{{_SVG}}}title")
        title.text = text
        # A title must be the first child to be read by every browser.
        group.insert(0, title)
        group.set("class", "point")
        group.set("role", "img")
        group.set("aria-label", text)
        for mark in list(group.iter(f"{{{_SVG}}}use"))[:1]:
            place = {"cx": mark.get("x", "0"), "cy": mark.get("y", "0"), "r": _REACH}
            SubElement(group, f"{{{_SVG}}}circle", {**place, "fill": "none", "class": "reach"})
    return found


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
