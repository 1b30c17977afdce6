"""Writing a report to a file, whole or not at all."""

from __future__ import annotations

import os
from collections.abc import Iterable
from pathlib import Path

from tidegate.lint.description.whole_file import write_whole


def save(path: Path, pieces: Iterable[str], *, read: Iterable[str] = ()) -> None:
    """Write a text to a file: what reads the file sees the old content or the new, never a part.

    ``read`` are the files that the report was made from.
    Raises: OSError: if it cannot be written, or would take the place of what it was made from; the old content is then
    still there.
    """
    there = _status(path)
    if there is not None and any(_same(_status(file), there) for file in read):
        raise OSError(None, "the report is made from this file")
    write_whole(path, (piece.encode("utf-8", "backslashreplace") for piece in pieces))


def _status(path: str | Path) -> os.stat_result | None:
    try:
        return Path(path).stat()
    except (OSError, ValueError):
        return None


def _same(one: os.stat_result | None, other: os.stat_result) -> bool:
    return one is not None and os.path.samestat(one, other)
