"""The same bytes from the same input: whatever the environment, the place, the day, the workers, the order of keys."""

from __future__ import annotations

import getpass
import json
import os
import random
import shutil
import socket
import subprocess
import sys
import tempfile
from collections.abc import Iterator, Mapping
from pathlib import Path
from typing import Any

import pytest

from tests.commands.calling import tidegate
from tidegate.lint.description.yaml_text import read_yaml

ROOT = Path(__file__).resolve().parents[1]
EXAMPLES = ("sound.yaml", "faulty.yaml", "starter.yaml", "process.yaml", "house_rules.py")
WAIVED_UNTIL = "2031-12-31"  # in the sound example

# Every form of every command, on the sound and on the faulty example; WORKERS is put in by the run.
_SAVES = [word for ending in ("txt", "json", "sarif", "md", "html") for word in ("--save", f"all.{ending}")]
CALLS: dict[str, list[str]] = {
    "review": ["review", "--every", "--workers", "WORKERS", *_SAVES, "sound.yaml", "faulty.yaml", "starter.yaml"],
    "pack": ["review", "--pack", "house_rules.py", "--as", "json", "sound.yaml"],
    "rules": ["rules"],
    "rule": ["rules", "hysteresis/covers_disturbance"],
    "rule of a pack": ["rules", "--pack", "house_rules.py", "house/quick_detectors"],
    "compare": ["compare", "sound.yaml", "faulty.yaml"],
    "compare, markdown": ["compare", "sound.yaml", "faulty.yaml", "--as", "markdown"],
    "compare, JSON": ["compare", "sound.yaml", "faulty.yaml", "--as", "json", "--pack", "house_rules.py"],
    "yield": ["place", "sound.yaml", "uv", "--yield", "--samples", "10000"],
    "start": ["start"],
    "schema": ["schema"],
    "completion": ["completion", "bash"],
    "unusable": ["review", "--as", "json", "gone.yaml", "house_rules.py"],
}
for _name, _all_forms in (("sound", True), ("faulty", False)):
    _file = f"{_name}.yaml"
    CALLS |= {
        f"margins {_name}": ["margins", _file],
        f"place {_name}": ["place", _file],
        f"ramp {_name}, JSON": ["ramp", _file, "--as", "json"],
        f"graph {_name}": ["draw", _file, "graph"],
    }
    if _all_forms:
        CALLS |= {
            f"margins {_name}, JSON": ["margins", _file, "--as", "json"],
            f"place {_name}, JSON": ["place", _file, "--as", "json"],
            f"ramp {_name}": ["ramp", _file],
            f"ladder {_name}": ["draw", _file, "ladder"],
            f"timeline {_name}": ["draw", _file, "timeline"],
            f"graph {_name}, DOT": ["draw", _file, "graph", "--as", "dot"],
            f"graph {_name}, GraphML": ["draw", _file, "graph", "--as", "graphml"],
            f"trace {_name}": ["trace", _file, "uv"],
        }

