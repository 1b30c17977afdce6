"""What the output of a driver does while it is not alive."""

from __future__ import annotations

from typing import Final

from tidegate.lint.description.model.detector import Comparator
from tidegate.lint.description.model.reset_path import Hold, OutputStage

_OUTPUTS: Final = {"asserts": "kept", "releases": "let go", "undefined": "loose"}


def dead_output(driver: OutputStage | Comparator) -> str | None:
    """Whether an output is kept at a level, let go, or loose while its driver is not alive; None where it is unsaid."""
    if isinstance(driver, Comparator):
        return _OUTPUTS.get(driver.undecided or "")
    return "kept" if isinstance(driver.hold, Hold) else "loose" if driver.hold == "none" else None


def says_dead_output(driver: OutputStage | Comparator) -> str:
    """The fact that says it, as a path."""
    return driver.fact("undecided" if isinstance(driver, Comparator) else "hold")
