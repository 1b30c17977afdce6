"""A board supervisor of fifteen lines, as a data sheet gives it, and what is said of it; invented for tests."""

from __future__ import annotations

import datetime
import tempfile
from functools import cache
from pathlib import Path
from typing import Final

from tidegate.lint.description.load import load
from tidegate.lint.engine import Catalogue, Review, review
from tidegate.lint.judgement import Judgement
from tidegate.rules.catalogue import FAMILIES

TODAY: Final = datetime.date(2026, 1, 1)
BOARD: Final = """\
subsystem: board supervisor
rails:
  vdd: {nominal: 3.3 V, delivered: {min: 3.135 V, max: 3.465 V}}
comparators:
  sup:
    role: under_voltage
    watches: vdd
    trip: {falling: 3.08 V}
    hysteresis: {amount: {typ: 40 mV}}
    errors: {accuracy: {share: 1.5 %, of: total, is: bound, at: rail}}
resets:
  por_n: {driven_by: [sup], guards: [mcu]}
loads:
  mcu: {needs: [{rail: vdd, works: {min: 2.7 V}}]}
"""
ROOM_V: Final = 3.135 - 1.015 * 3.08
"""What lies between the falling level at its highest and the lowest supply in service, by hand."""


@cache
def reviewed(text: str = BOARD) -> Review:
    """What all rules say about a description."""
    with tempfile.TemporaryDirectory() as folder:
        file = Path(folder) / "board.yaml"
        file.write_text(text, "utf-8")
        return review(load(file, shown="board.yaml"), Catalogue(FAMILIES), today=TODAY)


def said(rule: str, subject: str = "sup", text: str = BOARD) -> Judgement:
    """What one rule says about an element."""
    return next(one for one in reviewed(text).judgements if (one.rule, one.subject) == (rule, subject))


def with_rail(more: str) -> str:
    """The board with more said of its rail."""
    return BOARD.replace("max: 3.465 V}}", f"max: 3.465 V}}, {more}}}")
