"""Descriptions of a few lines, for what the sound example would hide."""

from __future__ import annotations

import tempfile
from functools import cache
from pathlib import Path

from tidegate.lint.description.load import load
from tidegate.lint.graph.dependency import build
from tidegate.lint.timing.timeline import Timelines


@cache
def bare(text: str) -> Timelines:
    """The timelines of a description that says no more than this."""
    with tempfile.TemporaryDirectory() as folder:
        file = Path(folder) / "bare.yaml"
        file.write_text(text, "utf-8")
        description = load(file, shown="bare.yaml").description
    return Timelines(description, build(description))
