"""Parts of a report kept until the whole can be written: in memory while they are small, then in a temporary file."""

from __future__ import annotations

import tempfile
from collections.abc import Iterator
from typing import Final

_IN_MEMORY: Final = 1 << 23  # bytes
_PIECE: Final = 1 << 16  # characters


class Spool:
    """Texts joined by a separator, however many there are."""

    def __init__(self, separator: str) -> None:
        self._separator = separator
        self._file = tempfile.SpooledTemporaryFile(_IN_MEMORY, "w+", encoding="utf-8", newline="")  # noqa: SIM115
        self.empty = True

    def add(self, text: str) -> None:
        """Put a text behind those that are there."""
        if not self.empty:
            self._file.write(self._separator)
        self._file.write(text)
        self.empty = False

    def pieces(self) -> Iterator[str]:
        """All of it, from the beginning, a piece at a time."""
        self._file.seek(0)
        while piece := self._file.read(_PIECE):
            yield piece

    def close(self) -> None:
        """Give the memory, or the file, back."""
        self._file.close()