# Calls every one of them in one process, on a day of its own, and keeps what each writes.
DRIVER = """
import contextlib, datetime, json, sys, time

class Day(datetime.date):
    @classmethod
    def today(cls):
        return datetime.date.fromisoformat(sys.argv[3])

datetime.date = Day
clock, shift = time.time, float(sys.argv[4])
time.time = lambda: clock() + shift
from tidegate.lint.cli import main

for name, words in json.loads(sys.argv[1]).items():
    words = [sys.argv[2] if word == "WORKERS" else word for word in words]
    with open(f"{name}.out", "w", encoding="utf-8") as out, open(f"{name}.err", "w", encoding="utf-8") as err:
        with contextlib.redirect_stdout(out), contextlib.redirect_stderr(err):
            status = main(words)
        out.write(f"exit status {status}")
"""
# Options of Python, workers, day, shift of the clock in s, environment; the others are held against the first.
RUNS: dict[str, tuple[list[str], str, str, str, Mapping[str, str]]] = {
    "first": ([], "1", "2026-01-01", "0", {"PYTHONHASHSEED": "0", "TZ": "UTC", "LC_ALL": "C.UTF-8"}),
    "optimised": (
        ["-O"], "3", "2029-12-31", "1e8",
        {"PYTHONHASHSEED": "1", "TZ": "Pacific/Kiritimati", "LC_ALL": "C", "COLUMNS": "33", "TERM": "xterm-256color",
         "LINES": "5", "FORCE_COLOR": "1", "CLICOLOR_FORCE": "1", "COLORTERM": "truecolor"},
    ),
    "without documentation": (
        ["-OO"], "2", "2031-12-31", "-1e8",
        {"PYTHONHASHSEED": "4711", "TZ": "America/Los_Angeles", "LC_ALL": "POSIX", "LANGUAGE": "de", "COLUMNS": "200",
         "TERM": "dumb", "NO_COLOR": "1"},
    ),
}  # fmt: skip
_LEFT_OUT = {"COLUMNS", "LINES", "TERM", "NO_COLOR", "LC_ALL", "LANG", "TZ", "PYTHONHASHSEED"}


@pytest.fixture(scope="module")
def outputs(tmp_path_factory: pytest.TempPathFactory) -> dict[str, dict[str, bytes]]:
    """What every run writes, by run and file; each works in a folder of its own, at another depth."""
    top = tmp_path_factory.mktemp("runs")
    started = []
    for number, (name, (flags, workers, day, shift, environment)) in enumerate(RUNS.items()):
        folder = top.joinpath(*["deeper"] * number, "chips")
        folder.mkdir(parents=True)
        for example in EXAMPLES:
            shutil.copy(ROOT / "examples" / example, folder)
        command = [sys.executable, *flags, "-c", DRIVER, json.dumps(CALLS), workers, day, shift]
        left = {key: value for key, value in os.environ.items() if key not in _LEFT_OUT}
        started.append((name, folder, subprocess.Popen(command, cwd=folder, env={**left, **environment})))
    found = {}
    for name, folder, process in started:
        assert process.wait(timeout=600) == 0, name
        # Python may leave its compiled form of the rule pack in a folder beside it.
        written = (path for path in folder.iterdir() if path.is_file() and path.name not in EXAMPLES)
        found[name] = {path.name: path.read_bytes() for path in written}
    return found


@pytest.mark.parametrize("run", [name for name in RUNS if name != "first"])
def test_every_form_is_the_same_in_every_environment(run: str, outputs: dict[str, dict[str, bytes]]) -> None:
    first, other = outputs["first"], outputs[run]
    assert set(other) == set(first)
    assert {name: content for name, content in other.items() if name.endswith(".err") and content} == {}
    assert [name for name in first if other[name] != first[name]] == []


def test_the_forms_are_all_there(outputs: dict[str, dict[str, bytes]]) -> None:
    written = outputs["first"]
    assert len(written) == 2 * len(CALLS) + 5
    for name, content in written.items():
        assert bool(content) == (not name.endswith(".err")), name
    statuses = {name.removesuffix(".out"): content[-1:] for name, content in written.items() if name.endswith(".out")}
    assert {name for name, status in statuses.items() if status == b"2"} == {"unusable"}


def test_no_report_tells_of_the_machine(outputs: dict[str, dict[str, bytes]], tmp_path: Path) -> None:
    """Names as they were given, and nothing of folders, users and hosts."""
    telling = {
        str(tmp_path.parent),
        str(ROOT),
        str(Path.home()),
        sys.prefix,
        socket.gethostname(),
        f"{tempfile.gettempdir()}/",
    }
    telling |= {getpass.getuser()} - {"root", "test", "user"}  # words of other meanings
    telling = {word for word in telling if len(word) > 3}
    assert telling
    for name, content in outputs["first"].items():
        found = [word for word in telling if word.encode() in content]
        assert found == [], name


