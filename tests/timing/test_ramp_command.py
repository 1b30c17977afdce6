"""``tidegate ramp``: drawn at 80 columns without colour, in ASCII where need be, and the same as JSON."""

from __future__ import annotations

import io
import json
from pathlib import Path

import pytest

from tidegate.lint.cli import main
from tidegate.lint.description.load import load
from tidegate.lint.graph.dependency import build
from tidegate.lint.reports.time_axis import time_axis
from tidegate.lint.reports.timeline import ASCII, UNICODE, signs_for
from tidegate.lint.timing.interval import FOREVER_S
from tidegate.lint.timing.state import Decision
from tidegate.lint.timing.timeline import timelines

SOUND = str(Path(__file__).parents[2] / "examples" / "sound.yaml")


def _drawn(capsys: pytest.CaptureFixture[str], *arguments: str, status: int = 0) -> str:
    assert main(["ramp", SOUND, *arguments]) == status
    return capsys.readouterr().out


def test_it_fits_80_columns(capsys: pytest.CaptureFixture[str]) -> None:
    text = _drawn(capsys)
    scenarios = text.partition("beside these")[0]
    assert max(len(line) for line in scenarios.splitlines()) <= 80
    for name in ("fastest ramp", "slowest ramp", "off and on again", "fastest power-down", "plug_in"):
        assert f"\n{name}\n" in text
    assert "\x1b" not in text


def test_states_are_told_apart_by_their_characters() -> None:
    for signs in (UNICODE, ASCII):
        states = signs[:7]
        assert len(set(states)) == len(states)
        assert all(len(sign) == 1 for sign in states)


def test_what_the_stream_cannot_carry_is_drawn_in_ascii(monkeypatch: pytest.MonkeyPatch) -> None:
    assert signs_for("utf-8") is UNICODE
    assert signs_for("latin-1") is ASCII
    assert signs_for(None) is ASCII
    stream = io.TextIOWrapper(io.BytesIO(), encoding="ascii")
    monkeypatch.setattr("sys.stdout", stream)
    assert main(["ramp", SOUND, "--scenario", "fastest ramp"]) == 0
    stream.flush()
    text = stream.buffer.getvalue().decode("ascii")  # type: ignore[attr-defined]
    rows = {line.split()[0]: line for line in text.splitlines() if line[:1].isalpha()}
    assert "=" in rows["por_n"]  # held first
    assert "#" in rows["por_n"]  # then asserted
    assert "/" in rows["por_n"]  # then between the earliest and the latest release
    assert rows["por_n"].index("=") < rows["por_n"].index("#") < rows["por_n"].index("/")
    assert "?" in rows["uv"]


def test_edges_and_slack_are_written_out(capsys: pytest.CaptureFixture[str]) -> None:
    text = _drawn(capsys, "--scenario", "fastest ramp")
    assert "ref_fast" in text
    assert "  5 us .. 89.4 us" in text  # settles in 5 us at the least; from 1.06 V on (29.4 us) in 60 us at the most
    assert "slack +63.57 us: ready by 169.4 us, released from 233 us" in text


def test_json_says_the_same(capsys: pytest.CaptureFixture[str]) -> None:
    report = json.loads(_drawn(capsys, "--scenario", "fastest ramp", "--as", "json"))
    assert report["schema"] == "urn:tidegate:ramp:1"
    (scenario,) = report["scenarios"]
    assert scenario["scene"] == "start-up"
    elements = {element["id"]: element for element in scenario["elements"]}
    (reference,) = elements["ref_fast"]["may_be_off"]
    assert reference["from_s"] is None
    assert reference["to_s"] == pytest.approx(50e-6 * 1.06 / 1.8 + 60e-6)
    assert elements["avdd"]["waveform"] == [{"at_s": 0.0, "level_v": 0.0}, {"at_s": 5e-05, "level_v": 1.8}]
    slack = next(entry for entry in scenario["slacks"] if entry["load"] == "core_regulator")
    assert slack["slack_s"] == pytest.approx(slack["then_from_s"] - slack["first_by_s"])


def test_dips_and_published_profiles_are_drawn_where_they_are_named(capsys: pytest.CaptureFixture[str]) -> None:
    assert "ISO 16750-2 reset behaviour\n" in _drawn(capsys, "--scenario", "ISO 16750-2 reset behaviour")
    assert "vcore falls\n" in _drawn(capsys, "--scenario", "vcore falls")


def test_a_name_that_is_nearly_right_is_told(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["ramp", SOUND, "--scenario", "fastest rampe"]) == 2
    assert capsys.readouterr().err == (
        f"{SOUND}: no scenario is called 'fastest rampe'; did you mean 'fastest ramp'?\n"
    )


def test_a_starter_is_drawn_as_far_as_its_facts_go(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    file = tmp_path / "bare.yaml"
    file.write_text("rails: {v: {nominal: 1.8 V}}\ncomparators: {d: {role: power_on, watches: v}}\n", "utf-8")
    assert main(["ramp", str(file)]) == 0
    assert "no ramp can be drawn without rails.v.rise" in capsys.readouterr().out


def test_every_edge_has_a_column_of_its_own_where_there_is_room() -> None:
    edges = [0.0, 1e-9, 2e-9, 1e-3, 1.0]
    axis = time_axis(edges, 60)
    columns = [axis.column(edge) for edge in edges]
    assert columns == sorted(columns)
    assert len(set(columns[2:])) == len(columns[2:])
    for number in range(axis.width):
        assert axis.column(axis.column_at(number).middle_s) == number


def test_an_override_lifts_what_its_detectors_hold(tmp_path: Path) -> None:
    """With uv stuck asserting, its level above the supply, the net stays in reset; an override lifts it."""
    levels = "trip: {rising: 1.677 V, falling: 1.627 V}"
    text = Path(SOUND).read_text("utf-8").replace(levels, "trip: {rising: 2.4 V, falling: 2.35 V}")
    assert "2.4 V" in text
    chip = tmp_path / "stuck.yaml"
    chip.write_text(text, "utf-8")
    (tmp_path / "process.yaml").write_text(Path(SOUND).with_name("process.yaml").read_text("utf-8"), "utf-8")
    loaded = load(chip)
    lines = timelines(loaded.description, build(loaded.description))
    bypass = loaded.description.bypasses["skip_resets"]
    assert lines.starts
    for line in lines.starts:
        held, lifted = line.states["por_n"], lines.with_override(line, bypass).states["por_n"]
        assert isinstance(held, Decision)
        assert isinstance(lifted, Decision)
        assert not held.surely_releases or held.surely_releases[-1][1] < FOREVER_S
        assert lifted.surely_releases[-1][1] == FOREVER_S
        assert lifted.may_be_held == held.may_be_held  # the stage behind still has to come alive


def test_an_override_that_is_not_there_is_named(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["ramp", SOUND, "--override", "skip_reset"]) == 2
    assert capsys.readouterr().err == f"{SOUND}: no override is called 'skip_reset'; did you mean skip_resets?\n"


def test_with_an_override_the_timelines_are_others(capsys: pytest.CaptureFixture[str]) -> None:
    scenario = ("--scenario", "fastest ramp")
    assert _drawn(capsys, *scenario, "--override", "skip_resets") != _drawn(capsys, *scenario)
