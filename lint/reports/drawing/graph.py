"""Geometry of the dependency graph: layers from top to bottom, domains as regions beside each other."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from itertools import pairwise
from typing import Final

import msgspec

from tidegate.lint.reports.drawing.layers import layer_of_each, neighbours_of, ordered, spread
from tidegate.lint.reports.drawing.picture_graph import STYLE_WORDS, Box, Lane, Link, PictureGraph
from tidegate.lint.reports.drawing.scale import shortened, text_width

LEAST_WIDTH: Final = 960.0
MOST_IN_A_LAYER: Final = 7
_LEAST_W: Final = 78.0
_MOST_W: Final = 148.0
_LABEL: Final = 12.0
_BESIDE_LABEL: Final = 36.0
"""Room of a box beside its label: its glyph, and the space round both."""
_BOX_H: Final = 32.0
_PITCH: Final = 70.0
_GAP: Final = 16.0
_PASS_W: Final = 10.0
"""Room for a line that passes a layer."""
_PAD: Final = 18.0
_BETWEEN: Final = 14.0
_TOP: Final = 64.0
_ROUNDS: Final = 10
_PORTS: Final = 0.72
_LEGEND_ROW: Final = 22.0

Key = tuple[str, str, int, int]
"""A box (its id, nothing, 0, 0) or where lines of one source and style pass a layer of a lane."""


class PlacedBox(msgspec.Struct, frozen=True):
    """A box, its upper left corner, and its label as far as it has room."""

    box: Box
    x: float
    y: float
    width: float
    height: float
    shown: str


class PlacedLink(msgspec.Struct, frozen=True):
    """A link with its course."""

    link: Link
    path: str


class Region(msgspec.Struct, frozen=True):
    """A lane with its extent."""

    lane: Lane
    x: float
    width: float
    name: str
    about: str


class LegendEntry(msgspec.Struct, frozen=True):
    """A style of line and what it says."""

    style: str
    words: str
    x: float
    y: float


class GraphDrawing(msgspec.Struct, frozen=True):
    """All that is drawn."""

    width: float
    height: float
    bottom: float
    regions: tuple[Region, ...]
    boxes: tuple[PlacedBox, ...]
    links: tuple[PlacedLink, ...]
    legend: tuple[LegendEntry, ...]
    grouped: bool
    elements: int


def draw_graph(picture: PictureGraph, *, elements: int) -> GraphDrawing | None:
    """The picture of the graph; None where there is nothing to draw."""
    if not picture.boxes:
        return None
    layout = _Layout(picture)
    bottom = _TOP + _PITCH * len(layout.orders) - (_PITCH - _BOX_H) + _PAD
    legend = _legend(picture.links, width=layout.width, top=bottom + 26.0)
    return GraphDrawing(
        width=layout.width,
        height=max((entry.y for entry in legend), default=bottom) + 16.0,
        bottom=bottom,
        regions=tuple(layout.regions()),
        boxes=tuple(layout.boxes()),
        links=tuple(layout.links()),
        legend=legend,
        grouped=picture.grouped,
        elements=elements,
    )


class _Layout:
    """Where each box lies, and each place at which a line passes a layer."""

    def __init__(self, picture: PictureGraph) -> None:
        self.picture = picture
        self.lane = {box.id: box.lane for box in picture.boxes}
        self.box_width = {box.id: _box_width(box) for box in picture.boxes}
        self.layer = layer_of_each([box.id for box in picture.boxes], picture.needs, self.lane, most=MOST_IN_A_LAYER)
        self.orders: list[list[Key]] = [[] for _ in range(max(self.layer.values()) + 1)]
        for box in picture.boxes:
            self.orders[self.layer[box.id]].append((box.id, "", 0, 0))
        self._passed: set[Key] = set()
        self.courses = {number: self._course(link) for number, link in enumerate(picture.links)}
        pairs = dict.fromkeys(pair for course in self.courses.values() for pair in pairwise(course))
        self.pairs = [pair for pair in pairs if self._layer_of(pair[0]) != self._layer_of(pair[1])]
        self.orders = ordered(self.orders, self.pairs, self._lane_of)
        self._put_overrides_beside()
        self.edges = self._lane_edges()
        self.width = self.edges[-1][1]
        self.x = self._places()

    def _width(self, key: Key) -> float:
        return _PASS_W if key[1] else self.box_width[key[0]]

    def _put_overrides_beside(self) -> None:
        """Move each override next to what it overrides, where both have one layer and one lane."""
        for link in self.picture.links:
            source, sink = (link.source, "", 0, 0), (link.sink, "", 0, 0)
            same = self.lane[link.source] == self.lane[link.sink] and self.layer[link.source] == self.layer[link.sink]
            if link.style == "overrides" and same and link.source != link.sink:
                order = self.orders[self.layer[link.source]]
                after = order.index(source) > order.index(sink)
                order.remove(source)
                order.insert(order.index(sink) + after, source)

    def _lane_of(self, key: Key) -> int:
        return key[2] if key[1] else self.lane[key[0]]

    def _layer_of(self, key: Key) -> int:
        return key[3] if key[1] else self.layer[key[0]]

    def _course(self, link: Link) -> list[Key]:
        """What a link passes, from top to bottom; lines of one source and style pass a lane together."""
        upper, lower = link.source, link.sink
        if self.layer[upper] > self.layer[lower]:
            upper, lower = lower, upper
        course: list[Key] = [(upper, "", 0, 0)]
        for layer in range(self.layer[upper] + 1, self.layer[lower]):
            key = (link.source, link.style, self.lane[lower], layer)
            if key not in self._passed:
                self._passed.add(key)
                self.orders[layer].append(key)
            course.append(key)
        course.append((lower, "", 0, 0))
        return course

    def _lane_edges(self) -> list[tuple[float, float]]:
        """Left and right end of each lane."""
        rooms = []
        for number in range(len(self.picture.lanes)):
            widest = max(self._room([key for key in layer if self._lane_of(key) == number]) for layer in self.orders)
            rooms.append(max(widest, _MOST_W) + 2 * _PAD)
        spare = LEAST_WIDTH - sum(rooms) - _BETWEEN * (len(rooms) - 1)
        if spare > 0:
            whole = sum(rooms)
            rooms = [room + spare * room / whole for room in rooms]
        edges, x = [], 0.0
        for room in rooms:
            edges.append((round(x, 2), round(x + room, 2)))
            x += room + _BETWEEN
        return edges

    def _room(self, keys: Sequence[Key]) -> float:
        return sum(map(self._width, keys)) + _GAP * max(len(keys) - 1, 0)

    def _places(self) -> dict[Key, float]:
        """Middles: each near the mean of what it is linked with, in the order and the lane it has."""
        near = neighbours_of(self.pairs)
        place: dict[Key, float] = {}
        groups = [
            [key for key in layer if self._lane_of(key) == lane]
            for layer in self.orders
            for lane in range(len(self.edges))
        ]
        groups = [group for group in groups if group]
        for group in groups:
            left, right = self.edges[self._lane_of(group[0])]
            x = (left + right - self._room(group)) / 2
            for key in group:
                place[key] = x + self._width(key) / 2
                x += self._width(key) + _GAP
        for number in range(_ROUNDS):
            for group in groups if number % 2 == 0 else reversed(groups):
                self._settle(group, near, place)
        return place

    def _settle(self, group: Sequence[Key], near: Mapping[Key, Sequence[Key]], place: dict[Key, float]) -> None:
        left, right = self.edges[self._lane_of(group[0])]
        wanted = []
        for key in group:
            linked = near.get(key, ())
            passed = [other for other in linked if other[1]] if key[1] else []  # a long line is to be straight
            others = [place[other] for other in passed or linked]
            wanted.append(sum(others) / len(others) if others else place[key])
        distances = [(self._width(a) + self._width(b)) / 2 + _GAP for a, b in pairwise(group)]
        low, high = left + _PAD + self._width(group[0]) / 2, right - _PAD - self._width(group[-1]) / 2
        place.update(zip(group, spread(wanted, distances, low=low, high=high), strict=True))

    def regions(self) -> list[Region]:
        """The lanes."""
        found = []
        for lane, (left, right) in zip(self.picture.lanes, self.edges, strict=True):
            room = right - left - 2 * _PAD
            name = shortened(lane.id or "outside", width=room, size=13.0)
            found.append(Region(lane, left, round(right - left, 2), name, shortened(lane.about, width=room, size=11.0)))
        return found

    def boxes(self) -> list[PlacedBox]:
        """The boxes."""
        return [
            PlacedBox(
                box, round(self.x[box.id, "", 0, 0] - width / 2, 2), self._top(self.layer[box.id]), width, _BOX_H,
                shortened(box.label, width=width - _BESIDE_LABEL, size=_LABEL),
            )
            for box in self.picture.boxes
            for width in (self.box_width[box.id],)
        ]  # fmt: skip

    def _top(self, layer: int) -> float:
        return _TOP + _PITCH * layer

    def links(self) -> list[PlacedLink]:
        """The links, those on failing paths last, so that they lie on top."""
        ports = self._ports()
        placed = [PlacedLink(link, self._path(number, link, ports)) for number, link in enumerate(self.picture.links)]
        return sorted(placed, key=lambda one: one.link.failing)

    def _ports(self) -> dict[tuple[int, str], float]:
        """Where each link leaves or enters a box, beside its middle, in the order in which they go away."""
        ends: dict[tuple[str, bool], list[tuple[float, int]]] = {}
        for number, course in self.courses.items():
            upper, lower = course[0][0], course[-1][0]
            if self.layer[upper] == self.layer[lower]:
                continue
            ends.setdefault((upper, True), []).append((self.x[course[1]], number))
            ends.setdefault((lower, False), []).append((self.x[course[-2]], number))
        ports: dict[tuple[int, str], float] = {}
        for (box, _), found in ends.items():
            room = self.box_width[box] * _PORTS
            for at, (_, number) in enumerate(sorted(found)):
                ports[number, box] = room * ((at + 0.5) / len(found) - 0.5)
        return ports

    def _path(self, number: int, link: Link, ports: Mapping[tuple[int, str], float]) -> str:
        course = self.courses[number]
        upper, lower = course[0][0], course[-1][0]
        if self.layer[upper] == self.layer[lower]:
            return self._beside(link)
        points = [(self.x[course[0]] + ports[number, upper], self._top(self.layer[upper]) + _BOX_H)]
        for key in course[1:-1]:
            top = self._top(self._layer_of(key))
            points += [(self.x[key], top), (self.x[key], top + _BOX_H)]
        points.append((self.x[course[-1]] + ports[number, lower], self._top(self.layer[lower])))
        if link.source == lower:
            points.reverse()
        return _curve(points)

    def _beside(self, link: Link) -> str:
        """A link between two boxes of one layer: straight between neighbours, else a bow below."""
        order = self.orders[self.layer[link.source]]
        source, sink = (link.source, "", 0, 0), (link.sink, "", 0, 0)
        y = self._top(self.layer[link.source])
        sign = 1.0 if self.x[sink] > self.x[source] else -1.0
        if abs(order.index(source) - order.index(sink)) == 1:
            start = self.x[source] + sign * self._width(source) / 2
            end = self.x[sink] - sign * self._width(sink) / 2
            level = y + _BOX_H * (0.3 if sign > 0 else 0.7)
            return f"M{start:.1f} {level:.1f}L{end:.1f} {level:.1f}"
        start = self.x[source] + sign * self._width(source) * 0.42
        end = self.x[sink] - sign * self._width(sink) * 0.42
        low, bow = y + _BOX_H, y + _BOX_H + 26.0
        return f"M{start:.1f} {low:.1f}C{start:.1f} {bow:.1f} {end:.1f} {bow:.1f} {end:.1f} {low:.1f}"


def _box_width(box: Box) -> float:
    wanted = text_width(box.label, _LABEL) + _BESIDE_LABEL + 1.0
    return round(min(max(wanted, _LEAST_W), _MOST_W), 2)


def _curve(points: Sequence[tuple[float, float]]) -> str:
    """A line through points that leaves and enters each of them straight up or down."""
    (x, y), parts = points[0], []
    for to_x, to_y in points[1:]:
        if abs(to_x - x) < 0.05:
            parts.append(f"L{to_x:.1f} {to_y:.1f}")
        else:
            middle = (y + to_y) / 2
            parts.append(f"C{x:.1f} {middle:.1f} {to_x:.1f} {middle:.1f} {to_x:.1f} {to_y:.1f}")
        x, y = to_x, to_y
    return f"M{points[0][0]:.1f} {points[0][1]:.1f}" + "".join(parts)


def _legend(links: Sequence[Link], *, width: float, top: float) -> tuple[LegendEntry, ...]:
    used = {link.style for link in links}
    entries = [(style, words) for style, words in STYLE_WORDS.items() if style in used]
    if any(link.failing for link in links):
        entries.append(("failing", "on the path of a failure"))
    placed, x, y = [], 0.0, top
    for style, words in entries:
        room = 54.0 + text_width(words, 12.0) + 18.0
        if x and x + room > width:
            x, y = 0.0, y + _LEGEND_ROW
        placed.append(LegendEntry(style, words, round(x, 2), round(y, 2)))
        x += room
    return tuple(placed)
