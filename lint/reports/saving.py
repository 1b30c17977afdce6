"""Writing a report to a file, whole or not at all."""

from __future__ import annotations

import os
import tempfile
from collections.abc import Iterable
from contextlib import suppress
from pathlib import Path


def save(path: Path, pieces: Iterable[str]) -> None:
    """Write a text to a file: what reads the file sees the old content or the new, never a part.

    Raises: OSError: if it cannot be written; the old content is then still there.
    """
    if path.exists() and not path.is_file():  # a device or a pipe: there is nothing to replace
        with path.open("w", encoding="utf-8", newline="\n") as device:
            device.writelines(pieces)
        return
    path = path.resolve()  # what a link points to is replaced, not the link
    handle, name = tempfile.mkstemp(dir=path.parent, prefix=".tidegate-")
    try:
        with os.fdopen(handle, "w", encoding="utf-8", newline="\n") as file:
            file.writelines(pieces)
        mode = path.stat().st_mode & 0o777 if path.exists() else 0o666 & ~_umask()
        Path(name).chmod(mode)
        Path(name).replace(path)
    except BaseException:
        with suppress(OSError):
            Path(name).unlink()
        raise


def _umask() -> int:
    """The mask of permissions for new files; it can only be read by setting it."""
    mask = os.umask(0o077)
    os.umask(mask)
    return mask
