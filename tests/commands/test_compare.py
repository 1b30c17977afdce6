"""`tidegate compare`: exit statuses, forms, git revisions with all that belongs to them, and a ratchet."""

from __future__ import annotations

import json
import re
import shutil
import subprocess
from pathlib import Path

import jsonschema
import pytest

from tests.commands.calling import tidegate

ROOT = Path(__file__).resolve().parents[2]
SOUND = (ROOT / "examples" / "sound.yaml").read_text("utf-8")
PROCESS = (ROOT / "examples" / "process.yaml").read_text("utf-8")
HOUSE = (ROOT / "examples" / "house_rules.py").read_text("utf-8")
WORSE = ("amount: {min: 46 mV, typ: 50 mV, max: 54 mV}", "amount: {min: 16 mV, typ: 20 mV, max: 54 mV}")
SCHEMA = json.loads((ROOT / "schema" / "comparison.schema.json").read_text("utf-8"))


@pytest.fixture
def pair(tmp_path: Path) -> Path:
    (tmp_path / "process.yaml").write_text(PROCESS, "utf-8")
    (tmp_path / "old.yaml").write_text(SOUND, "utf-8")
    (tmp_path / "new.yaml").write_text(SOUND.replace(*WORSE), "utf-8")
    return tmp_path


def test_exit_status_and_text(pair: Path) -> None:
    assert tidegate("compare", "old.yaml", "old.yaml", cwd=pair).stdout.splitlines()[1].startswith("NOTHING CHANGED")
    worse = tidegate("compare", "old.yaml", "new.yaml", cwd=pair)
    assert worse.returncode == 1
    assert worse.stdout.splitlines()[1].startswith("WORSE   2 facts and ")
    assert re.search(r"pass -> fail, margin \+12\.98 mV( or more)? -> -1\d\.\d\d mV", worse.stdout)
    better = tidegate("compare", "new.yaml", "old.yaml", cwd=pair)
    assert (better.returncode, better.stdout.splitlines()[1][:17]) == (0, "NOTHING GOT WORSE")
    assert all(len(line) <= 80 for line in worse.stdout.splitlines())


@pytest.mark.parametrize(
    ("arguments", "said"),
    [
        (["old.yaml", "none.yaml"], "none.yaml: cannot be read (No such file or directory); "),
        (["HEAD:old.yaml", "new.yaml"], "HEAD:old.yaml: git has no such revision or file ("),
        (["old.yaml", "new.yaml", "--pack", "none.py"], "new.yaml: --pack: rule pack none.py: no such file; "),
        (["old.yaml", "new.yaml", "--settings", "none.yaml"], "none.yaml: cannot be read ("),
    ],
)
def test_what_cannot_be_compared(pair: Path, arguments: list[str], said: str) -> None:
    done = tidegate("compare", *arguments, cwd=pair)
    assert (done.returncode, done.stdout) == (2, "")
    assert done.stderr.startswith(said)


def test_a_rule_that_fails_itself_is_named(pair: Path) -> None:
    (pair / "bad.py").write_text(HOUSE.replace("delay_s = case.of(comparator).delay.most()", "1 / 0"), "utf-8")
    done = tidegate("compare", "old.yaml", "new.yaml", "--pack", "bad.py", cwd=pair)
    assert done.returncode == 3
    assert "rule house/quick_detectors failed on uv: ZeroDivisionError: division by zero\n" in done.stderr


def test_json_keeps_its_schema(pair: Path) -> None:
    jsonschema.Draft202012Validator.check_schema(SCHEMA)
    report = json.loads(tidegate("compare", "--as", "json", "old.yaml", "new.yaml", cwd=pair).stdout)
    jsonschema.validate(report, SCHEMA)
    assert [(fact["path"], fact["old"], fact["new"]) for fact in report["facts"]] == [
        ("comparators.uv.hysteresis.amount.min", "46 mV", "16 mV"),
        ("comparators.uv.hysteresis.amount.typ", "50 mV", "20 mV"),
    ]
    first = report["judgements"][0]
    assert (first["harm"], first["old"]["kind"], first["new"]["kind"]) == ("worse", "pass", "fail")
    assert first["new"]["margin"]["unit"] == "V"


def test_markdown(pair: Path) -> None:
    text = tidegate("compare", "--as", "markdown", "old.yaml", "new.yaml", cwd=pair).stdout
    assert text.startswith("### `old.yaml` to `new.yaml`: WORSE\n\n**worse**\n\n| element | rule | change |\n")
    assert "- `comparators.uv.hysteresis.amount.min`: 46 mV -\\> 16 mV" in text


# Revisions


def git(*arguments: str, cwd: Path) -> str:
    identity = ["-c", "user.name=test", "-c", "user.email=test@example.invalid"]
    done = subprocess.run(["git", *identity, *arguments], cwd=cwd, capture_output=True, text=True, check=True)
    return done.stdout.strip()


