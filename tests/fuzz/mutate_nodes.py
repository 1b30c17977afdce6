"""Mutations of a description as a tree: nodes deleted, doubled, moved, retyped, renamed, shared by an alias."""

from __future__ import annotations

import copy
import random
from collections.abc import Iterator
from typing import Any, Final

Path = tuple[Any, ...]

_OTHERS: Final = (
    {}, [], "", "none", "0", 0, 1, -1, 1.5, 1e300, True, False, None, "1 V", "x", [[]], [{}], {"a": {}}, ["a", "a"],
    {"min": "1 V"}, {"min": "2 V", "max": "1 V"}, {"x-own": 1}, "\u202e", "a\nb", 10**15,
)  # fmt: skip
_KEYS: Final = (
    "off", "y", "1", "", " ", "a b", "a.b", "a[0]", "x-", "x-own", "none", "null", "<<", "id", "\u00e9", "A" * 65,
    "min", "section", "__class__",
)  # fmt: skip


def paths(node: Any, above: Path = ()) -> Iterator[Path]:
    """The path of everything below a node."""
    entries = node.items() if isinstance(node, dict) else enumerate(node) if isinstance(node, list) else ()
    for key, value in entries:
        yield (*above, key)
        yield from paths(value, (*above, key))


def at(data: Any, path: Path) -> Any:
    """The node at a path."""
    for step in path:
        data = data[step]
    return data


def mutated(choose: random.Random, data: dict[str, Any]) -> dict[str, Any]:
    """A copy of the data after one to four mutations; nodes may then be shared, even with what is above them."""
    data = copy.deepcopy(data)
    for _ in range(choose.choice((1, 1, 1, 2, 4))):
        known = list(paths(data))
        if not known:
            return data
        choose.choice((_delete, _delete, _double, _move, _retype, _retype, _rename, _rename, _alias))(
            choose, data, known
        )
        if _goes_round(data):
            return data
    return data


def _delete(choose: random.Random, data: Any, known: list[Path]) -> None:
    *above, last = choose.choice(known)
    del at(data, tuple(above))[last]


def _double(choose: random.Random, data: Any, known: list[Path]) -> None:
    *above, last = choose.choice(known)
    holder = at(data, tuple(above))
    value = copy.deepcopy(holder[last])
    if isinstance(holder, list):
        holder.insert(choose.randint(0, len(holder)), value)
    else:
        holder[f"{last}{choose.choice(('2', '_b', ''))}"] = value


def _move(choose: random.Random, data: Any, known: list[Path]) -> None:
    *above, last = choose.choice(known)
    value = at(data, tuple(above))[last]
    target = at(data, choose.choice(known))
    if choose.random() < 0.5:
        del at(data, tuple(above))[last]
    if isinstance(target, dict):
        target[last if isinstance(last, str) else "moved"] = copy.deepcopy(value)
    elif isinstance(target, list):
        target.append(copy.deepcopy(value))


def _retype(choose: random.Random, data: Any, known: list[Path]) -> None:
    *above, last = choose.choice(known)
    holder = at(data, tuple(above))
    value = holder[last]
    holder[last] = choose.choice((copy.deepcopy(choose.choice(_OTHERS)), [value], {"typ": value}, str(value)[:100]))


def _rename(choose: random.Random, data: Any, known: list[Path]) -> None:
    *above, last = choose.choice(known)
    holder = at(data, tuple(above))
    if not isinstance(holder, dict):
        return
    names = [step for path in known for step in path if isinstance(step, str)]
    near = last[:-1] + last[:1], last + "s", last.upper(), last.replace("_", "-")
    name = choose.choice((choose.choice(_KEYS), choose.choice(names), choose.choice(near)))
    entries = {(name if key == last else key): value for key, value in holder.items()}
    holder.clear()
    holder.update(entries)


def _alias(choose: random.Random, data: Any, known: list[Path]) -> None:
    """The same node in two places; the second may lie inside the first."""
    *above, last = choose.choice(known)
    at(data, tuple(above))[last] = at(data, choose.choice(known))


def _goes_round(node: Any, above: frozenset[int] = frozenset()) -> bool:
    if not isinstance(node, dict | list):
        return False
    if id(node) in above:
        return True
    inner = node.values() if isinstance(node, dict) else node
    return any(_goes_round(each, above | {id(node)}) for each in inner)
