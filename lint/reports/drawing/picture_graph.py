"""What the picture of a dependency graph shows: boxes in lanes, links from what is needed to what needs it."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from itertools import pairwise
from typing import Final

import msgspec

from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.reset_path import Bypass
from tidegate.lint.graph.dependency import Element, Graph
from tidegate.lint.graph.edge import Edge, EdgeKind
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.reports.order import NOUNS

MOST_BOXES: Final = 300
"""Most elements that are drawn one by one; of more, those of one kind in one domain are drawn as one."""

_STYLES: Final = {
    EdgeKind.SUPPLIED_BY: "supplies", EdgeKind.MADE_BY: "supplies", EdgeKind.COMES_AFTER: "supplies",
    EdgeKind.BIASED_BY: "biases", EdgeKind.TAKES_REFERENCE_FROM: "reference", EdgeKind.LEANS_ON: "gates",
    EdgeKind.GATED_BY: "gates", EdgeKind.CLEARED_BY: "gates", EdgeKind.DRIVES: "drives", EdgeKind.GUARDS: "guards",
    EdgeKind.WATCHES: "watched", EdgeKind.OVERRIDES: "overrides", EdgeKind.COUPLES_TO: "couples",
}  # fmt: skip
STYLE_WORDS: Final = {
    "supplies": "supplies", "biases": "biases", "reference": "is the reference of", "gates": "gates, or is leant on by",
    "drives": "drives", "guards": "guards", "watched": "is watched by", "overrides": "overrides",
    "couples": "couples to",
}  # fmt: skip
"""What a line of each style says, read along its arrow."""
_WORST: Final = (Kind.FAIL, Kind.REVIEW, Kind.OPEN)


class Lane(msgspec.Struct, frozen=True):
    """A region: a domain, or what stands in none."""

    id: str
    about: str
    kind: str
    """always_on, switched, unsaid (its kind is not given) or outside."""


class Box(msgspec.Struct, frozen=True):
    """An element, or several of one kind in one domain."""

    id: str
    label: str
    noun: str
    section: str
    lane: int
    worst: str
    """The weightiest kind of judgement on it that is not waived: fail, review, open, or nothing."""
    failing: bool
    """Whether it lies on the path of a failure."""


class Link(msgspec.Struct, frozen=True):
    """A line from one box to another, drawn along the flow."""

    source: str
    sink: str
    style: str
    words: str
    failing: bool
    count: int = 1


class PictureGraph(msgspec.Struct, frozen=True):
    """Lanes, boxes and links, and who needs whom for the layers."""

    lanes: tuple[Lane, ...]
    boxes: tuple[Box, ...]
    links: tuple[Link, ...]
    needs: Mapping[str, Sequence[str]]
    grouped: bool


def picture_graph(
    description: Description, graph: Graph, judgements: Iterable[Judgement] = (), *, most: int = MOST_BOXES
) -> PictureGraph:
    """The graph as it is drawn."""
    names = [name for name, element in graph.elements.items() if element.section != "neighbours"]
    lanes, lane_of = _lanes(description, graph, names)
    worst, on_path, steps = _judged(judgements)
    boxes = [
        Box(
            id=name, label=name, noun=NOUNS[graph.elements[name].section], section=graph.elements[name].section,
            lane=lane_of[name], worst=worst.get(name, ""), failing=name in on_path,
        )
        for name in names
    ]  # fmt: skip
    links = [link for edge in graph.edges() if (link := _link(edge, graph, steps)) is not None]
    needs = {name: _needed(graph, name) for name in names}
    whole = PictureGraph(tuple(lanes), tuple(boxes), tuple(links), needs, grouped=False)
    return whole if len(boxes) <= most else _grouped(whole)


def elements_shown(graph: Graph) -> int:
    """How many elements are boxes; what couples two of them is a line."""
    return sum(1 for element in graph.elements.values() if element.section != "neighbours")


def _needed(graph: Graph, name: str) -> list[str]:
    """What must stand above an element; an override stands beside what it overrides."""
    found = [other for other, _, _ in graph.needs(name)]
    element = graph.elements[name]
    if isinstance(element, Bypass) and element.overrides in graph.elements:
        found += [other for other, _, _ in graph.needs(str(element.overrides)) if other != name]
    return found


def _lanes(description: Description, graph: Graph, names: Sequence[str]) -> tuple[list[Lane], dict[str, int]]:
    order = {"always_on": 0, "switched": 1, None: 2}
    domains = sorted(description.domains.values(), key=lambda domain: order[domain.kind])
    home = {name: _home(graph.elements[name]) for name in names}
    lanes = [Lane("", "in no domain", "outside")] if "" in home.values() else []
    words = {"always_on": "always on", "switched": "switched", None: "kind not given"}
    for domain in domains:
        feed = f", from {domain.rail}" if domain.rail else ""
        lanes.append(Lane(domain.id, f"{words[domain.kind]}{feed}", domain.kind or "unsaid"))
    number = {lane.id: at for at, lane in enumerate(lanes)}
    return lanes, {name: number[home[name]] for name in names}


def _home(element: Element) -> str:
    if element.section == "domains":
        return element.id
    return getattr(element, "domain", None) or ""


def _judged(judgements: Iterable[Judgement]) -> tuple[dict[str, str], set[str], set[tuple[str, str]]]:
    """The weightiest kind on each element; elements and steps on the paths of failures."""
    worst: dict[str, Kind] = {}
    on_path: set[str] = set()
    steps: set[tuple[str, str]] = set()
    for judgement in judgements:
        kind = judgement.kind
        if judgement.waiver or kind not in _WORST:
            continue
        old = worst.get(judgement.subject)
        if old is None or _WORST.index(kind) < _WORST.index(old):
            worst[judgement.subject] = kind
        if kind is Kind.FAIL:
            hops = [hop.element for hop in judgement.path]
            on_path.update((judgement.subject, *hops))
            for one, other in pairwise(hops):
                steps.update(((one, other), (other, one)))
    return {subject: kind.value for subject, kind in worst.items()}, on_path, steps


def _link(edge: Edge, graph: Graph, steps: set[tuple[str, str]]) -> Link | None:
    kind = edge.kind
    if kind is EdgeKind.SUPPLIED_BY and graph.elements[edge.head].section == "domains":
        return None  # the region says it
    against = kind.tail_leans or kind is EdgeKind.WATCHES
    source, sink = (edge.head, edge.tail) if against else (edge.tail, edge.head)
    words = f"{edge.tail} {kind.forwards} {edge.head}"
    return Link(source, sink, _STYLES[kind], words, (edge.tail, edge.head) in steps)


def _grouped(whole: PictureGraph) -> PictureGraph:
    """One box for all elements of one kind in one domain."""
    group = {box.id: f"{whole.lanes[box.lane].id} {box.section}" for box in whole.boxes}
    members: dict[str, list[Box]] = {}
    for box in whole.boxes:
        members.setdefault(group[box.id], []).append(box)
    boxes = []
    for name, inside in members.items():
        one = inside[0]
        plural = one.section.replace("output_", "").replace("_", " ")
        label, noun = (one.label, one.noun) if len(inside) == 1 else (f"{len(inside)} {plural}", plural)
        kinds = [kind.value for kind in _WORST if any(box.worst == kind.value for box in inside)]
        boxes.append(
            Box(
                id=name, label=label, noun=noun, section=one.section, lane=one.lane,
                worst=kinds[0] if kinds else "", failing=any(box.failing for box in inside),
            )
        )  # fmt: skip
    joined: dict[tuple[str, str, str], list[Link]] = {}
    for link in whole.links:
        joined.setdefault((group[link.source], group[link.sink], link.style), []).append(link)
    links = [
        Link(
            source, sink, style, f"{len(found)} times: {STYLE_WORDS[style]}", any(link.failing for link in found),
            len(found),
        )
        for (source, sink, style), found in joined.items()
        if source != sink
    ]  # fmt: skip
    needs: dict[str, list[str]] = {box.id: [] for box in boxes}
    for name, needed in whole.needs.items():
        here = needs[group[name]]
        here += [there for other in needed if (there := group[other]) != group[name] and there not in here]
    return PictureGraph(whole.lanes, tuple(boxes), tuple(links), needs, grouped=True)
