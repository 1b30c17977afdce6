"""A smaller case with the same trouble: entries and lines are taken out as long as it stays."""

from __future__ import annotations

import copy
from collections.abc import Callable
from typing import Any

from tests.fuzz.cases import MAIN, Case, written
from tests.fuzz.mutate_nodes import at, paths

_MOST_TRIES = 1500

Still = Callable[[Case], bool]
"""Whether a case still shows the trouble."""


def minimised(case: Case, still: Still) -> Case:
    """The case with as little in it as a few hundred tries can leave."""
    case = _without_files(case, still)
    if case.data is not None:
        whole = Case({**case.files, MAIN: _written(case.data)}, case.data, case.must_refuse)
        whole.files.pop("part.yaml", None)
        if still(whole):
            return _smaller_tree(whole, still)
    return _fewer_lines(case, still)


def _without_files(case: Case, still: Still) -> Case:
    for name in [name for name in case.files if name != MAIN]:
        fewer = case._replace(files={key: value for key, value in case.files.items() if key != name})
        if fewer.files and still(fewer):
            case = fewer
    return case


def _smaller_tree(case: Case, still: Still) -> Case:
    tries = 0
    again = True
    while again and tries < _MOST_TRIES:
        again = False
        for path in sorted(_safe_paths(case.data), key=len):
            tries += 1
            if tries > _MOST_TRIES:
                break
            smaller = _without(case, path)
            if smaller is not None and still(smaller):
                case, again = smaller, True
    return case


def _safe_paths(data: Any) -> list[tuple[Any, ...]]:
    try:
        return list(paths(data))
    except RecursionError:
        return [(key,) for key in data]


def _without(case: Case, path: tuple[Any, ...]) -> Case | None:
    data = copy.deepcopy(case.data)
    try:
        del at(data, path[:-1])[path[-1]]
    except (KeyError, IndexError, TypeError):
        return None  # gone with what was around it
    return Case({**case.files, MAIN: _written(data)}, data, case.must_refuse)


def _written(data: Any) -> bytes:
    """As JSON, which is quicker; as YAML where nodes hold themselves."""
    try:
        return written(data, as_json=True)
    except (ValueError, RecursionError, TypeError):
        return written(data, as_json=False)


def _fewer_lines(case: Case, still: Still) -> Case:
    """Lines taken out of the main file (or the only one), many at a time first, then single characters."""
    name = MAIN if MAIN in case.files else next(iter(case.files))

    def of(parts: list[bytes]) -> Case:
        return case._replace(files={**case.files, name: b"".join(parts)}, data=None)

    content = case.files[name]
    for parts in (content.splitlines(keepends=True), None):
        pieces = parts if parts is not None else [bytes([each]) for each in content]
        if parts is None and len(pieces) > 400:
            break
        size = max(len(pieces) // 2, 1)
        tries = 0
        while size >= 1 and tries < _MOST_TRIES:
            start = 0
            while start < len(pieces) and tries < _MOST_TRIES:
                tries += 1
                fewer = pieces[:start] + pieces[start + size :]
                if still(of(fewer)):
                    pieces = fewer
                else:
                    start += size
            size //= 2
        content = b"".join(pieces)
    return of([content])