def test_a_comparison_of_revisions_tells_nothing_of_where_they_were_unpacked(tmp_path: Path) -> None:
    chips = tmp_path / "chips"
    chips.mkdir()
    for example in EXAMPLES:
        shutil.copy(ROOT / "examples" / example, chips)
    (tmp_path / "own.yaml").write_text("levels: {hysteresis: note}\nwaivers: [accepted.yaml]\n", "utf-8")
    (tmp_path / "accepted.yaml").write_text("waivers: []\n", "utf-8")
    who = ("-c", "user.name=a", "-c", "user.email=a@example.invalid")
    for words in (("init", "-q"), ("add", "."), (*who, "commit", "-q", "-m", "first")):
        subprocess.run(["git", *words], cwd=chips, check=True)
    for form in ("terminal", "markdown", "json"):
        more = ("--as", form, "--settings", "../own.yaml", "--pack", "house_rules.py")
        done = tidegate("compare", "HEAD:sound.yaml", "HEAD:faulty.yaml", *more, cwd=chips)
        assert (done.returncode, done.stderr) == (1, "")
        assert "../own.yaml" in done.stdout
        assert [word for word in (str(tmp_path), tempfile.gettempdir(), "tidegate-") if word in done.stdout] == []


def test_nothing_but_waivers_depends_on_the_day() -> None:
    def judged(day: str) -> list[dict[str, Any]]:
        done = tidegate("review", "--as", "json", "--today", day, "examples/sound.yaml")
        judgements: list[dict[str, Any]] = json.loads(done.stdout)["files"][0]["judgements"]
        return judgements

    before, last_day, after = judged("2001-01-01"), judged(WAIVED_UNTIL), judged("2032-01-01")
    assert before == last_day
    assert len(before) == len(after)
    changed = [(old, new) for old, new in zip(before, after, strict=True) if old != new]
    assert [(new["rule"], new["kind"], new["waiver"]) for _, new in changed] == [
        ("bypass/over_voltage_caution", "review", None), ("waiver/still_right", "fail", None),
    ]  # fmt: skip
    assert WAIVED_UNTIL in changed[1][1]["message"]


@pytest.mark.parametrize("command", ["review", "margins", "draw", "compare"])
def test_every_command_that_judges_can_be_told_the_day(command: str) -> None:
    more = {"draw": ["graph"], "compare": ["examples/sound.yaml"]}.get(command, [])
    outputs = {tidegate(command, "examples/sound.yaml", *more, "--today", day) for day in ("2031-12-31", "2026-01-01")}
    assert len(outputs) == 1
    refused = tidegate(command, "examples/sound.yaml", *more, "--today", "2031-02-30")
    assert refused.returncode == 2
    assert "2031-02-30 is no day; write year-month-day" in refused.stderr


# The order in which things are written, and named


def _entries(*files: str, cwd: Path = ROOT) -> dict[str, Any]:
    report = json.loads(tidegate("review", "--as", "json", "--today", "2026-01-01", *files, cwd=cwd).stdout)
    return {entry["file"]: entry for entry in report["files"]}


def test_the_order_of_files_is_that_of_the_command_line_and_changes_nothing_else() -> None:
    files = [f"examples/{name}" for name in ("sound.yaml", "faulty.yaml", "starter.yaml")]
    one, other = _entries(*files), _entries(*reversed(files))
    assert (list(one), list(other)) == (files, files[::-1])
    assert one == other


def _shuffled(value: Any, choose: random.Random) -> Any:
    """The same data with the keys of every mapping in another order; the order of a list has a meaning."""
    if isinstance(value, dict):
        keys = list(value)
        choose.shuffle(keys)
        return {key: _shuffled(value[key], choose) for key in keys}
    return [_shuffled(inner, choose) for inner in value] if isinstance(value, list) else value


_SECTIONS = (
    "rails", "domains", "references", "biases", "comparators", "output_stages", "resets", "loads", "bypasses",
    "neighbours",
)  # fmt: skip


