"""The files of one description: the file named by the user and what it includes, read as one.

An included file lies below the folder of the first one.  Sections are joined entry by entry; an element stands in one
file only.  Every fact remembers the file it came from.
"""

from __future__ import annotations

import errno
from collections.abc import Callable, Sequence
from pathlib import Path as FilePath
from pathlib import PurePosixPath
from typing import Any, Final

from tidegate.lint.description.place import DescriptionError, Fault, Path, Place, Step, dotted
from tidegate.lint.description.plain_data import Plain
from tidegate.lint.description.reading import TooMuchError, read_file
from tidegate.lint.description.yaml_nodes import PARSER, Parser
from tidegate.lint.description.yaml_text import YamlFile, read_yaml
from tidegate.lint.found import quoted
from tidegate.lint.limits import MOST_BYTES, MOST_FILES, MOST_INCLUDED

_NAME_A_FILE: Final = "name a description in YAML or JSON"

Reader = Callable[[FilePath], bytes]


class Sources:
    """The merged plain data of a description, the place of everything in it, and the faults of its files."""

    def __init__(self, files: Sequence[YamlFile], data: dict[str, Plain], faults: Sequence[Fault] = ()) -> None:
        self.files = tuple(files)
        self.data = data
        self.faults = tuple(faults)

    def place(self, path: Sequence[Step], *, key: bool = False) -> Place:
        """Where the value (or key) at a path stands, or the nearest part of the description above it."""
        files, own = self._own_path(tuple(path))
        for length in range(len(own), 0, -1):
            for file in files:
                place = file.place(own[:length], key=key or length < len(path))
                if place is not None:
                    return place
        return Place(self.files[0].name, 1, 1)

    def _own_path(self, path: Path) -> tuple[Sequence[YamlFile], Path]:
        """The files to look in, and the path there: an entry has one file, a joined list an index in each."""
        if len(path) > 1 and isinstance(path[1], int):
            index = path[1]
            for file in self.files:
                entries = file.data.get(str(path[0]))
                length = len(entries) if isinstance(entries, list) else 0
                if index < length:
                    return (file,), (path[0], index, *path[2:])
                index -= length
            return self.files, path[:1]
        entry = path[: _depth_of_entries(path)]
        return next(((file,) for file in self.files if file.place(entry)), self.files), path


def _depth_of_entries(path: Sequence[Step]) -> int:
    """How many steps lead to an entry that stands in one file only."""
    return 3 if path and path[0] == "process" else 2


def read_sources(path: FilePath, shown: str, read: Reader = read_file, parser: type[Parser] = PARSER) -> Sources:
    """Read a description and what it includes.

    ``shown`` is the file's name in messages; included files are named beside it.
    Returns: the joined data, with the faults of single values and entries.
    Raises: DescriptionError: with the faults of all files, where one of them cannot be read at all.
    """
    gatherer = _Gatherer(path, read, parser)
    gatherer.take(path, shown, ())
    faults = [*gatherer.faults, *(fault for file in gatherer.files for fault in file.faults)]
    if gatherer.faults:
        raise DescriptionError(faults)
    data = _joined(gatherer.files, faults)
    return Sources(gatherer.files, data, faults)


