"""A case: the files of one run, made by a grammar or by mutation of the examples, and what must come of them."""

from __future__ import annotations

import copy
import json
import random
from collections.abc import Callable
from functools import cache
from pathlib import Path
from typing import Any, Final, NamedTuple

import yaml

from tests.fuzz import grammar, mutate_nodes, mutate_text, mutate_values
from tidegate.lint.description.sources import read_sources

MAIN: Final = "chip.yaml"
SETTINGS: Final = "tidegate.settings.yaml"
_EXAMPLES: Final = (
    *sorted((grammar.ROOT / "examples").glob("*.yaml")),
    *sorted((grammar.ROOT / "tests" / "published").glob("*.yaml")),
)  # fmt: skip


class Case(NamedTuple):
    """The files by name, the data behind them (None where there is text alone), and why it must be refused."""

    files: dict[str, bytes]
    data: dict[str, Any] | None = None
    must_refuse: str = ""


@cache
def texts() -> tuple[bytes, ...]:
    """The examples as text."""
    return tuple(path.read_bytes() for path in _EXAMPLES)


@cache
def trees() -> tuple[dict[str, Any], ...]:
    """The examples as data, with what they include; the process alone is no description, but may be spliced."""
    return tuple(_tree(path) for path in _EXAMPLES)


def _tree(path: Path) -> dict[str, Any]:
    data: dict[str, Any] = dict(read_sources(path, path.name).data)
    data.pop("include", None)
    return data


def written(data: Any, *, as_json: bool) -> bytes:
    """Data as a file; nodes that are shared, or hold themselves, need YAML."""
    if as_json:
        return json.dumps(data, ensure_ascii=False, indent=1).encode("utf-8", "surrogatepass")
    return yaml.safe_dump(data, sort_keys=False, allow_unicode=True, width=120).encode("utf-8", "surrogatepass")


def _files(choose: random.Random, data: dict[str, Any]) -> dict[str, bytes]:
    """The data in one file, or with some sections in an included one."""
    if choose.random() < 0.8 or len(data) < 2:
        return {MAIN: written(data, as_json=choose.random() < 0.6)}
    moved = choose.sample(list(data), choose.randint(1, min(3, len(data) - 1)))
    main = {"include": ["part.yaml"], **{key: value for key, value in data.items() if key not in moved}}
    part = {key: data[key] for key in moved}
    return {MAIN: written(main, as_json=False), "part.yaml": written(part, as_json=choose.random() < 0.5)}


def from_grammar(choose: random.Random) -> Case:
    """A description from the schema alone, now and then under settings; another version of it to compare with."""
    data = grammar.description(choose)
    files = _files(choose, data)
    files["base.yaml"] = written(_other_values(choose, data), as_json=True)
    if choose.random() < 0.15:
        files[SETTINGS] = written(grammar.settings(choose), as_json=False)
    return Case(files, data)


def from_deep_grammar(choose: random.Random) -> Case:
    """A description that leaves out nothing, with values far from the usual: formulas have all they need."""
    writer = grammar.Writer(
        choose, full=1.0, stray=choose.choice((0.05, 0.3, 1.0, 3.0)), odd=choose.choice((0, 0.3, 1))
    )
    data = writer.description()
    return Case({MAIN: written(data, as_json=True)}, data)


def _other_values(choose: random.Random, data: dict[str, Any]) -> dict[str, Any]:
    return mutate_values.mutated(choose, data)[0] if any(mutate_nodes.paths(data)) else data


def _some_tree(choose: random.Random) -> dict[str, Any]:
    if choose.random() < 0.3:
        return grammar.description(choose)
    # The faulty example is large: it is taken less often.
    return copy.deepcopy(choose.choice([tree for tree in trees() if len(str(tree)) < 20000 or choose.random() < 0.05]))


def from_text(choose: random.Random) -> Case:
    """An example (or a description from the grammar) with its text mutated."""
    small = [text for text in texts() if len(text) < 20000 or choose.random() < 0.05]
    content = choose.choice(small) if choose.random() < 0.8 else written(grammar.description(choose), as_json=False)
    files = {MAIN: mutate_text.mutated(choose, content, texts())}
    files["process.yaml"] = texts()[[path.name for path in _EXAMPLES].index("process.yaml")]
    return Case(files)


def from_nodes(choose: random.Random) -> Case:
    """An example with nodes mutated."""
    data = mutate_nodes.mutated(choose, _some_tree(choose))
    return Case({MAIN: written(data, as_json=False)}, data)


def from_values(choose: random.Random) -> Case:
    """An example with values mutated, and the example to compare with."""
    base = _some_tree(choose)
    data, wrong = mutate_values.mutated(choose, base)
    return Case({**_files(choose, data), "base.yaml": written(base, as_json=True)}, data, wrong)


def from_settings(choose: random.Random) -> Case:
    """Settings and waivers mutated: read, and nothing more."""
    data = grammar.settings(choose)
    content = written(data, as_json=False)
    if choose.random() < 0.5:
        content = written(mutate_nodes.mutated(choose, data), as_json=False)
    if choose.random() < 0.7:
        content = mutate_text.mutated(choose, content, texts())
    waivers = written({"waivers": grammar.description(choose).get("waivers", [])}, as_json=False)
    waivers = mutate_text.mutated(choose, waivers, texts()) if choose.random() < 0.7 else waivers
    return Case({SETTINGS: content, "waivers.yaml": waivers})


KINDS: Final[dict[str, Callable[[random.Random], Case]]] = {
    "grammar": from_grammar, "deep": from_deep_grammar, "text": from_text, "nodes": from_nodes, "values": from_values,
    "settings": from_settings,
}  # fmt: skip
