"""A file written whole or not at all: what reads it sees the old content or the new one, and no draft stays behind."""

from __future__ import annotations

import os
import stat
import uuid
from collections.abc import Iterable
from contextlib import suppress
from pathlib import Path


def write_whole(path: Path, pieces: Iterable[bytes], *, lasting: bool = False) -> None:
    """Write a file; what is no file, such as a pipe, is written to, and what a link points to is replaced.

    ``lasting`` waits until the disk has it.
    Raises: OSError: if it cannot be written; the old content is then still there.
    """
    mode = _mode(path)
    if mode is not None and not stat.S_ISREG(mode):
        with path.open("wb") as device:
            device.writelines(pieces)
        return
    target = Path(os.path.realpath(path))
    # Named before it is made: however early the run is stopped, there is a name to remove it by.
    draft = target.with_name(f".tidegate-{uuid.uuid4().hex}")
    try:
        with open(draft, "xb", opener=_private if mode is not None else None) as file:
            file.writelines(pieces)
            if mode is not None:
                draft.chmod(stat.S_IMODE(mode))
            if lasting:
                file.flush()
                os.fsync(file.fileno())
        draft.replace(target)
    except BaseException:
        with suppress(OSError):
            draft.unlink()
        raise


def _mode(path: Path) -> int | None:
    """Kind and permissions of what stands at a path; None where nothing does."""
    try:
        return path.stat().st_mode
    except FileNotFoundError:
        return None


def _private(name: str, flags: int) -> int:
    """Open a draft for its owner alone: it gets the permissions of the old file, which may be few, when it is whole."""
    return os.open(name, flags, 0o600)
