"""What the tests of the shipped process data share: a small description that names a kit, loaded."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from tidegate.lint.description.load import load
from tidegate.lint.description.model.process import Process


@pytest.fixture(params=("ihp-sg13g2", "gf180mcu"))
def kit(request: pytest.FixtureRequest) -> str:
    """The name of each kit in turn."""
    return str(request.param)


@pytest.fixture
def process_of(tmp_path: Path) -> Callable[..., Process]:
    """Loads a description with one rail that names a kit, with more lines of its own below ``process:``."""

    def loaded(kit: str, more: str = "") -> Process:
        file = tmp_path / "supervisor.yaml"
        file.write_text(f"process:\n  kit: {kit}\n{more}rails:\n  avdd:\n    nominal: 3.3 V\n", "utf-8")
        process = load(file).description.process
        assert process is not None
        return process

    return loaded
