"""The dependency graph for other programs: GraphML and DOT, every element and every edge as the description says it.

GraphML: http://graphml.graphdrawing.org (its primer and schema); DOT: the language of Graphviz, as its documentation
defines it.
"""

from __future__ import annotations

import io
import json
from typing import Any

from tidegate.lint.graph.dependency import Graph
from tidegate.lint.reports.order import NOUNS
from tidegate.lint.reports.plain_text import plain


def dot_text(graph: Graph, *, name: str) -> str:
    """The graph in DOT: an edge goes from the element that says it to the one it names, with the relation as label."""
    lines = [f"digraph {_quoted(name)} {{", "  rankdir=TB;", "  node [shape=box];"]
    for element in graph.elements.values():
        noun = NOUNS[element.section]
        lines.append(f"  {_quoted(element.id)} [label={_quoted(element.id)}, class={_quoted(noun)}];")
    for edge in graph.edges():
        lines.append(f"  {_quoted(edge.tail)} -> {_quoted(edge.head)} [label={_quoted(edge.kind.forwards)}];")
    return "\n".join([*lines, "}"]) + "\n"


def _quoted(text: str) -> str:
    """A text as a DOT string: a backslash would begin an escape, so it is doubled as the quote is."""
    return json.dumps(plain(text), ensure_ascii=False)


def graphml_text(graph: Graph, *, name: str) -> str:
    """The graph in GraphML: each node with its section, each edge with its relation and the fact that says it."""
    # Loaded here alone: only this text needs the library.
    import networkx  # type: ignore[import-untyped]

    made: Any = networkx.MultiDiGraph(name=plain(name))
    for element in graph.elements.values():
        made.add_node(element.id, section=element.section, noun=NOUNS[element.section])
    for edge in graph.edges():
        made.add_edge(edge.tail, edge.head, relation=edge.kind.forwards, fact=edge.fact)
    out = io.BytesIO()
    networkx.write_graphml_xml(made, out, encoding="utf-8", named_key_ids=True)  # the same with and without lxml
    return out.getvalue().decode("utf-8") + "\n"
