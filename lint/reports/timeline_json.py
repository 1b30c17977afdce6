"""Timelines for machines: the same that is drawn, with every time in s; a time without an end is null."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any, Final

from tidegate.lint.reports.json_form import json_form
from tidegate.lint.reports.timeline import slack_of
from tidegate.lint.timing.evaluate import LoadState, State
from tidegate.lint.timing.interval import Times
from tidegate.lint.timing.state import Decision, On
from tidegate.lint.timing.supply import GivenSupply, MadeSupply
from tidegate.lint.timing.timeline import Timeline, Timelines
from tidegate.lint.version import VERSION

RAMP_SCHEMA: Final = "urn:tidegate:ramp:1"
"""The version of the form."""


def timelines_text(lines: Timelines, shown: Sequence[Timeline], *, file: str) -> str:
    """Every scenario with every element, as text."""
    report = {
        "schema": RAMP_SCHEMA,
        "tool": {"name": "tidegate", "version": VERSION},
        "file": file,
        "missing": {name: lacks.whole for name, lacks in lines.read.lacks.items() if lacks.whole},
        "scenarios": [_scenario(lines, line) for line in shown],
    }
    return json_form(report) + "\n"


def _scenario(lines: Timelines, line: Timeline) -> dict[str, Any]:
    scenario = line.scenario
    return {
        "name": scenario.name,
        "about": scenario.about,
        "scene": scenario.scene.value,
        "elements": [
            {"id": name, "section": lines.graph.elements[name].section, **_state(line.states[name])}
            for name in lines.read.parts
        ],
        "slacks": [entry for load in lines.description.loads if (entry := _slack(lines, line, load)) is not None],
    }


def _state(state: State) -> dict[str, Any]:
    match state:
        case Decision():
            return {
                "may_assert": _spans(state.may_assert), "may_release": _spans(state.may_release),
                "may_be_unknown": _spans(state.may_be_unknown), "may_be_held": _spans(state.may_be_held),
            }  # fmt: skip
        case On():
            return _on(state)
        case LoadState():
            return {
                "fed": _on(state.fed), "ready": _on(state.ready), "running": _on(state.running),
                "reset": _state(state.reset),
            }  # fmt: skip
        case GivenSupply():
            points = [{"at_s": at_s, "level_v": level_v} for at_s, level_v in state.waveform.points]
            return {"waveform": points, "late_by": {"min_s": state.least_s, "max_s": state.most_s}}
        case MadeSupply():
            return {
                "maker": _on(state.maker),
                "rise_s": _finite(state.ramp.rise.most),
                "fall_s": _finite(state.ramp.fall.most),
            }
        case _:
            return {}


def _on(state: On) -> dict[str, Any]:
    return {"may_be_on": _spans(state.may_be_on), "may_be_off": _spans(state.may_be_off)}


def _spans(times: Times) -> list[dict[str, float | None]]:
    return [{"from_s": _finite(start), "to_s": _finite(end)} for start, end in times]


def _finite(value: float) -> float | None:
    return value if abs(value) != float("inf") else None


def _slack(lines: Timelines, line: Timeline, load: str) -> dict[str, Any] | None:
    slack, words = slack_of(lines, line, load)
    if slack is None:
        return None
    first, then = words
    return {
        "load": load, "first": first, "first_by_s": _finite(slack.first_s), "then": then,
        "then_from_s": _finite(slack.then_s), "slack_s": _finite(slack.slack_s),
    }  # fmt: skip
