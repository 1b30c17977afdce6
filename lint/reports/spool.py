"""Parts of a report kept until the whole can be written: in memory while they are small, then in a temporary file."""

from __future__ import annotations

from collections.abc import Iterator
from typing import IO, Final

_IN_MEMORY: Final = 1 << 23  # characters
_PIECE: Final = 1 << 16  # characters


class Spool:
    """Texts joined by a separator, however many there are."""

    def __init__(self, separator: str) -> None:
        self._separator = separator
        self._texts: list[str] = []
        self._held = 0
        self._file: IO[str] | None = None
        self.empty = True

    def add(self, text: str) -> None:
        """Put a text behind those that are there."""
        if not self.empty:
            self._texts.append(self._separator)
        self._texts.append(text)
        self._held += len(text)
        self.empty = False
        if self._held > _IN_MEMORY:
            self._put_down()

    def _put_down(self) -> None:
        """Write what is held in memory to the temporary file."""
        if self._file is None:
            from tempfile import TemporaryFile

            self._file = TemporaryFile("w+", encoding="utf-8", newline="")  # noqa: SIM115
        self._file.writelines(self._texts)
        self._texts.clear()
        self._held = 0

    def pieces(self) -> Iterator[str]:
        """All of it, from the beginning, a piece at a time."""
        if self._file is not None:
            self._put_down()
            self._file.seek(0)
            while piece := self._file.read(_PIECE):
                yield piece
        yield from self._texts

    def close(self) -> None:
        """Give the memory, or the file, back."""
        self._texts.clear()
        if self._file is not None:
            self._file.close()
