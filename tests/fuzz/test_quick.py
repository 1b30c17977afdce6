"""A short fuzzing run from fixed seeds; `tests/fuzz/README.md` tells of the long ones."""

from __future__ import annotations

import json
import random
import subprocess
import sys
from collections import Counter
from pathlib import Path
from typing import Any

import pytest
from hypothesis import HealthCheck, given, settings

from tests.fuzz.campaign import case_of
from tests.fuzz.cases import MAIN, Case, written
from tests.fuzz.grammar import NAMED, ROOT, SCHEMA, SECTIONS, description, descriptions
from tests.fuzz.minimise import minimised
from tests.fuzz.mutate_values import mutated
from tests.fuzz.run_case import run_case
from tests.fuzz.trouble import Trouble

CASES = {"grammar": 4, "deep": 2, "text": 16, "nodes": 8, "values": 6, "settings": 20}


@pytest.mark.parametrize("kind", CASES)
def test_cases_of_every_kind_show_no_trouble(kind: str) -> None:
    tally: Counter[str] = Counter()
    found: list[tuple[int, str, str]] = []
    for number in range(CASES[kind]):
        case, choose = case_of(kind, 1, number)
        found += [(number, each.signature, each.story) for each in run_case(case, choose, tally, commands=1)]
    assert found == []
    if kind != "settings":
        assert tally["loaded"] > 0
        assert tally["refused"] > 0 or kind in ("grammar", "deep")


@settings(max_examples=2, deadline=None, suppress_health_check=list(HealthCheck), derandomize=True, database=None)
@given(descriptions())
def test_descriptions_of_the_grammar_show_no_trouble(data: dict[str, Any]) -> None:
    case = Case({MAIN: written(data, as_json=True)}, data)
    assert [each.story for each in run_case(case, random.Random(1), Counter(), commands=1)] == []


def test_the_grammar_makes_rules_judge() -> None:
    """Most descriptions load, and rules pass, fail, ask and leave open."""
    tally: Counter[str] = Counter()
    for number in range(5):
        data = description(random.Random(f"judge/{number}"))
        run_case(Case({MAIN: written(data, as_json=True)}, data), random.Random(1), tally, commands=0)
    assert tally["loaded"] >= 4
    assert all(tally[kind] >= 10 for kind in ("pass", "fail", "open", "review"))


def test_the_grammar_reaches_every_section_and_field() -> None:
    met: set[tuple[str, ...]] = set()
    for number in range(40):
        _keys(description(random.Random(f"fields/{number}")), (), met)
    for section in NAMED:
        fields = SCHEMA["$defs"][SECTIONS[section]["$ref"].rpartition("/")[2]]
        assert {(section, field) for field in fields["properties"]} <= met, section


def _keys(node: Any, path: tuple[str, ...], met: set[tuple[str, ...]]) -> None:
    if isinstance(node, dict):
        for key, child in node.items():
            if len(path) == 2:
                met.add((path[0], key))
            _keys(child, (*path, key), met)


def test_some_wrong_values_must_be_refused() -> None:
    """The mutations know what can only be wrong: otherwise an acceptance in silence would not be noticed."""
    data = description(random.Random("values"))
    reasons = Counter(mutated(random.Random(number), data)[1] for number in range(80))
    assert {
        "a unit of another dimension",
        "a magnitude below zero",
        "not a number",
        "a name of nothing",
    } <= reasons.keys()


def test_what_is_accepted_in_silence_is_trouble() -> None:
    case = Case({MAIN: b"rails: {avdd: {nominal: 1.8 V}}\n"}, None, "something that can only be wrong")
    assert [each.sort for each in run_case(case, random.Random(1), Counter(), commands=0)] == ["accepted"]


def test_a_case_is_made_small() -> None:
    data = description(random.Random("small"))
    data["rails"]["culprit"] = {"nominal": "1 V"}

    def still(case: Case) -> bool:
        return b"culprit" in case.files.get(MAIN, b"")

    smallest = minimised(Case({MAIN: written(data, as_json=False), "base.yaml": b""}, data), still)
    assert smallest.data == {"rails": {"culprit": {}}}
    lines = minimised(Case({MAIN: written(data, as_json=False)}), still)
    assert lines.files[MAIN].strip() == b"culprit"


def test_the_coverage_guided_fuzzer_runs(tmp_path: Path) -> None:
    pytest.importorskip("atheris", reason="coverage-guided fuzzing needs atheris: pip install 'tidegate[fuzz]'")
    options = ["--executions", "1500", "--keep", str(tmp_path)]
    command = [sys.executable, "-m", "tests.fuzz.coverage_guided", "quantity", *options]
    done = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, check=True)
    assert "[quantity]" not in done.stdout
    assert json.loads((tmp_path / "numbers-quantity-1.json").read_text("utf-8"))["cases"] > 0


def test_one_fault_has_one_signature() -> None:
    first, second = (Trouble("KeyError", "ramp", f"KeyError at up_v: '{name}'\nstory {name}") for name in ("a", "b"))
    assert first.signature == second.signature
