"""Which detectors have levels that are placed against a supply."""

from __future__ import annotations

from typing import Final

PLACED_ROLES: Final = ("power_on", "under_voltage", "over_voltage")
"""Roles of the detectors whose levels can be placed."""

NOT_PLACED: Final = "watches whether a reference is ready, not the range of a supply"
"""Why the levels of any other detector cannot."""
