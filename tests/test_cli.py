"""The command line as its user meets it: exit statuses, streams, pipes, widths, near misses."""

from __future__ import annotations

import json
import os
import subprocess
import sys
from pathlib import Path

import jsonschema
import pytest

from tests.commands.calling import tidegate as on_terminal

ROOT = Path(__file__).resolve().parents[1]
SOUND = "examples/sound.yaml"
FAULTY = "examples/faulty.yaml"


def tidegate(*arguments: str, cwd: Path = ROOT, columns: int = 80, **env: str) -> subprocess.CompletedProcess[str]:
    environment = {**os.environ, "COLUMNS": str(columns), **env}
    command = [sys.executable, "-m", "tidegate.lint.cli", *arguments]
    return subprocess.run(command, capture_output=True, text=True, cwd=cwd, env=environment, check=False)


@pytest.mark.parametrize(
    ("arguments", "status"),
    [
        (["review", SOUND], 0),
        (["review", FAULTY], 1),
        (["review", "missing.yaml"], 2),
        (["review", SOUND, FAULTY], 1),
        (["review", FAULTY, "missing.yaml"], 2),
        (["review", "examples/starter.yaml"], 0),
        (["review", "--also", "open", "examples/starter.yaml"], 1),
        (["review"], 2),
        (["review", "--as", "postcard", SOUND], 2),
        ([], 2),
        (["--version"], 0),
        (["--help"], 0),
        (["rules"], 0),
        (["rules", "hysteresis"], 0),
        (["rules", "hysteresis/present"], 0),
        (["rules", "hysteresis/presant"], 2),
        (["trace", SOUND, "uv"], 0),
        (["trace", SOUND, "uw"], 2),
        (["trace", "missing.yaml", "uv"], 2),
        (["schema"], 0),
        (["schema", "report"], 0),
        (["start"], 0),
        (["start", "--rail", "avdd=1,8V"], 2),
        (["completion", "bash"], 0),
    ],
    ids=lambda value: " ".join(value) or "nothing" if isinstance(value, list) else str(value),
)
def test_exit_status(arguments: list[str], status: int) -> None:
    done = tidegate(*arguments)
    assert done.returncode == status, done.stderr
    assert "Traceback" not in done.stderr
    assert bool(done.stderr) == (status == 2)


@pytest.mark.parametrize("columns", [60, 80, 110, 300])
def test_no_line_is_wider_than_the_terminal(columns: int) -> None:
    lines = on_terminal("review", FAULTY, columns=columns).stdout.splitlines()
    unbroken = [line for line in lines if len(line) > columns and " " in line.strip()[24:]]
    assert unbroken == []


def test_a_pipe_gets_no_colour_and_no_control_characters() -> None:
    text = tidegate("review", FAULTY).stdout
    assert not [character for character in text if ord(character) < 32 and character != "\n"]


def test_near_misses_are_named() -> None:
    assert "did you mean review?" in tidegate("revieuw", SOUND).stderr
    assert "did you mean uv" in tidegate("trace", SOUND, "uv1").stderr
    assert "did you mean hysteresis/present?" in tidegate("rules", "hysteresis/presant").stderr
    assert "did you mean power-on?" in tidegate("start", "--rail", "a=1V", "--watch", "a=poweron").stderr


def test_a_reader_that_leaves_early_is_no_error() -> None:
    command = f"{sys.executable} -m tidegate.lint.cli review --every {FAULTY} | head -n 1; echo ${{PIPESTATUS[0]}}"
    done = subprocess.run(["bash", "-c", command], capture_output=True, text=True, cwd=ROOT, check=False)
    assert done.stderr == ""
    assert done.stdout.splitlines()[-1] in ("0", "1")


def test_json_keeps_its_schema() -> None:
    done = tidegate("review", "--as", "json", SOUND, FAULTY, "missing.yaml")
    schema = json.loads((ROOT / "schema" / "report.schema.json").read_text("utf-8"))
    jsonschema.Draft202012Validator.check_schema(schema)
    jsonschema.validate(json.loads(done.stdout), schema)
    assert [entry["verdict"] for entry in json.loads(done.stdout)["files"]] == ["KEPT", "NOT KEPT", "UNUSABLE"]


def test_fail_at_moves_the_bar(tmp_path: Path) -> None:
    chip = tmp_path / "chip.yaml"
    slow = "comparators: {uv: {hysteresis: {feedback_delay: 5 us}}}"
    chip.write_text(_laid_over_sound(slow), "utf-8")
    (tmp_path / "process.yaml").write_text((ROOT / "examples" / "process.yaml").read_text("utf-8"), "utf-8")
    assert tidegate("review", str(chip)).returncode == 1
    assert tidegate("review", "--fail-at", "error", str(chip)).returncode == 0


def _laid_over_sound(patch: str) -> str:
    import yaml

    data = yaml.load((ROOT / SOUND).read_text("utf-8"), Loader=yaml.BaseLoader)

    def lay(base: dict[str, object], over: dict[str, object]) -> None:
        for key, value in over.items():
            inner = base.get(key)
            if isinstance(value, dict) and isinstance(inner, dict):
                lay(inner, value)
            else:
                base[key] = value

    lay(data, yaml.load(patch, Loader=yaml.BaseLoader))
    return _plain_flags(yaml.safe_dump(data, sort_keys=False))


def _plain_flags(text: str) -> str:
    """Flags and numbers were read as text: write them plainly again."""
    import re

    return re.sub(r"'(true|false|[0-9.]+)'", r"\1", text)


@pytest.mark.parametrize("roles", ["power-on", "under", "over", "reference-ready", "power-on,under,over"])
def test_a_starter_can_be_read_and_is_open_everywhere(roles: str, tmp_path: Path) -> None:
    made = tidegate(
        "start", "--rail", "vdd=1.2 V", "--rail", "vio=3.3V", "--watch", f"vdd={roles}", "--watch", "vio=under"
    )
    assert made.returncode == 0
    chip = tmp_path / "chip.yaml"
    chip.write_text(made.stdout, "utf-8")
    report = json.loads(tidegate("review", "--as", "json", str(chip)).stdout)["files"][0]
    assert report["verdict"] != "UNUSABLE"
    failed = {answer["rule"] for answer in report["judgements"] if answer["kind"] == "fail"}
    assert failed == set()
    assert report["counts"]["open"] > 10


def test_completion_scripts_are_sound_shell() -> None:
    script = tidegate("completion", "bash").stdout
    assert subprocess.run(["bash", "-n"], input=script, text=True, check=False).returncode == 0
    assert "review" in script


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="there is no /dev/full on this system")
def test_a_full_disk_is_said_in_one_line() -> None:
    command = f"{sys.executable} -m tidegate.lint.cli review {SOUND} > /dev/full"
    done = subprocess.run(["bash", "-c", command], capture_output=True, text=True, cwd=ROOT, check=False)
    assert done.returncode == 2
    assert done.stderr == "tidegate: the output cannot be written (No space left on device)\n"


def test_letters_that_the_terminal_cannot_show_are_written_as_numbers(tmp_path: Path) -> None:
    chip = tmp_path / "chip.yaml"
    chip.write_text("subsystem: \u00dcberwachung\nrails: {avdd: {nominal: 1.8 V}}\n", "utf-8")
    done = tidegate("review", str(chip), PYTHONIOENCODING="ascii", PYTHONUTF8="0")
    assert done.returncode in (0, 1)
    assert done.stdout.startswith("\\xdcberwachung")
