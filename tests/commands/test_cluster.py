"""`tidegate review --on`: a real Dask cluster of two worker processes, one of them killed while it works."""

from __future__ import annotations

import json
import os
import signal
import threading
import time
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

from tests.commands.calling import tidegate

distributed: Any = pytest.importorskip("distributed", reason="Dask (distributed) is not installed")

DESCRIPTION = """\
subsystem: chip NUMBER
rails: {avdd: {nominal: 1.8 V}}
domains: {aon: {rail: avdd, kind: always_on}}
comparators: {uv: {role: under_voltage, watches: avdd, domain: aon, hysteresis: none}}
"""
# A rule that gives the test time to kill a worker, and tells which processes worked.
SLOW = """
import os, time
from tidegate.lint.judgement import Level
from tidegate.lint.rule import Example, rule

@rule(
    "slow/step", title="takes its time", level=Level.NOTE, applies_to="comparators", proves="Nothing.",
    facts=("comparators",), mend="none", sources=("invented",), example=Example(fails="rails: {}", holds="rails: {}"),
)
def step(comparator, case):
    open(os.path.join(FOLDER, f"worked-{os.getpid()}"), "a").write("x")
    time.sleep(0.15)
    return case.passes("well")

RULES = (step,)
"""
FILES = 40


@pytest.fixture(scope="module")
def cluster() -> Iterator[Any]:
    with distributed.LocalCluster(
        n_workers=2, threads_per_worker=1, processes=True, dashboard_address=None, silence_logs=50
    ) as made:
        yield made


@pytest.fixture
def chips(tmp_path: Path) -> Path:
    for number in range(FILES):
        text = DESCRIPTION.replace("NUMBER", str(number))
        (tmp_path / f"chip{number:02}.tidegate.yaml").write_text(text, "utf-8")
    (tmp_path / "slow.py").write_text(SLOW.replace("FOLDER", repr(str(tmp_path))), "utf-8")
    return tmp_path


def workers_seen(folder: Path) -> set[int]:
    return {int(path.name.partition("-")[2]) for path in folder.glob("worked-*")}


def test_a_worker_is_killed_and_nothing_is_lost(cluster: Any, chips: Path) -> None:
    here = tidegate("review", "--as", "json", "--workers", "1", ".", cwd=chips)
    killed: list[int] = []

    def kill_one() -> None:
        deadline = time.monotonic() + 30
        while len(workers_seen(chips)) < 2 and time.monotonic() < deadline:
            time.sleep(0.02)
        killed.append(min(workers_seen(chips)))
        os.kill(killed[0], signal.SIGKILL)

    killer = threading.Thread(target=kill_one)
    killer.start()
    there = tidegate("review", "--as", "json", "--on", cluster.scheduler_address, "--pack", "slow.py", ".", cwd=chips)
    killer.join()
    assert (there.returncode, there.stderr) == (here.returncode, "")
    files = json.loads(there.stdout)["files"]
    assert [entry["file"] for entry in files] == [f"chip{number:02}.tidegate.yaml" for number in range(FILES)]
    assert len(killed) == 1
    assert killed[0] in workers_seen(chips)  # it had worked
    for entry, alone in zip(files, json.loads(here.stdout)["files"], strict=True):
        slow = [judgement for judgement in entry["judgements"] if judgement["rule"] == "slow/step"]
        assert [judgement["kind"] for judgement in slow] == ["pass"]
        rest = [judgement for judgement in entry["judgements"] if judgement["rule"] != "slow/step"]
        assert rest == alone["judgements"]


def test_workers_read_settings_and_packs_afresh_in_every_run(cluster: Any, chips: Path) -> None:
    settings = chips / "tidegate.settings.yaml"
    for left_out in ("hysteresis", "coupling"):
        settings.write_text(f"leave_out: [{left_out}]\n", "utf-8")
        done = tidegate("review", "--as", "json", "--on", cluster.scheduler_address, "chip00.tidegate.yaml", cwd=chips)
        (entry,) = json.loads(done.stdout)["files"]
        assert entry["settings"]["leave_out"] == [left_out]
        assert not [judgement for judgement in entry["judgements"] if judgement["rule"].startswith(f"{left_out}/")]


def test_a_rule_that_does_not_end_is_interrupted_on_a_worker_too(cluster: Any, chips: Path) -> None:
    pack = (chips / "slow.py").read_text("utf-8").replace("time.sleep(0.15)", "while True: case = case")
    (chips / "endless.py").write_text(pack, "utf-8")
    done = tidegate(
        "review", "--as", "json", "--on", cluster.scheduler_address, "--pack", "endless.py", "chip00.tidegate.yaml",
        cwd=chips,
    )  # fmt: skip
    assert done.returncode == 3
    (fault,) = json.loads(done.stdout)["files"][0]["rule_faults"]
    assert fault["error"] == "TimeLimitError: slow/step took more than 5 s"


@pytest.mark.parametrize("address", ["nonsense://x", "tcp://127.0.0.1:1"])
def test_no_scheduler_answers(chips: Path, address: str, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("tidegate.lint.commands.review._MOST_CONNECTING_S", 1)
    done = tidegate("review", "--on", address, ".", cwd=chips)
    assert (done.returncode, done.stdout) == (2, "")
    assert done.stderr.startswith(f"--on {address}: no scheduler answers (")
    assert len(done.stderr.splitlines()) == 1
