"""Which of two rails is up first, and the way through the description that says so."""

from __future__ import annotations

from collections.abc import Mapping

from tidegate.lint.case import Case
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.graph.edge import Path, path_text
from tidegate.lint.graph.paths import Reach
from tidegate.lint.quantity import Dimension, show


def leaning_of_rails(graph: Graph) -> Mapping[str, Reach]:
    """What each rail leans on: the rail it comes after, what makes it, and so on."""
    return {name: Reach(name, graph.needs) for name, element in graph.elements.items() if isinstance(element, Rail)}


def way_to_earlier(case: Case, *, later: Rail, earlier: Rail) -> Path:
    """The way on which one rail leans on another, which is therefore up first; empty where the description has none."""
    reach = case.graph.once(leaning_of_rails)[later.id]
    return reach.path(earlier.id) if earlier.id in reach else ()


def order_text(case: Case, *, later: Rail, way: Path) -> str:
    """``vcore comes up after avdd, 20 us later or more``; the delay where the two follow each other directly."""
    text = path_text(way)
    delay_s = None if later.delay is None else later.delay.least
    if len(way) == 2 and later.after == way[-1].element and delay_s is not None:
        text += f", {show(delay_s, Dimension.DURATION)} later or more"
    return text
