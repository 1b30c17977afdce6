"""What the README says is so: its commands, recipes and programs are taken from it and run."""

from __future__ import annotations

import os
import re
import subprocess
import sys
import tomllib
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest
import yaml

ROOT = Path(__file__).resolve().parents[1]
README = (ROOT / "README.md").read_text("utf-8")
FENCE = re.compile(r"^```(\w+)\n(.*?)^```$", re.MULTILINE | re.DOTALL)
BLOCKS = [(language, text) for language, text in FENCE.findall(README)]


def blocks(language: str) -> list[str]:
    return [text for found, text in BLOCKS if found == language]


def block(name: str) -> str:
    """The block whose first line is a comment with a file's name."""
    (found,) = [text for _, text in BLOCKS if text.startswith(f"# {name}\n")]
    return found


@pytest.fixture
def shell(tmp_path: Path) -> Path:
    """A repository with a description, as the README assumes one, and the command on the path."""
    chips = tmp_path / "chips"
    chips.mkdir()
    for source, name in (("sound.yaml", "supervisor.tidegate.yaml"), ("process.yaml", "process.yaml")):
        (chips / name).write_text((ROOT / "examples" / source).read_text("utf-8"), "utf-8")
    (tmp_path / "bin").mkdir()
    program = tmp_path / "bin" / "tidegate"
    program.write_text(f'#!/bin/sh\nexec "{sys.executable}" -m tidegate.lint.cli "$@"\n', "utf-8")
    program.chmod(0o755)
    (tmp_path / "house_rules.py").write_text(block("house_rules.py"), "utf-8")
    run(
        tmp_path,
        "git init -q . && git add chips && git commit -qm first && git update-ref refs/remotes/origin/main HEAD",
    )
    run(tmp_path, "git fetch -q . HEAD")  # what the recipe fetches
    return tmp_path


def run(folder: Path, command: str) -> subprocess.CompletedProcess[str]:
    environment = {
        **os.environ, "PATH": f"{folder / 'bin'}{os.pathsep}{os.environ['PATH']}", "COLUMNS": "80",
        "GIT_AUTHOR_NAME": "test", "GIT_AUTHOR_EMAIL": "test@example.invalid",
        "GIT_COMMITTER_NAME": "test", "GIT_COMMITTER_EMAIL": "test@example.invalid",
    }  # fmt: skip
    return subprocess.run(
        ["bash", "-euo", "pipefail", "-c", command], capture_output=True, text=True, cwd=folder, env=environment,
        check=False,
    )  # fmt: skip


# The two commands at the top install from the network; the CI of the project runs them.
COMMANDS = [line for text in blocks("sh") for line in text.splitlines() if line.startswith("tidegate ")]


def test_every_command_of_the_readme_runs(shell: Path) -> None:
    assert len(COMMANDS) >= 5
    for command in COMMANDS:
        done = run(shell, command)
        assert (done.returncode, done.stderr) == (0, ""), command


def steps(node: Any) -> Iterator[str]:
    """Every command line of a recipe."""
    if isinstance(node, dict):
        for key, child in node.items():
            if key == "run":
                yield from str(child).splitlines()
            elif key == "script":
                yield from child
            else:
                yield from steps(child)
    elif isinstance(node, list):
        for child in node:
            yield from steps(child)


@pytest.mark.parametrize("recipe", [".github/workflows/tidegate.yml", ".gitlab-ci.yml"])
def test_the_commands_of_the_recipes_run(recipe: str, shell: Path) -> None:
    read = yaml.safe_load(block(recipe))
    ours = [line for line in steps(read) if line.startswith("tidegate ")]
    assert len(ours) == 2
    for command in ours:
        done = run(shell, command)
        assert (done.returncode, done.stderr) == (0, ""), command
    made = {path.name for path in shell.glob("tidegate.*")}
    assert {"tidegate.sarif", "tidegate.md"} <= made
    named = re.findall(r"tidegate\.(?:sarif|md|html)\b", block(recipe))
    assert set(named) == made  # what later steps take is what earlier ones wrote


def test_a_recipe_stops_for_what_got_worse(shell: Path) -> None:
    chip = shell / "chips" / "supervisor.tidegate.yaml"
    chip.write_text(chip.read_text("utf-8").replace("amount: {min: 46 mV", "amount: {min: 16 mV"), "utf-8")
    (command,) = [line for line in COMMANDS if line.startswith("tidegate compare")]
    assert run(shell, command).returncode == 1


def test_the_settings_and_waivers_are_such(shell: Path) -> None:
    for name in ("tidegate.settings.yaml", "waivers.yaml"):
        (shell / name).write_text(block(name), "utf-8")
    done = run(shell, "tidegate review --as json chips")
    assert (done.returncode, done.stderr) == (1, "")
    (entry,) = yaml.safe_load(done.stdout)["files"]
    assert entry["settings"]["file"] == "tidegate.settings.yaml"
    said = {judgement["message"] for judgement in entry["judgements"] if judgement["rule"] == "waiver/still_right"}
    covered = "bypass/over_voltage_caution on skip_resets"
    # The example has that waiver itself; the second is one too many.
    assert said == {f"covers {covered}", f"nothing is left to waive: another waiver covers {covered} already"}
    properties = yaml.safe_load((ROOT / "schema" / "settings.schema.json").read_text("utf-8"))["properties"]
    assert set(yaml.safe_load(block("tidegate.settings.yaml"))) == set(properties) - {"packs_installed"}


def test_the_pack_and_its_test_work(shell: Path) -> None:
    (shell / "test_house_rules.py").write_text(block("test_house_rules.py"), "utf-8")
    done = run(shell, f'"{sys.executable}" -m pytest -q -p no:cacheprovider test_house_rules.py')
    assert done.returncode == 0, done.stdout
    assert "2 passed" in done.stdout
    done = run(shell, "tidegate review --every --pack house_rules.py chips")
    assert "answers after" in done.stdout
    done = run(shell, "tidegate rules --pack house_rules.py house/quick_detectors")
    assert "every detector answers within 5 us" in done.stdout


def test_the_entry_point_is_of_our_group() -> None:
    from tidegate.lint.packs import GROUP

    (text,) = blocks("toml")
    assert list(tomllib.loads(text)["project"]["entry-points"]) == [GROUP]


def test_the_hook_is_there() -> None:
    (config,) = [read for text in blocks("yaml") if "repos" in (read := yaml.safe_load(text))]
    offered = yaml.safe_load((ROOT / ".pre-commit-hooks.yaml").read_text("utf-8"))
    assert config["repos"][0]["hooks"] == [{"id": offered[0]["id"]}]


def test_the_program_runs(monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]) -> None:
    (program,) = [text for text in blocks("python") if "load(" in text]
    monkeypatch.chdir(ROOT)
    exec(compile(program, "README.md", "exec"), {})
    assert "pass hysteresis/covers_disturbance uv hysteresis" in capsys.readouterr().out


def test_every_file_that_is_linked_exists() -> None:
    for target in re.findall(r"\]\(([^)#:]+)\)", README):
        assert (ROOT / target).exists(), target


def test_every_command_is_in_the_table() -> None:
    from tidegate.lint.cli import _COMMANDS

    assert [name for name in _COMMANDS if f"| `tidegate {name}" not in README] == []
