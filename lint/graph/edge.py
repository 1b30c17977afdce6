"""Edges of the dependency graph: what one element has to do with another."""

from __future__ import annotations

from enum import Enum
from typing import NamedTuple


class EdgeKind(Enum):
    """A relation between two elements, as it reads forwards and backwards."""

    SUPPLIED_BY = ("supplied by", "supplies", "forward")
    BIASED_BY = ("biased by", "biases", "forward")
    TAKES_REFERENCE_FROM = ("takes its reference from", "is the reference of", "forward")
    LEANS_ON = ("leans on", "is leant on by", "forward")
    GATED_BY = ("gated by", "gates", "forward")
    MADE_BY = ("made by", "makes", "forward")
    COMES_AFTER = ("comes up after", "comes up before", "forward")
    DRIVES = ("drives", "driven by", "backward")
    GUARDS = ("guards", "guarded by", "backward")
    WATCHES = ("watches", "watched by", "none")
    CLEARED_BY = ("cleared by", "clears", "forward")
    OVERRIDES = ("overrides", "overridden by", "none")
    COUPLES_TO = ("couples to", "disturbed by", "none")

    def __init__(self, forwards: str, backwards: str, leans: str) -> None:
        self.forwards = forwards
        self.backwards = backwards
        self.tail_leans = leans == "forward"
        """Whether the element the edge comes from needs the one it goes to."""
        self.head_leans = leans == "backward"
        """Whether the element the edge goes to needs the one it comes from."""


class Edge(NamedTuple):
    """A relation: the tail has this to do with the head; ``fact`` is where the description says so."""

    tail: str
    kind: EdgeKind
    head: str
    fact: str


class Hop(NamedTuple):
    """A step of a path: an element, and the words that lead to it from the one before (empty for the first)."""

    element: str
    by: str


Path = tuple[Hop, ...]


def path_text(path: Path) -> str:
    """A path on one line: ``uv_core drives uv_out drives por_n``."""
    return " ".join(f"{hop.by} {hop.element}".strip() for hop in path)
