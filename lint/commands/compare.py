"""``tidegate compare``: what changed between two revisions of a description."""

from __future__ import annotations

import argparse
import io
import subprocess
import tarfile
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path, PurePosixPath
from typing import Final

from tidegate.lint.batch import Request, catalogue, settings_for
from tidegate.lint.commands.streams import Exit, Streams
from tidegate.lint.comparison import compare
from tidegate.lint.description.load import load
from tidegate.lint.description.place import DescriptionError, Fault, Place
from tidegate.lint.engine import Review, review
from tidegate.lint.packs import PackError
from tidegate.lint.reports.comparison_report import json_lines, markdown_lines, terminal_lines
from tidegate.lint.reports.plain_text import plain

_FORMS: Final = {"terminal": terminal_lines, "markdown": markdown_lines, "json": json_lines}


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the options."""
    parser.add_argument("old", metavar="OLD", help="description, or REVISION:PATH of one in a git repository")
    parser.add_argument("new", metavar="NEW", help="description, or REVISION:PATH")
    parser.add_argument("--as", dest="form", choices=tuple(_FORMS), default="terminal", help="form (default: terminal)")
    parser.add_argument("--settings", metavar="FILE", help="settings for both, in place of the nearest of NEW")
    parser.add_argument(
        "--pack", action="append", default=[], metavar="FILE", help="Python file with rules of your own"
    )


def run(options: argparse.Namespace, streams: Streams) -> int:
    """Print what changed; the exit status is 1 if anything got worse."""
    request = Request(streams.today, streams.families, options.settings, tuple(options.pack))
    try:
        with _at(options.old) as old_path, _at(options.new) as new_path:
            settings = settings_for(str(new_path), request)
            rules = catalogue(request, settings)

            def judged(path: Path, shown: str) -> Review:
                return review(load(path, shown=shown), rules, today=request.today, settings=settings)

            old, new = judged(old_path, options.old), judged(new_path, options.new)
    except DescriptionError as error:
        streams.err.write("".join(f"{plain(str(fault))}\n" for fault in error.faults))
        return Exit.UNUSABLE
    except PackError as error:
        streams.err.write(f"{plain(str(error))}\n")
        return Exit.UNUSABLE
    found = compare(old, new)
    lines = _FORMS[options.form](found, old=options.old, new=options.new, width=streams.width)
    streams.out.write("\n".join(lines) + "\n")
    if old.faults or new.faults:
        return Exit.RULE_FAULT
    return Exit.FINDINGS if found.got_worse else Exit.KEPT


@contextmanager
def _at(name: str) -> Iterator[Path]:
    """The file itself, or its revision in a folder of its own, with what stands beside it."""
    revision, colon, inside = name.partition(":")
    if Path(name).exists() or not colon or not inside:
        yield Path(name)
        return
    with tempfile.TemporaryDirectory(prefix="tidegate-") as folder:
        _unpack(name, revision, inside, Path(folder))
        yield Path(folder) / PurePosixPath(inside).name


def _unpack(name: str, revision: str, inside: str, folder: Path) -> None:
    """Write the folder of a file, as it was at a revision; as in git, a path counts from the root or from ./ on."""
    try:
        root = _git("rev-parse", "--show-toplevel").decode().strip()
        here = _git("rev-parse", "--show-prefix").decode().strip()
        path = PurePosixPath(here, inside) if inside.startswith("./") else PurePosixPath(inside)
        above = "" if str(path.parent) == "." else str(path.parent)
        packed = _git("archive", "--format=tar", f"{revision}:{above}", folder=root)
    except FileNotFoundError:
        raise DescriptionError([Fault(Place(name), "", "git is not installed", "name a file instead")]) from None
    except subprocess.CalledProcessError as error:
        said = error.stderr.decode("utf-8", "replace").strip().splitlines() or ["no reason given"]
        problem = f"git has no such revision or file ({said[0].removeprefix('fatal: ')})"
        raise DescriptionError([Fault(Place(name), "", problem, "name it as REVISION:PATH")]) from None
    with tarfile.open(fileobj=io.BytesIO(packed)) as archive:
        archive.extractall(folder, filter="data")


def _git(*arguments: str, folder: str | None = None) -> bytes:
    return subprocess.run(["git", *arguments], capture_output=True, check=True, cwd=folder).stdout
