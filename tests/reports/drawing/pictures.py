"""What the tests of pictures share: drawings of descriptions, boxes of texts, and the structure of an SVG as text."""

from __future__ import annotations

import re
import xml.etree.ElementTree as ET
from collections.abc import Iterator, Sequence
from pathlib import Path
from typing import Final, NamedTuple

from tidegate.lint.reports.drawing.scale import text_width

SVG: Final = "{http://www.w3.org/2000/svg}"
SMALL: Final = Path(__file__).with_name("small.yaml")
_SIZES: Final = {"name": 13.0, "small": 11.0}


class Extent(NamedTuple):
    """A text and the room it may take, in pixels."""

    text: str
    left: float
    top: float
    right: float
    bottom: float


def texts(root: ET.Element) -> Iterator[Extent]:
    """Every text of a picture with the room it takes in a wide face; nothing in the pictures is turned or moved."""
    for node in root.iter(f"{SVG}text"):
        words = (node.text or "").strip()
        classes = node.get("class", "").split()
        size = next((value for name, value in _SIZES.items() if name in classes), 12.0)
        width, x, y = text_width(words, size), float(node.get("x", "0")), float(node.get("y", "0"))
        left = x - width if "end" in classes else x - width / 2 if "mid" in classes else x
        yield Extent(words, left, y - 0.75 * size, left + width, y + 0.2 * size)


def overlaps(found: Sequence[Extent]) -> list[tuple[str, str]]:
    """Pairs of texts whose rooms touch."""
    return [
        (one.text, other.text)
        for number, one in enumerate(found)
        for other in found[number + 1 :]
        if one.left < other.right and other.left < one.right and one.top < other.bottom and other.top < one.bottom
    ]


def pictures(svg: str) -> list[ET.Element]:
    """The pictures in an SVG file, without what stands round them."""
    return [node for node in ET.fromstring(svg).iter(f"{SVG}svg") if node.get("class", "").startswith("picture")]


def structure(svg: str) -> str:
    """What an SVG draws, in words: a line for each element with its class and text, and no coordinate."""
    lines: list[str] = []
    for picture in pictures(svg):
        _write(picture, 0, lines)
    return re.sub(r"(?m)^( *)(\S.*)\n(?:\1\2\n)+", lambda m: f"{m[1]}{m[2]} (repeated)\n", "\n".join(lines) + "\n")


def _write(node: ET.Element, depth: int, lines: list[str]) -> None:
    name = node.tag.removeprefix(SVG)
    said = [name, node.get("class") or "", node.get("data-element") or "", (node.text or "").strip()]
    lines.append("  " * depth + " ".join(word for word in said if word))
    for child in node:
        _write(child, depth + 1, lines)
