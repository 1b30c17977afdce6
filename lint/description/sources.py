"""The files of one description: the file named by the user and what it includes, read as one.

An included file lies below the folder of the first one.  Sections are joined entry by entry; an element stands in one
file only.  Every fact remembers the file it came from.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from pathlib import Path, PurePosixPath
from typing import Any, Final

from tidegate.lint.description.place import DescriptionError, Fault, Place
from tidegate.lint.description.yaml_text import Plain, Step, YamlFile, dotted, read_yaml

MOST_FILES: Final = 1000
"""Most files that one description may be split into."""

Reader = Callable[[Path], bytes]


class Sources:
    """The merged plain data of a description, and the place of everything in it."""

    def __init__(self, files: Sequence[YamlFile], data: dict[str, Plain]) -> None:
        self.files = tuple(files)
        self.data = data

    def place(self, path: Sequence[Step], *, key: bool = False) -> Place:
        """Where the value (or key) at a path stands, or the nearest part of the description above it."""
        files, path = self._own_path(tuple(path))
        for length in range(len(path), 0, -1):
            for file in files:
                place = file.place(path[:length], key=key or length < len(path))
                if place is not None:
                    return place
        return Place(self.files[0].name, 1, 1)

    def _own_path(self, path: tuple[Step, ...]) -> tuple[Sequence[YamlFile], tuple[Step, ...]]:
        """The files to look in; a list joined from several files has an index of its own in each."""
        if len(path) > 1 and isinstance(path[1], int):
            index = path[1]
            for file in self.files:
                entries = file.data.get(str(path[0]))
                length = len(entries) if isinstance(entries, list) else 0
                if index < length:
                    return (file,), (path[0], index, *path[2:])
                index -= length
        return self.files, path


def read_sources(path: Path, shown: str, read: Reader) -> Sources:
    """Read a description and what it includes.

    ``shown`` is the file's name in messages; included files are named beside it.
    Raises: DescriptionError: with the faults of all files.
    """
    gatherer = _Gatherer(path, read)
    gatherer.take(path, shown, ())
    if gatherer.faults:
        raise DescriptionError(gatherer.faults)
    data = _joined(gatherer.files, gatherer.faults)
    if gatherer.faults:
        raise DescriptionError(gatherer.faults)
    return Sources(gatherer.files, data)


class _Gatherer:
    """Reads files in the order in which they are named, each once."""

    def __init__(self, path: Path, read: Reader) -> None:
        self.folder = path.resolve().parent
        self.read = read
        self.files: list[YamlFile] = []
        self.faults: list[Fault] = []
        self._taken: set[Path] = set()

    def take(self, path: Path, shown: str, above: tuple[Path, ...]) -> None:
        """Read one file, then what it includes."""
        real = path.resolve()
        self._taken.add(real)
        try:
            file = read_yaml(shown, self.read(path))
        except DescriptionError as error:
            self.faults += error.faults
            return
        except OSError as error:
            self.faults.append(Fault(Place(shown), "", f"cannot be read ({error.strerror or error})", ""))
            return
        self.files.append(file)
        names = file.data.get("include", [])
        for index, name in enumerate(names if isinstance(names, list) else []):
            if isinstance(name, str):
                self._include(file, path, name, index, (*above, real))

    def _include(self, file: YamlFile, path: Path, name: str, index: int, above: tuple[Path, ...]) -> None:
        place = file.place(("include", index)) or Place(file.name)
        target = path.parent / name
        problem = self._why_not(name, target, above)
        if problem:
            what, advice = problem
            self.faults.append(Fault(place, dotted(("include", index)), f"{what} (found {name!r})", advice))
        elif target.resolve() not in self._taken:
            self.take(target, str(PurePosixPath(file.name).parent / name), above)

    def _why_not(self, name: str, target: Path, above: tuple[Path, ...]) -> tuple[str, str] | None:
        below = f"name a file below the folder of {self.files[0].name}"
        try:
            real = target.resolve()
        except (OSError, RuntimeError, ValueError):
            return "no usable file name", below
        if Path(name).is_absolute() or not real.is_relative_to(self.folder):
            return "leaves the folder of the description", below
        if real in above:
            return "a file that includes itself", "remove one of the includes"
        if not real.is_file():
            return "no such file", below
        if len(self._taken) >= MOST_FILES:
            return f"more than {MOST_FILES} files", "join some of them"
        return None


def _joined(files: Sequence[YamlFile], faults: list[Fault]) -> dict[str, Plain]:
    data: dict[str, Plain] = {}
    for number, file in enumerate(files):
        for section, content in file.data.items():
            if number and section == "include":
                continue
            _join(data, content, (section,), file, files[:number], faults)
    return data


def _join(
    data: dict[str, Any], content: Plain, path: tuple[str, ...], file: YamlFile, earlier: Sequence[YamlFile],
    faults: list[Fault],
) -> None:  # fmt: skip
    """Put one section, or one entry of the process data, into the joined data."""
    key = path[-1]
    old = data.get(key)
    if old is None:
        data[key] = dict(content) if isinstance(content, dict) else content
    elif isinstance(old, list) and isinstance(content, list):
        data[key] = old + content
    elif (
        isinstance(old, dict)
        and isinstance(content, dict)
        and (len(path) == 1 or path[0] == "process" and len(path) < 3)
    ):
        for name, entry in content.items():
            _join(old, entry, (*path, name), file, earlier, faults)
    else:
        first = next((place for other in earlier if (place := other.place(path, key=True))), None)
        place = file.place(path, key=True) or Place(file.name)
        faults.append(Fault(place, dotted(path), f"given twice (first at {first})", "keep one of them"))