@pytest.fixture
def repository(tmp_path: Path) -> Path:
    """A description that includes a file, settings two folders above it, waivers and a rule pack they name."""
    if shutil.which("git") is None:
        pytest.skip("git is not installed")
    root = tmp_path / "repo"
    for name, text in (
        ("chips/a/supervisor.yaml", SOUND.replace("[process.yaml]", "[data/process.yaml]")),
        ("chips/a/data/process.yaml", PROCESS),
        ("tidegate.settings.yaml", "packs: [house/rules.py]\nwaivers: [agreed.yaml]\nleave_out: [electromigration]\n"),
        ("agreed.yaml", "waivers: []\n"),
        ("house/rules.py", HOUSE),
        ("elsewhere/large.bin", "x" * 100_000),
    ):
        (root / name).parent.mkdir(parents=True, exist_ok=True)
        (root / name).write_text(text, "utf-8")
    git("init", "--quiet", cwd=root)
    git("add", "--all", cwd=root)
    git("commit", "--quiet", "--message", "one", cwd=root)
    text = (root / "chips/a/supervisor.yaml").read_text("utf-8")
    (root / "chips/a/supervisor.yaml").write_text(text.replace(*WORSE), "utf-8")
    return root


SETTINGS = (
    "settings: tidegate.settings.yaml; left out electromigration; rule packs house/rules.py; waiver files agreed.yaml"
)


def test_a_revision_and_the_file_as_it_is(repository: Path) -> None:
    done = tidegate("compare", "HEAD:chips/a/supervisor.yaml", "chips/a/supervisor.yaml", cwd=repository)
    assert done.returncode == 1, done.stderr
    assert "hysteresis/covers_disturbance" in done.stdout
    assert " ".join(done.stdout.split()).count(SETTINGS) == 1


def test_two_revisions_are_judged_by_what_stood_there(repository: Path) -> None:
    git("add", "--all", cwd=repository)
    git("commit", "--quiet", "--message", "two", cwd=repository)
    shutil.rmtree(repository / "house")
    (repository / "tidegate.settings.yaml").write_text("fail_at: nonsense\n", "utf-8")  # not what is compared
    name = "chips/a/supervisor.yaml"
    done = tidegate("compare", "--as", "json", f"HEAD~1:{name}", f"HEAD:{name}", cwd=repository)
    assert done.returncode == 1, done.stderr
    report = json.loads(done.stdout)
    jsonschema.validate(report, SCHEMA)
    assert report["settings"]["file"] == "tidegate.settings.yaml"
    assert report["settings"]["packs"] == ["house/rules.py"]
    assert (report["old"], report["new"]) == (f"HEAD~1:{name}", f"HEAD:{name}")


def test_paths_from_the_folder_and_around(repository: Path) -> None:
    folder = repository / "chips" / "a"
    for old in ("HEAD:./supervisor.yaml", "HEAD:../a/supervisor.yaml", "HEAD:chips/a/supervisor.yaml"):
        assert tidegate("compare", old, "supervisor.yaml", cwd=folder).returncode == 1


@pytest.mark.parametrize(
    ("name", "reason"),
    [
        ("HEAD:chips/a/supervisr.yaml", "path 'chips/a/supervisr.yaml' does not exist in 'HEAD'"),
        ("HEAD:supervisor.yaml", "path 'supervisor.yaml' does not exist in 'HEAD'"),
        ("HEADD:chips/a/supervisor.yaml", "nothing is called so"),
        ("--output=x:chips/a/supervisor.yaml", "nothing is called so"),
    ],
)
def test_what_git_does_not_have(repository: Path, name: str, reason: str) -> None:
    done = tidegate("compare", "--", name, "chips/a/supervisor.yaml", cwd=repository)
    assert done.returncode == 2
    assert done.stderr.startswith(f"{name}: git has no such revision or file ({reason}")
    assert not (repository / "x").exists()


def test_forty_old_findings_pass_and_the_forty_first_stops(tmp_path: Path) -> None:
    (tmp_path / "old.yaml").write_text(chip(40), "utf-8")
    (tmp_path / "same.yaml").write_text("# edited elsewhere\n" + chip(40).replace("x-owner: a", "x-owner: b"), "utf-8")
    (tmp_path / "new.yaml").write_text(chip(41), "utf-8")
    review = json.loads(tidegate("review", "--as", "json", "old.yaml", cwd=tmp_path).stdout)["files"][0]
    fails = {j["subject"] for j in review["judgements"] if (j["rule"], j["kind"]) == ("bypass/readable", "fail")}
    assert len(fails) == 40
    assert tidegate("review", "old.yaml", cwd=tmp_path).returncode == 1
    assert tidegate("compare", "old.yaml", "same.yaml", cwd=tmp_path).returncode == 0
    done = tidegate("compare", "old.yaml", "new.yaml", cwd=tmp_path)
    assert done.returncode == 1
    assert "  skip40, bypass/readable\n      pass -> fail" in done.stdout
    assert "skip39" not in done.stdout
    assert tidegate("compare", "new.yaml", "old.yaml", cwd=tmp_path).returncode == 0


def chip(unreadable: int) -> str:
    """A description with 41 overrides, so many of which cannot be read back."""
    lines = ["x-owner: a", "rails: {avdd: {nominal: 1.8 V}}", "domains: {aon: {rail: avdd, kind: always_on}}"]
    lines += ["comparators: {uv: {role: under_voltage, watches: avdd, domain: aon}}", "bypasses:"]
    lines += [
        f"  skip{n:02}: {{overrides: uv, default: inactive, readable: {'false' if n < unreadable else 'true'}}}"
        for n in range(41)
    ]
    return "\n".join(lines) + "\n"
