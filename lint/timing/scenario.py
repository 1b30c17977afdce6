"""A scenario: what each rail does that is not made on the chip."""

from __future__ import annotations

from collections.abc import Mapping
from enum import Enum

import msgspec

from tidegate.lint.timing.waveform import Waveform


class Scene(Enum):
    """What kind of thing happens."""

    START = "start-up"
    CYCLE = "off and on again"
    FALL = "power-down"
    DIP = "dip"
    OWN = "described"
    PUBLISHED = "published"


class Scenario(msgspec.Struct, frozen=True):
    """A named course of the supplies."""

    name: str
    about: str
    scene: Scene
    waveforms: Mapping[str, Waveform]
    """Of each rail that a source off the chip makes, and of one made on the chip where it is forced; else made rails
    follow their makers."""
    fast: bool = True
    """Whether rails made on the chip rise and fall as fast as they may, or as slowly."""
    in_sequence: bool = False
    """Whether a rail that comes after another waits for it."""
    rail: str = ""
    """The one rail that it is about; empty where it is about all."""
    rises_s: float = 0.0
    """When the last of the supplies begins to rise."""
