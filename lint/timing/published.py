"""Profiles that a standard publishes, with their values as others quote them.

ISO 16750-2: slow decrease and increase at 0.5 V/min (clause 4.5); reset behaviour at voltage drop in steps of 5 % of
the least supply, low for 5 s at least and recovered for 10 s at least, down to 0 V (clause 4.6.2).  The values are
second-hand: taken from those who quote the standard, not from its text.  They are written for the supply of a vehicle;
here each rail off the chip takes them, its least delivered level standing for the least supply.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import Final

from tidegate.lint.timing.scenario import Scenario, Scene
from tidegate.lint.timing.starts import Setting
from tidegate.lint.timing.waveform import Waveform

SLOW_V_PER_S: Final = 0.5 / 60.0
"""Slope of the slow decrease and increase: 0.5 V/min, second-hand."""
STEP_SHARE: Final = 0.05
"""Step of the reset behaviour, as a share of the least supply: 5 %, second-hand."""
LOW_S: Final = 5.0
"""Least time for which each step stays low, second-hand."""
RECOVERED_S: Final = 10.0
"""Least time between two steps, second-hand."""
_EDGE_S: Final = 1e-3
"""Fall and rise of a step; the rail's own fastest ones where they take longer."""


def published(setting: Setting) -> Iterator[Scenario]:
    """The profiles, for every rail off the chip at once."""
    rails = [rail for rail in setting.outer_rails() if not setting.ramps[rail.id].lacks.rise]
    if not rails:
        return
    slow: dict[str, Waveform] = {}
    steps: dict[str, Waveform] = {}
    for rail in rails:
        ramp = setting.ramps[rail.id]
        least_v = (rail.delivered.least if rail.delivered is not None else None) or ramp.nominal_v
        slow_s = ramp.nominal_v / SLOW_V_PER_S
        slow[rail.id] = Waveform(((0.0, ramp.nominal_v), (slow_s, 0.0), (2.0 * slow_s, ramp.nominal_v)))
        edge_s = max(_EDGE_S, ramp.rise.least, ramp.fall.least)
        steps[rail.id] = _steps(least_v, edge_s)
    yield Scenario(
        "ISO 16750-2 slow decrease and increase", "0.5 V/min down and up (clause 4.5, values second-hand)",
        Scene.PUBLISHED, slow,
    )  # fmt: skip
    yield Scenario(
        "ISO 16750-2 reset behaviour",
        "steps of 5 % of the least supply down to 0 V (clause 4.6.2, values second-hand)",
        Scene.PUBLISHED, steps,
    )  # fmt: skip


def _steps(least_v: float, edge_s: float) -> Waveform:
    points = [(0.0, least_v)]
    at_s = 0.0
    count = round(1.0 / STEP_SHARE)
    for number in range(1, count + 1):
        low_v = least_v * (count - number) / count
        points += [(at_s, least_v), (at_s + edge_s, low_v), (at_s + edge_s + LOW_S, low_v)]
        at_s += 2.0 * edge_s + LOW_S
        points.append((at_s, least_v))
        at_s += RECOVERED_S
    return Waveform(tuple(points))