def _without_places(judgements: list[dict[str, Any]]) -> Iterator[dict[str, Any]]:
    for judgement in judgements:
        yield {key: value for key, value in judgement.items() if key != "place"}


@pytest.mark.parametrize("name", ["sound", "faulty"])
def test_the_order_of_sections_and_facts_changes_nothing(name: str, tmp_path: Path) -> None:
    """Sections are judged in the order in which the supply meets them, whatever their order in the file."""
    file = f"{name}.yaml"
    shutil.copy(ROOT / "examples" / "process.yaml", tmp_path)
    data = dict(read_yaml(file, (ROOT / "examples" / file).read_bytes()).data)
    (tmp_path / file).write_text(json.dumps(data), "utf-8")
    first = _entries(file, cwd=tmp_path)[file]
    choose = random.Random(name)
    for _ in range(2):
        sections = list(data)
        choose.shuffle(sections)
        shuffled = {section: _facts_shuffled(data[section], section, choose) for section in sections}
        (tmp_path / file).write_text(json.dumps(shuffled), "utf-8")
        other = _entries(file, cwd=tmp_path)[file]
        assert list(_without_places(other["judgements"])) == list(_without_places(first["judgements"]))
        assert other["counts"] == first["counts"]


def _facts_shuffled(section: Any, name: str, choose: random.Random) -> Any:
    if name in _SECTIONS:  # elements stay in their order
        return {element: _ordered_codes(facts, choose) for element, facts in section.items()}
    return _shuffled(section, choose) if name in ("conditions", "process") else section


def _ordered_codes(facts: Any, choose: random.Random) -> Any:
    kept = {key: facts[key] for key in ("codes", "errors") if key in facts}  # named in the file's order
    return {key: kept.get(key, value) for key, value in _shuffled(facts, choose).items()}


# Rules that judge what several elements do together, and say it at the first of them in the order of the description.
_OF_SEVERAL = {
    "coupling/ring",
    "self_bias/bias_loop_starts",
    "self_bias/stage_loop_starts",
    "self_bias/load_loop_starts",
}


@pytest.mark.parametrize("name", ["sound", "faulty"])
def test_the_order_of_elements_changes_no_judgement(name: str, tmp_path: Path) -> None:
    """It shows in a report: elements of a section come, and are listed in a sentence, in the order of the file.

    Of what is the same for several elements, the first one is named; a ring is judged at its first element.
    """
    file = f"{name}.yaml"
    shutil.copy(ROOT / "examples" / "process.yaml", tmp_path)
    data = dict(read_yaml(file, (ROOT / "examples" / file).read_bytes()).data)
    (tmp_path / file).write_text(json.dumps(data), "utf-8")
    first = _entries(file, cwd=tmp_path)[file]
    choose = random.Random(name)
    for _ in range(2):
        (tmp_path / file).write_text(json.dumps(_shuffled(data, choose)), "utf-8")
        other = _entries(file, cwd=tmp_path)[file]
        assert (other["counts"], other["verdict"]) == (first["counts"], first["verdict"])
        assert _outcomes(other) == _outcomes(first)


def _outcomes(entry: dict[str, Any]) -> list[tuple[str, ...]]:
    """What was judged, in an order of its own: rule and element, kind and level, numbers, missing facts, waiver."""
    return sorted(
        (
            judgement["rule"], "" if judgement["rule"] in _OF_SEVERAL else judgement["subject"], judgement["kind"],
            judgement["level"], *(_number(judgement[which]) for which in ("need", "have", "margin")),
            *sorted(judgement["missing"]), str(judgement["waiver"]),
        )
        for judgement in entry["judgements"]
    )  # fmt: skip


def _number(number: dict[str, Any] | None) -> str:
    """A number less the last of its digits: a sum in another order rounds in another way."""
    return "" if number is None or number["value"] is None else f"{number['value']:.10g}"
