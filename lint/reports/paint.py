"""Lines of styled text, as plain text or in the colours of a terminal."""

from __future__ import annotations

import io
from collections.abc import Iterable
from typing import NamedTuple


class Line(NamedTuple):
    """One line: pieces of text, each with its style (empty for none)."""

    pieces: tuple[tuple[str, str], ...]


def painted(lines: Iterable[Line], *, colour: bool) -> str:
    """The lines as one text, each ended; without colour, styles are left out."""
    if not colour:
        return "".join("".join(text for text, _ in line.pieces).rstrip() + "\n" for line in lines)
    # Loaded for colour alone: a hook or a pipe does not pay for it.
    from rich.console import Console
    from rich.text import Text

    out = io.StringIO()
    console = Console(
        file=out, force_terminal=True, color_system="standard", markup=False, emoji=False, highlight=False,
        legacy_windows=False,
    )  # fmt: skip
    for line in lines:
        console.print(Text.assemble(*line.pieces), soft_wrap=True)
    return out.getvalue()
