"""Which descriptions are meant: files as named, what lies below a folder, what a pattern matches; each once."""

from __future__ import annotations

import glob
import os
from collections.abc import Callable, Iterable, Iterator
from pathlib import Path
from typing import Final

from tidegate.lint.description.place import Fault, Place

SUFFIXES: Final = (".tidegate.yaml", ".tidegate.yml", ".tidegate.json")
"""Ends of the names by which descriptions are found in a folder."""


def found_files(names: Iterable[str]) -> Iterator[str | Fault]:
    """The files that are meant, in the order of the names, and what is wrong with a name in its place.

    A file that is meant twice, under whatever name, comes once.
    """
    met: set[str] = set()
    for name in names:
        for found in _meant(name):
            if isinstance(found, Fault):
                yield found
                continue
            real = os.path.realpath(found)
            if real not in met:
                met.add(real)
                yield found


def _meant(name: str) -> Iterator[str | Fault]:
    if _is(name, Path.is_dir):
        yield from _or_fault(
            _below(name), name, "the folder holds no description",
            f"descriptions in a folder have names that end in {', '.join(SUFFIXES)}",
        )  # fmt: skip
    elif any(mark in name for mark in "*?[") and not _is(name, Path.exists):
        found = sorted(glob.glob(name, recursive=True))  # noqa: PTH207 - a pattern may begin at the root
        matches = (match for match in found if _is(match, Path.is_file))
        yield from _or_fault(matches, name, "no file matches", "check the pattern")
    else:
        yield name


def _is(name: str, what: Callable[[Path], bool]) -> bool:
    """Whether a name is that of a folder, or of anything; what cannot be one is told where it is read."""
    try:
        return what(Path(name))
    except (OSError, ValueError):
        return False


def _or_fault(found: Iterable[str], name: str, problem: str, advice: str) -> Iterator[str | Fault]:
    empty = True
    for file in found:
        empty = False
        yield file
    if empty:
        yield Fault(Place(name), "", problem, advice)


def _below(folder: str) -> Iterator[str]:
    """Descriptions below a folder, those of a folder before those of the folders in it; hidden folders left out."""
    for where, folders, files in os.walk(folder):
        folders[:] = sorted(inner for inner in folders if not inner.startswith("."))
        yield from (os.path.normpath(Path(where, file)) for file in sorted(files) if file.endswith(SUFFIXES))
