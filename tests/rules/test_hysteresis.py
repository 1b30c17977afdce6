from __future__ import annotations

from tests.rules.sound import judged, of_kind
from tidegate.lint.judgement import Kind
from tidegate.rules.hysteresis import RULES


def test_sound_example_keeps_every_rule() -> None:
    assert of_kind(judged("", RULES), Kind.FAIL, Kind.OPEN, Kind.REVIEW) == []
