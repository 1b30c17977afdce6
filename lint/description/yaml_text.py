"""One YAML file as plain data, with the place of everything in it."""

from __future__ import annotations

from collections.abc import Sequence

import yaml

from tidegate.lint.description.place import DescriptionError, Fault, Path, Place, Step
from tidegate.lint.description.plain_data import NULLS, Plain, PlainFile
from tidegate.lint.description.yaml_nodes import PARSER, Parser, node_tree


class YamlFile:
    """A YAML file: its plain data, the place of every key and value, the keys that have no value yet, its faults.

    ``has_own_keys`` says whether any key is the author's own (``x-``).

    ``spoiled`` are the paths of values that are not what the author meant; what else is wrong there only follows.
    """

    def __init__(
        self, name: str, root: yaml.Node | None, data: dict[str, Plain], *, empty: Sequence[Path] = (),
        has_own_keys: bool = False, faults: Sequence[Fault] = (), spoiled: Sequence[str] = (),
    ) -> None:  # fmt: skip
        self.name = name
        self.data = data
        self.empty = tuple(empty)
        self.has_own_keys = has_own_keys
        self.faults = tuple(faults)
        self.spoiled = tuple(spoiled)
        self._root = root
        self._pairs: dict[int, dict[str, tuple[yaml.Node, yaml.Node]]] = {}

    def without_data(self) -> YamlFile:
        """The same file for its places alone."""
        return YamlFile(self.name, self._root, {})

    def place(self, path: Sequence[Step], *, key: bool = False) -> Place | None:
        """Where the value (or the key) at a path stands; None if nothing stands there."""
        node, at = self._root, self._root
        for step in path:
            if isinstance(node, yaml.MappingNode):
                pair = self._pairs_of(node).get(str(step))
                if pair is None:
                    return None
                at, node = pair
            elif isinstance(node, yaml.SequenceNode) and isinstance(step, int) and step < len(node.value):
                at = node = node.value[step]
            else:
                return None
        chosen = at if key else node
        if chosen is None:
            return None
        return Place(self.name, chosen.start_mark.line + 1, chosen.start_mark.column + 1)

    def _pairs_of(self, node: yaml.MappingNode) -> dict[str, tuple[yaml.Node, yaml.Node]]:
        pairs = self._pairs.get(id(node))
        if pairs is None:
            # Of a key that is given twice, the first counts.
            pairs = {key.value: (key, value) for key, value in reversed(node.value) if isinstance(key.value, str)}
            self._pairs[id(node)] = pairs
        return pairs


def read_yaml(
    name: str, content: bytes, parser: type[Parser] = PARSER, *, first: str = "a section, such as rails"
) -> YamlFile:
    """Read the content of one file; an empty file is an empty mapping. ``first`` is what such a file begins with.

    Returns: the file, with the faults of its values.
    Raises: DescriptionError: where the content cannot be read at all.
    """
    root = node_tree(name, content, parser)
    if root is None or (isinstance(root, yaml.ScalarNode) and root.value in NULLS and not root.style):
        return YamlFile(name, None, {})
    if not isinstance(root, yaml.MappingNode):
        kind = "a list" if isinstance(root, yaml.SequenceNode) else "a text"
        place = Place(name, root.start_mark.line + 1, root.start_mark.column + 1)
        raise DescriptionError([Fault(place, "", f"the file holds {kind}", f"begin with {first}:")])
    plain = PlainFile(name, root)
    return YamlFile(
        name,
        root,
        plain.data,
        empty=plain.empty,
        has_own_keys=plain.has_own_keys,
        faults=plain.faults,
        spoiled=plain.spoiled,
    )
