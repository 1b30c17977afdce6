"""The content of a file, as far as a description may reach: never without end, and never waiting without end."""

from __future__ import annotations

import errno
import os
import stat
from pathlib import Path
from typing import Final

from tidegate.lint.limits import MOST_BYTES, MOST_WAIT_S

_MIB: Final = 2**20
_PIECE: Final = 2**16
_AT_ONCE: Final = getattr(os, "O_NONBLOCK", 0) | getattr(os, "O_CLOEXEC", 0) | getattr(os, "O_BINARY", 0)


class TooMuchError(OSError):
    """A file is larger, or a pipe slower, than the limits allow; it says what was found and what is allowed."""

    def __init__(self, problem: str, advice: str) -> None:
        super().__init__(errno.EFBIG, problem)
        self.problem = problem
        self.advice = advice


def read_file(path: Path, most_bytes: int = MOST_BYTES, *, what: str = "description") -> bytes:
    """The content of a file, a pipe or a device.

    Raises: OSError: where it cannot be read. TooMuchError: where it is too large, or a pipe stays silent too long.
    """
    handle = os.open(path, os.O_RDONLY | _AT_ONCE)  # a pipe that nobody writes to must not be waited for here
    with os.fdopen(handle, "rb", buffering=0) as file:
        status = os.fstat(handle)
        if stat.S_ISREG(status.st_mode) and status.st_size > most_bytes:
            raise _too_large(f"{status.st_size / _MIB:.1f} MiB", most_bytes, what)
        may_wait = not stat.S_ISREG(status.st_mode) and not stat.S_ISDIR(status.st_mode) and not os.isatty(handle)
        content = _read_slowly(handle, most_bytes) if may_wait else file.readall()
    if len(content) > most_bytes:
        raise _too_large("more", most_bytes, what)
    return content


def _too_large(found: str, most_bytes: int, what: str) -> TooMuchError:
    problem = f"too large (found {found}, at most {most_bytes / _MIB:g} MiB are read)"
    return TooMuchError(problem, f"split the {what} into several")


def _read_slowly(handle: int, most_bytes: int) -> bytes:
    """What comes through a pipe or from a device, until it ends, or is too much."""
    import select

    content = bytearray()
    if not hasattr(select, "poll"):  # a system whose pipes cannot be watched
        os.set_blocking(handle, True)
    else:
        poll = select.poll()
        poll.register(handle, select.POLLIN | select.POLLHUP)
    while len(content) <= most_bytes:
        if hasattr(select, "poll") and not poll.poll(MOST_WAIT_S * 1000):
            problem = f"nothing came through the pipe for {MOST_WAIT_S:g} s"
            raise TooMuchError(problem, "let something write to it, or name a file")
        piece = os.read(handle, _PIECE)
        if not piece:
            break
        content += piece
    return bytes(content)
