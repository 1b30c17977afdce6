"""Pictures alone: one SVG file for slides and papers, with its own style and nothing from elsewhere."""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from typing import Any, Final

import msgspec
from markupsafe import Markup

from tidegate.lint.reports.drawing.graph import GraphDrawing
from tidegate.lint.reports.drawing.ladder import LadderDrawing
from tidegate.lint.reports.drawing.scale import shortened
from tidegate.lint.reports.drawing.templates import environment, picture_css
from tidegate.lint.reports.drawing.timeline import TimelineDrawing
from tidegate.lint.reports.plain_text import plain

_WIDTH: Final = 960.0
_HEAD: Final = 52.0
_FOOT: Final = 18.0
_EDGE: Final = 24.0
_VARIABLE: Final = re.compile(r"var\((--[a-z]+)\)")
_SET: Final = re.compile(r"(--[a-z]+):\s*(#[0-9a-f]+);")
_COMMENT: Final = re.compile(r"/\*.*?\*/", re.DOTALL)


class Part(msgspec.Struct, frozen=True):
    """One picture of the file, with what stands over it."""

    title: str
    about: str
    y: float
    width: float
    height: float
    picture: Markup


def ladders_svg(title: str, drawings: Iterable[LadderDrawing]) -> str:
    """The ladders of rails, one below the other."""
    macro = _macro("ladder")
    return _file(title, [(f"{one.rail}, to scale", "", _WIDTH, one.height, macro(one, {})) for one in drawings])


def timelines_svg(title: str, drawings: Iterable[TimelineDrawing]) -> str:
    """The timelines of scenarios, one below the other, and how to read them."""
    macro = _macro("timeline")
    parts = [(one.name, one.about, _WIDTH, one.height, macro(one, {})) for one in drawings]
    key = environment().get_template("timeline.svg.j2").make_module().timeline_key  # type: ignore[attr-defined]
    return _file(title, [*parts, ("how to read it", "", _WIDTH, 48.0, key())])


def graph_svg(title: str, drawing: GraphDrawing) -> str:
    """The dependency graph."""
    about = f"{drawing.elements} elements; what is needed stands above what needs it"
    return _file(title, [(title, about, drawing.width + 4.0, drawing.height, _macro("graph")(drawing, {}))])


def _macro(name: str) -> Any:
    return getattr(environment().get_template(f"{name}.svg.j2").make_module(), name)


def _file(title: str, pictures: Sequence[tuple[str, str, float, float, Markup]]) -> str:
    room = max((width for _, _, width, _, _ in pictures), default=_WIDTH)
    parts, y = [], 8.0
    for heading, about, width, height, picture in pictures:
        parts.append(Part(_fitting(heading, room, 17.0), _fitting(about, room, 13.0), y, width, height, picture))
        y += _HEAD + height + _FOOT
    width = room + 2 * _EDGE
    template = environment().get_template("alone.svg.j2")
    return template.render(title=title, width=width, height=y, parts=parts, css=Markup(_style()))


def _fitting(text: str, width: float, size: float) -> str:
    return shortened(plain(text), width=width, size=size)


def _style() -> str:
    """The style with plain colours in place of custom properties, which many drawing programs do not know."""
    css = _COMMENT.sub("", picture_css())
    colours = dict(_SET.findall(css))
    own = (
        ".sheet { fill: var(--sheet); } .heading { font: 600 17px sans-serif; fill: var(--ink); } "
        ".about { font: 13px sans-serif; fill: var(--soft); }"
    )
    rules = re.sub(r":root \{.*?\}", "", css, flags=re.DOTALL).replace("svg.picture text", "text")
    return _VARIABLE.sub(lambda found: colours[found[1]], f"{rules}\n{own}")
