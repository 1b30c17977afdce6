"""The linter: description, graph, physics, judgements and reports."""
