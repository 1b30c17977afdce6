"""What is recorded from the code is what the code says today (`python tests/record.py` writes it)."""

from __future__ import annotations

import importlib.util
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]
_SPEC = importlib.util.spec_from_file_location("record", ROOT / "tests" / "record.py")
assert _SPEC is not None and _SPEC.loader is not None
record = importlib.util.module_from_spec(_SPEC)
_SPEC.loader.exec_module(record)


@pytest.mark.parametrize("name", record.recorded())
def test_recorded_file_is_fresh(name: str) -> None:
    assert (ROOT / name).read_text("utf-8") == record.recorded()[name]()
