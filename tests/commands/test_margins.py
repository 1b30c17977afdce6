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
        need, have, margin = (judgement[key]["value"] for key in ("need", "have", "margin"))
        slacks.append(margin / (abs(need) or abs(have)) if margin else 0.0)
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
    ],
    ids=["element", "family"],
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
    assert lines[5].lstrip().startswith("-")
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
