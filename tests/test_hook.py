"""The hook, run by the real pre-commit program against this checkout."""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]


def _git(*arguments: str, cwd: Path) -> str:
    identity = ["-c", "user.name=test", "-c", "user.email=test@example.invalid"]
    done = subprocess.run(["git", *identity, *arguments], cwd=cwd, capture_output=True, text=True, check=True)
    return done.stdout.strip()


@pytest.fixture(scope="module")
def hook(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """This checkout, as a repository of its own that pre-commit can clone."""
    if shutil.which("git") is None:
        pytest.skip("git is not installed")
    copy = tmp_path_factory.mktemp("hook") / "tidegate"
    ignored = shutil.ignore_patterns(
        ".git", ".venv", "build", "*.egg-info", "__pycache__", ".*_cache", "tests", ".coverage*"
    )
    shutil.copytree(ROOT, copy, ignore=ignored)
    _git("init", "--quiet", cwd=copy)
    _git("add", "--all", cwd=copy)
    _git("commit", "--quiet", "--message", "hook", cwd=copy)
    return copy


def test_the_hook_judges_the_changed_descriptions_only(hook: Path, tmp_path: Path) -> None:
    user = tmp_path / "chip"
    user.mkdir()
    _git("init", "--quiet", cwd=user)
    (user / "process.yaml").write_text((ROOT / "examples" / "process.yaml").read_text("utf-8"), "utf-8")
    sound = (ROOT / "examples" / "sound.yaml").read_text("utf-8")
    (user / "supervisor.tidegate.yaml").write_text(sound, "utf-8")
    (user / "old.tidegate.yaml").write_text("nonsense: true\n", "utf-8")
    (user / ".pre-commit-config.yaml").write_text(
        f"repos:\n  - repo: {hook}\n    rev: {_git('rev-parse', 'HEAD', cwd=hook)}\n    hooks: [{{id: tidegate}}]\n",
        "utf-8",
    )
    _git("add", "--all", cwd=user)
    _git("commit", "--quiet", "--message", "first", cwd=user)

    assert _pre_commit(user, tmp_path).returncode == 0  # nothing has changed

    (user / "supervisor.tidegate.yaml").write_text(sound.replace("revision: B3", "revision: B4"), "utf-8")
    _git("add", "--all", cwd=user)
    done = _pre_commit(user, tmp_path)
    assert done.returncode == 0, done.stdout + done.stderr
    assert "Passed" in done.stdout

    worse = sound.replace(
        "amount: {min: 46 mV, typ: 50 mV, max: 54 mV}", "amount: {min: 16 mV, typ: 20 mV, max: 54 mV}"
    )
    (user / "supervisor.tidegate.yaml").write_text(worse, "utf-8")
    _git("add", "--all", cwd=user)
    done = _pre_commit(user, tmp_path)
    assert done.returncode == 1
    assert "hysteresis 16 mV, at least" in done.stdout
    assert "old.tidegate.yaml" not in done.stdout


def _pre_commit(user: Path, tmp_path: Path) -> subprocess.CompletedProcess[str]:
    environment = {**os.environ, "PRE_COMMIT_HOME": str(tmp_path / "cache"), "COLUMNS": "80"}
    command = [sys.executable, "-m", "pre_commit", "run", "tidegate"]
    return subprocess.run(command, cwd=user, capture_output=True, text=True, env=environment, check=False)
