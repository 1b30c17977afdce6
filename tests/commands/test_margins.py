"""``tidegate margins`` as its user meets it."""

from __future__ import annotations

import json
import os
import subprocess
import sys
from pathlib import Path

import jsonschema
import pytest

from tests.rules.sound import SOUND
from tidegate.lint.cli import main

SCHEMA = Path(__file__).parents[2] / "schema" / "report.schema.json"


def output(capsys: pytest.CaptureFixture[str], *arguments: str) -> str:
    main(["margins", str(SOUND), *arguments])
    return capsys.readouterr().out


def test_json_is_the_report_with_the_numbers_alone_least_first(capsys: pytest.CaptureFixture[str]) -> None:
    report = json.loads(output(capsys, "--as", "json"))
    jsonschema.validate(report, json.loads(SCHEMA.read_text("utf-8")))
    (file,) = report["files"]
    assert sum(file["counts"].values()) > len(file["judgements"]) > 20
    slacks = []
    for judgement in file["judgements"]:
        need, have = (judgement[key]["value"] for key in ("need", "have"))
        sure = judgement["margin"]["sure"]
        assert judgement["kind"] == "pass"  # what misses its limit would stand before them
        slacks.append(sure / (abs(need) or abs(have)) if sure else 0.0)
    assert slacks == sorted(slacks)


def test_filters(capsys: pytest.CaptureFixture[str]) -> None:
    of = [line.split()[-2:] for line in output(capsys, "--element", "uv", "--family", "trip_window").splitlines()[5:]]
    assert of
    assert all(element == "uv" and rule.startswith("trip_window/") for element, rule in of)


@pytest.mark.parametrize(
    ("arguments", "said"),
    [
        (["--element", "uvv"], "no element is called 'uvv'; did you mean uv?\n"),
        (["--family", "hysteresys"], "no family of rules is called 'hysteresys'; did you mean hysteresis?\n"),
        (
            ["--rule", "trip_window/nuisence"],
            "no rule is called 'trip_window/nuisence'; did you mean trip_window/nuisance?\n",
        ),
    ],
    ids=["element", "family", "rule"],
)
def test_near_names(arguments: list[str], said: str, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["margins", str(SOUND), *arguments]) == 2
    written = capsys.readouterr()
    assert written.out == ""
    assert written.err == f"{SOUND}: {said}"


def test_a_number_that_misses_its_limit_is_a_finding(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    chip = tmp_path / "chip.yaml"
    (tmp_path / "process.yaml").write_bytes((SOUND.parent / "process.yaml").read_bytes())
    text = SOUND.read_text("utf-8")
    chip.write_text(text.replace("rising: 1.677 V, falling: 1.627 V", "rising: 1.652 V, falling: 1.602 V"), "utf-8")
    assert main(["margins", str(chip)]) == 1
    lines = capsys.readouterr().out.splitlines()
    assert lines[lines.index("short of the limit:") + 1].lstrip().startswith("-")
    # The finding is about another element: with that one left out, there is none.
    assert main(["margins", str(chip), "--element", "uv_core", "--family", "trip_window"]) == 0


def test_unusable_file(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["margins", str(tmp_path / "none.yaml")]) == 2
    assert "cannot be read" in capsys.readouterr().err


@pytest.mark.parametrize(("encoding", "blocks"), [("utf-8", True), ("ascii", False)])
def test_blocks_only_where_the_output_can_hold_them(encoding: str, blocks: bool) -> None:
    environment = {**os.environ, "PYTHONIOENCODING": encoding, "COLUMNS": "80"}
    command = [sys.executable, "-m", "tidegate.lint.cli", "margins", str(SOUND)]
    text = subprocess.run(command, capture_output=True, check=False, env=environment).stdout.decode(encoding)
    (line,) = [line for line in text.splitlines() if line.startswith("slack  <0 ")]
    assert any(block in line for block in "▁▂▃▄▅▆▇█") is blocks
    assert max(map(len, text.splitlines())) <= 80


def test_one_rule_alone(capsys: pytest.CaptureFixture[str]) -> None:
    report = json.loads(output(capsys, "--as", "json", "--rule", "trip_window/nuisance"))
    assert {judgement["rule"] for judgement in report["files"][0]["judgements"]} == {"trip_window/nuisance"}


def test_the_three_margins_of_a_detector_stand_on_top(capsys: pytest.CaptureFixture[str]) -> None:
    lines = output(capsys).splitlines()
    at = lines.index("")
    assert lines[at + 1].split() == ["detectors", "protects", "stays", "quiet", "comes", "back"]
    ledger = json.loads(output(capsys, "--as", "json"))["files"][0]["judgements"]
    margins = {(one["rule"], one["subject"]): one["margin"]["value"] for one in ledger}
    row = next(line for line in lines[at:] if line.startswith("uv "))
    for rule in ("guarantee", "nuisance", "release"):
        assert f"+{1e3 * margins[f'trip_window/{rule}', 'uv']:.4g} mV" in row
    one = output(capsys, "--element", "uv").splitlines()
    assert [line.split()[0] for line in one[3:5]] == ["detectors", "uv"]
    assert one[5] == ""


def test_what_is_open_is_shown_as_far_as_it_is_known(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    chip = tmp_path / "chip.yaml"
    (tmp_path / "process.yaml").write_bytes((SOUND.parent / "process.yaml").read_bytes())
    text = SOUND.read_text("utf-8")
    ripple = "    ripple: {peak_to_peak: 10 mV, frequency: 1 MHz}\n"
    assert text.count(ripple) == 1
    chip.write_text(text.replace(ripple, ""), "utf-8")
    assert main(["margins", str(chip), "--rule", "trip_window/nuisance", "--element", "uv"]) == 0
    lines = capsys.readouterr().out.splitlines()
    # Without the ripple half of it, 5 mV, is not taken off yet: 54.6 mV and 5 mV.
    assert " ".join(lines[-1].split()).startswith("+3.5 % +59.6 mV so far 1.638 V at most 1.698 V uv")
    assert main(["margins", str(chip), "--account", "--rule", "trip_window/nuisance", "--element", "uv"]) == 0
    account = " ".join(capsys.readouterr().out.split())
    assert "- half the ripple not known rails.avdd.ripple.peak_to_peak" in account
    assert "margin +59.6 mV so far holds with ripple at most 119 mV peak to peak" in account
