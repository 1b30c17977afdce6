"""The pictures of a small description, by structure: `python -m tests.reports.drawing.test_structure` records them."""

from __future__ import annotations

import contextlib
import io
from pathlib import Path

import pytest

from tests.reports.drawing.pictures import SMALL, structure
from tidegate.lint.cli import main

PICTURES = ("ladder", "timeline", "graph")


def drawn(picture: str) -> str:
    out = io.StringIO()
    with contextlib.redirect_stdout(out):
        assert main(["draw", str(SMALL), picture]) == 0
    return structure(out.getvalue())


def golden(picture: str) -> Path:
    return Path(__file__).with_name(f"small_{picture}.txt")


@pytest.mark.parametrize("picture", PICTURES)
def test_structure_is_as_recorded(picture: str) -> None:
    assert drawn(picture) == golden(picture).read_text("utf-8")


if __name__ == "__main__":
    for each in PICTURES:
        golden(each).write_text(drawn(each), "utf-8")
