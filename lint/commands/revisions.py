"""A description as it was at a revision of a git repository, with all that judging it reads, in a folder of its own."""

from __future__ import annotations

import io
import os
import posixpath
import re
import subprocess
import tarfile
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path, PurePosixPath

import msgspec

from tidegate.lint.description.place import DescriptionError, Fault, Place
from tidegate.lint.description.yaml_text import read_yaml
from tidegate.lint.settings import FILE_NAME


class Held(msgspec.Struct, frozen=True):
    """Where a description can be read."""

    folder: Path
    """The folder from which its name counts."""
    file: str
    unpacked: bool = False
    """Whether the folder was made for it: nothing above belongs to it then."""

    @property
    def path(self) -> Path:
        """The whole path."""
        return self.folder / self.file


@contextmanager
def at_revision(name: str) -> Iterator[Held]:
    """The file itself, or REVISION:PATH of one unpacked for as long as it is needed.

    Raises: DescriptionError: if there is no such revision or file.
    """
    revision, colon, inside = name.partition(":")
    if not colon or not revision or not inside or os.path.lexists(name):
        yield Held(Path.cwd(), name)
        return
    with tempfile.TemporaryDirectory(prefix="tidegate-") as made:
        folder = Path(made).resolve()
        yield Held(folder, _unpack(name, revision, inside, folder), unpacked=True)


def _unpack(name: str, revision: str, inside: str, folder: Path) -> str:
    """Unpack what belongs to a file; returns its path, which counts from the root, or as in git from ./ or ../ on."""
    try:
        root = _git("rev-parse", "--show-toplevel").decode().strip()
        here = _git("rev-parse", "--show-prefix").decode().strip()
        beside = inside.startswith(("./", "../"))
        path = posixpath.normpath(posixpath.join(here, inside) if beside else inside)
        tree = _git("rev-parse", "--verify", "--quiet", "--end-of-options", f"{revision}^{{tree}}").decode().strip()
        wanted = [str(PurePosixPath(path).parent), *_of_settings(tree, path, root)]
        _git("cat-file", "-e", f"{tree}:{path}", folder=root)
        packed = _git("archive", "--format=tar", tree, "--", *wanted, folder=root)
    except FileNotFoundError:
        raise DescriptionError([Fault(Place(name), "", "git is not installed", "name a file instead")]) from None
    except subprocess.CalledProcessError as error:
        said = error.stderr.decode("utf-8", "replace").strip().splitlines() or ["nothing is called so"]
        reason = re.sub("[0-9a-f]{40,64}", lambda _: revision, said[0].removeprefix("fatal: "))
        problem = f"git has no such revision or file ({reason})"
        raise DescriptionError([Fault(Place(name), "", problem, "name it as REVISION:PATH")]) from None
    with tarfile.open(fileobj=io.BytesIO(packed)) as archive:
        archive.extractall(folder, filter="data")
    return path


def _of_settings(tree: str, path: str, root: str) -> Iterator[str]:
    """The nearest settings file at or above a file, and the waiver files and rule packs that it names."""
    above = [PurePosixPath(path).parent / FILE_NAME, *(folder / FILE_NAME for folder in PurePosixPath(path).parents)]
    there = _there(tree, [str(settings) for settings in above], root)
    settings = next((each for each in above if str(each) in there), None)
    if settings is None:
        return
    yield str(settings)
    data = read_yaml(str(settings), _git("cat-file", "blob", f"{tree}:{settings}", folder=root)).data
    named = [name for key in ("waivers", "packs") for name in _list(data.get(key)) if isinstance(name, str)]
    yield from _there(tree, [posixpath.normpath(settings.parent / name) for name in named], root)


def _list(value: object) -> list[object]:
    return value if isinstance(value, list) else []


def _there(tree: str, paths: list[str], root: str) -> list[str]:
    """Those of some paths that are files of a tree."""
    inside = [path for path in paths if not path.startswith(("/", ".."))]
    if not inside:
        return []
    listed = _git("ls-tree", "-z", "--name-only", "--full-tree", tree, "--", *inside, folder=root)
    return [name for name in listed.decode("utf-8", "surrogateescape").split("\0") if name]


def _git(*arguments: str, folder: str | None = None) -> bytes:
    command = ["git", "--literal-pathspecs", *arguments]
    return subprocess.run(command, capture_output=True, check=True, cwd=folder).stdout
