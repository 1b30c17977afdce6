"""How many parts miss what their levels must keep, for people."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

from tidegate.lint.derived.asking import Unknown

if TYPE_CHECKING:
    from tidegate.lint.physics.yield_estimate import FailureShare, YieldEstimate


def yield_rows(estimate: YieldEstimate | Unknown) -> Iterator[str]:
    """A row for each demand, and one for the detector."""
    if isinstance(estimate, Unknown):
        yield estimate.text()
        return
    for (_, name), share in estimate.by_demand.items():
        yield f"{_share_text(share)}  {name}"
    yield f"{_share_text(estimate.whole)}  any of them, of {estimate.whole.samples} parts drawn"


def _share_text(share: FailureShare) -> str:
    text = f"{_ppm(share.ppm)} ppm, 95 % {_ppm(share.least_ppm)} to {_ppm(share.most_ppm)}"
    return text if share.normal_ppm is None else f"{text}, normal {_ppm(share.normal_ppm)}"


def _ppm(value: float) -> str:
    """Three digits, and no exponent."""
    if value < 1e-3:
        return "0" if value == 0.0 else "<0.001"
    return f"{value:.3g}" if value < 1000.0 else f"{value:.0f}"