class _Gatherer:
    """Reads files in the order in which they are named, each once."""

    def __init__(self, path: FilePath, read: Reader, parser: type[Parser]) -> None:
        self.folder = path.parent
        self.read = read
        self.parser = parser
        self.files: list[YamlFile] = []
        self.faults: list[Fault] = []
        self._taken: set[FilePath] = set()
        self._bytes = 0

    def take(self, path: FilePath, shown: str, above: tuple[FilePath, ...]) -> None:
        """Read one file, then what it includes."""
        try:
            real = path.resolve()
            self._taken.add(real)
            content = self.read(path)
            self._bytes += len(content)
            if self._bytes > MOST_BYTES:
                raise TooMuchError(
                    f"the files of the description are more than {MOST_BYTES / 2**20:g} MiB together",
                    "split the description into several",
                )
            file = read_yaml(shown, content, self.parser)
        except DescriptionError as error:
            self.faults += error.faults
            return
        except TooMuchError as error:
            self.faults.append(Fault(Place(shown), "", error.problem, error.advice))
            return
        except (OSError, ValueError, RuntimeError) as error:
            reason = _LOOP if _goes_round(error) else getattr(error, "strerror", None) or "no usable file name"
            advice = _near_file(path) if isinstance(error, FileNotFoundError) else _NAME_A_FILE
            self.faults.append(Fault(Place(shown), "", f"cannot be read ({reason})", advice))
            return
        self.files.append(file)
        names = file.data.get("include", [])
        for index, name in enumerate(names if isinstance(names, list) else []):
            if isinstance(name, str) and dotted(("include", index)) not in file.spoiled:
                self._include(file, path, name, index, (*above, real))

    def _include(self, file: YamlFile, path: FilePath, name: str, index: int, above: tuple[FilePath, ...]) -> None:
        target = path.parent / name
        try:
            real = target.resolve()
            problem = self._why_not(name, target, real, above)
        except (OSError, ValueError, RuntimeError) as error:
            real = target
            what = _LOOP if _goes_round(error) else "no usable file name"
            problem = what, f"name a file below the folder of {self.files[0].name}"
        if problem:
            what, advice = problem
            place = file.place(("include", index)) or Place(file.name)
            self.faults.append(Fault(place, dotted(("include", index)), f"{what} (found {quoted(name)})", advice))
        elif real not in self._taken:
            self.take(target, str(PurePosixPath(file.name).parent / name), above)

    def _why_not(
        self, name: str, target: FilePath, real: FilePath, above: tuple[FilePath, ...]
    ) -> tuple[str, str] | None:
        below = f"name a file below the folder of {self.files[0].name}"
        if FilePath(name).is_absolute() or not real.is_relative_to(self.folder.resolve()):
            return "leaves the folder of the description", below
        if real in above:
            return "a file that includes itself", "remove one of the includes"
        if real.is_dir():
            return "a folder", "name the files in it"
        if not real.is_file():
            return (_LOOP, below) if _leads_round(target) else ("no such file", _near_file(target))
        if len(above) > MOST_INCLUDED:
            return f"a chain of more than {MOST_INCLUDED} includes", "include the files side by side"
        if len(self._taken) >= MOST_FILES:
            return f"more than {MOST_FILES} files", "join some of them"
        return None


_LOOP: Final = "links that lead back to themselves"


def _goes_round(error: Exception) -> bool:
    """Whether links lead back to themselves; Python says so in one way or another, as its version is."""
    return isinstance(error, RuntimeError) or getattr(error, "errno", None) == errno.ELOOP


def _leads_round(path: FilePath) -> bool:
    try:
        path.stat()
    except OSError as error:
        return _goes_round(error)
    return False


def _near_file(path: FilePath) -> str:
    """Advice about a file that is not there."""
    # Loaded here alone: a description without faults does not compare names.
    from tidegate.lint.description.nearest import nearest

    try:
        beside = sorted(each for each in path.parent.iterdir() if each.suffix in {".yaml", ".yml", ".json"})
        by_stem = {each.stem: each.name for each in beside if each.is_file()}
    except (OSError, ValueError):
        by_stem = {}
    near = nearest(path.stem, by_stem)
    return f"did you mean {quoted(by_stem[near[0]])}?" if near else _NAME_A_FILE


def _joined(files: Sequence[YamlFile], faults: list[Fault]) -> dict[str, Plain]:
    if len(files) == 1:
        return dict(files[0].data)
    data: dict[str, Plain] = {}
    joining = _Joining(data, faults)
    for number, file in enumerate(files):
        for section, content in file.data.items():
            if number == 0 or section != "include":
                joining.put(data, content, (section,), file)
        joining.earlier.append(file)
    return data


class _Joining:
    """Joins sections entry by entry; what cannot be joined is a fault."""

    def __init__(self, data: dict[str, Plain], faults: list[Fault]) -> None:
        self.data = data
        self.faults = faults
        self.earlier: list[YamlFile] = []

    def put(self, into: dict[str, Any], content: Plain, path: tuple[str, ...], file: YamlFile) -> None:
        """Put a section, or an entry of one, into the joined data."""
        key = path[-1]
        old = into.get(key)
        joinable = len(path) < _depth_of_entries(path)
        if old is None:
            into[key] = _copied(content, _depth_of_entries(path) - len(path))
        elif joinable and isinstance(old, list) and isinstance(content, list):
            into[key] = old + content
        elif joinable and isinstance(old, dict) and isinstance(content, dict):
            for name, entry in content.items():
                self.put(old, entry, (*path, name), file)
        else:
            first = next((place for other in self.earlier if (place := other.place(path, key=True))), None)
            place = file.place(path, key=True) or Place(file.name)
            twice = f"given twice (first at {first})"
            if joinable and "none" in (old, content) and old != content:
                twice = f"said to be none in one file and described in another (first at {first})"
            self.faults.append(Fault(place, dotted(path), twice, "keep one of them"))


def _copied(content: Plain, levels: int) -> Plain:
    """The content with its outer mappings copied: a joined description must not change what one file says."""
    if levels and isinstance(content, dict):
        return {key: _copied(value, levels - 1) for key, value in content.items()}
    return content
