"""A stream that may be closed, full or left by its reader: what could not be written is remembered, nothing is raised.

A command says what it has to say, and its exit status stays what was judged, whoever listens.
"""

from __future__ import annotations

import errno
import io
import os

TYPE_CHECKING = False
if TYPE_CHECKING:
    from collections.abc import Iterable
    from typing import TextIO


class GuardedStream:
    """The output or the error stream of the process; None where it was closed before the start."""

    def __init__(self, stream: TextIO | None) -> None:
        self.stream = stream
        self.failure: OSError | None = None
        """The first write that failed; nothing is written after it."""

    @property
    def encoding(self) -> str:
        """The encoding of what is written; UTF-8 where the stream has none."""
        return getattr(self.stream, "encoding", None) or "utf-8"

    def isatty(self) -> bool:
        """Whether a terminal shows it."""
        return self.stream is not None and self.stream.isatty()

    def fix_encoding(self) -> None:
        """Write UTF-8 from here on: what programs read has one encoding, whatever the terminal's is."""
        if isinstance(self.stream, io.TextIOWrapper):
            self.stream.reconfigure(encoding="utf-8")

    def write(self, text: str) -> None:
        """Write a text, if everything before it could be written."""
        if self.failure is not None:
            return
        try:
            if self.stream is None:
                raise OSError(errno.EBADF, "it is closed")
            self.stream.write(text)
        except OSError as error:
            self.failure = error

    def writelines(self, pieces: Iterable[str]) -> None:
        """Write a text that comes in pieces; the others are not asked for once one could not be written."""
        for piece in pieces:
            self.write(piece)
            if self.failure is not None:
                return

    def flush(self) -> None:
        """Hand on what was written."""
        if self.failure is None and self.stream is not None:
            try:
                self.stream.flush()
            except OSError as error:
                self.failure = error

    def drop(self) -> None:
        """Spare the interpreter its own flush at the end, which would fail again."""
        if self.stream is not None:
            try:
                number = self.stream.fileno()
            except (OSError, ValueError):  # no file stands behind it
                return
            null = os.open(os.devnull, os.O_WRONLY)
            os.dup2(null, number)
            os.close(null)
