"""`tidegate review`: several forms at once, many files, processes beside this one, and the same bytes every time."""

from __future__ import annotations

import json
import os
import pty
import re
import select
import subprocess
import sys
from pathlib import Path

import jsonschema
import pytest

from tests.commands.calling import Done, tidegate

ROOT = Path(__file__).resolve().parents[2]
SOUND = (ROOT / "examples" / "sound.yaml").read_text("utf-8")
PROCESS = (ROOT / "examples" / "process.yaml").read_text("utf-8")
SCHEMA = json.loads((ROOT / "schema" / "report.schema.json").read_text("utf-8"))
ENDINGS = ("txt", "json", "sarif", "md", "html")
COMMAND = (sys.executable, "-m", "tidegate.lint.cli", "review")

SMALL = """\
subsystem: chip NUMBER
rails: {avdd: {nominal: 1.8 V}}
domains: {aon: {rail: avdd, kind: always_on}}
comparators: {uv: {role: under_voltage, watches: avdd, domain: aon, hysteresis: none}}
"""


def review(*arguments: str, cwd: Path, columns: int | None = None) -> Done:
    return tidegate("review", *arguments, cwd=cwd, columns=columns)


def started(*arguments: str, cwd: Path, **env: str) -> subprocess.CompletedProcess[str]:
    """A call in a process of its own."""
    environment = {**os.environ, "COLUMNS": "80", **env}
    done = subprocess.run([*COMMAND, *arguments], capture_output=True, text=True, cwd=cwd, env=environment, check=False)
    assert "Traceback" not in done.stderr, done.stderr
    return done


@pytest.fixture
def many(tmp_path: Path) -> Path:
    """A folder with twenty small descriptions and one that cannot be used."""
    for number in range(20):
        (tmp_path / f"chip{number:02}.tidegate.yaml").write_text(SMALL.replace("NUMBER", str(number)), "utf-8")
    (tmp_path / "chip07.tidegate.yaml").write_text("nonsense: 1\n", "utf-8")
    return tmp_path


@pytest.fixture
def sound(tmp_path: Path) -> Path:
    (tmp_path / "sound.yaml").write_text(SOUND, "utf-8")
    (tmp_path / "process.yaml").write_text(PROCESS, "utf-8")
    return tmp_path


# Several forms at once


def test_every_form_is_saved_beside_the_one_that_is_shown(sound: Path) -> None:
    saves = [word for ending in ENDINGS for word in ("--save", f"report.{ending}")]
    done = review("--as", "json", *saves, "sound.yaml", cwd=sound, columns=200)
    assert done.returncode == 0
    assert (sound / "report.json").read_text("utf-8") == done.stdout
    jsonschema.validate(json.loads(done.stdout), SCHEMA)
    assert (sound / "report.txt").read_text("utf-8") == review("sound.yaml", cwd=sound).stdout  # 80 columns wide
    for form, ending in (("sarif", "sarif"), ("markdown", "md"), ("html", "html")):
        assert (sound / f"report.{ending}").read_text("utf-8") == review("--as", form, "sound.yaml", cwd=sound).stdout
    assert sorted(path.name for path in sound.iterdir() if "report" not in path.name) == ["process.yaml", "sound.yaml"]


def test_a_saved_text_holds_every_description_and_the_summary(many: Path) -> None:
    done = review("--save", "report.txt", ".", cwd=many)
    text = (many / "report.txt").read_text("utf-8")
    assert text.splitlines()[-1] == "20 descriptions: 19 with findings, 1 unusable"
    assert "chip07.tidegate.yaml:1:1: unknown key 'nonsense'" in text
    assert done.stdout.splitlines()[-1] == text.splitlines()[-1]


def test_waived_findings_stay_in_every_form_as_waived(sound: Path) -> None:
    saves = [word for ending in ENDINGS for word in ("--save", f"report.{ending}")]
    assert review(*saves, "sound.yaml", cwd=sound).returncode == 0
    reports = {ending: (sound / f"report.{ending}").read_text("utf-8") for ending in ENDINGS}
    assert "  waived   skip_resets: lifts por_n and core_rst_n past ov" in reports["txt"]
    assert "- **waived** skip\\_resets: lifts por\\_n and core\\_rst\\_n past ov" in reports["md"]
    (waived,) = [j for j in json.loads(reports["json"])["files"][0]["judgements"] if j["waiver"]]
    assert (waived["rule"], waived["subject"]) == ("bypass/over_voltage_caution", "skip_resets")
    results = json.loads(reports["sarif"])["runs"][0]["results"]
    assert [result["ruleId"] for result in results if "suppressions" in result] == ["bypass/over_voltage_caution"]
    assert "clamps the supply at 1.95 V" in reports["html"]


def test_what_cannot_be_saved_is_said_in_a_line(sound: Path) -> None:
    (sound / "folder.json").mkdir()
    for path, reason in (("none/report.json", "No such file or directory"), ("folder.json", "Is a directory")):
        done = review("--save", path, "--save", "other.md", "sound.yaml", cwd=sound)
        assert (done.returncode, done.stderr) == (2, f"{path}: cannot be written ({reason})\n")
        assert done.stdout.startswith("harbour buoy logger")  # what can be shown and saved is
        assert (sound / "other.md").exists()
    done = review("--save", "report.doc", "sound.yaml", cwd=sound)
    assert (done.returncode, done.stdout) == (2, "")
    assert done.stderr == "--save report.doc: the form is told by the ending: .txt, .json, .sarif, .md, .html\n"


@pytest.mark.skipif(not hasattr(os, "geteuid") or os.geteuid() == 0, reason="root may write to any folder")
def test_a_folder_that_cannot_be_written_to(sound: Path) -> None:
    (sound / "locked").mkdir(mode=0o500)
    done = review("--save", "locked/report.json", "sound.yaml", cwd=sound)
    assert (done.returncode, done.stderr) == (2, "locked/report.json: cannot be written (Permission denied)\n")


def test_a_reader_that_leaves_early_keeps_no_report_from_being_saved(many: Path) -> None:
    command = f"{' '.join(COMMAND)} --every --save report.json . | head -n 1"
    done = subprocess.run(["bash", "-c", command], capture_output=True, text=True, cwd=many, check=False)
    assert "Traceback" not in done.stderr
    assert len(json.loads((many / "report.json").read_text("utf-8"))["files"]) == 20


# Many files


def test_findings_come_in_the_order_of_the_files_whatever_the_workers(many: Path) -> None:
    one = review("--as", "json", "--workers", "1", ".", cwd=many)
    three = review("--as", "json", "--workers", "3", ".", cwd=many)
    assert one.returncode == three.returncode == 2
    assert one.stdout == three.stdout
    files = [entry["file"] for entry in json.loads(one.stdout)["files"]]
    assert files == [f"chip{number:02}.tidegate.yaml" for number in range(20)]
    text = review("--workers", "2", ".", cwd=many).stdout
    assert re.findall(r"^chip (\d+) ", text, re.MULTILINE) == [str(n) for n in range(20) if n != 7]
    backwards = [f"chip{number:02}.tidegate.yaml" for number in reversed(range(20))]
    files = json.loads(review("--as", "json", "--workers", "2", *backwards, cwd=many).stdout)["files"]
    assert [entry["file"] for entry in files] == backwards


def test_names_that_mean_nothing_stand_in_the_report(many: Path) -> None:
    done = review("--as", "json", "chip00.tidegate.yaml", "*.none", "./chip00.tidegate.yaml", cwd=many)
    assert done.returncode == 2
    report = json.loads(done.stdout)
    jsonschema.validate(report, SCHEMA)
    assert [(entry["file"], entry["verdict"]) for entry in report["files"]] == [
        ("chip00.tidegate.yaml", "NOT KEPT"), ("*.none", "UNUSABLE"),
    ]  # fmt: skip


@pytest.mark.parametrize("workers", ["0", "-1", "two"])
def test_workers_are_counted(many: Path, workers: str) -> None:
    done = review("--workers", workers, ".", cwd=many)
    assert done.returncode == 2
    assert "--workers" in done.stderr.splitlines()[0]


def test_a_worker_that_dies_is_said_and_loses_nothing_quietly(many: Path) -> None:
    pack = (ROOT / "examples" / "house_rules.py").read_text("utf-8")
    dying = pack.replace("delay_s = case.of(comparator).delay.most()", "__import__('os')._exit(9)")
    (many / "dying.py").write_text(dying, "utf-8")
    done = started("--as", "json", "--workers", "2", "--pack", "dying.py", ".", cwd=many)
    assert (done.returncode, done.stdout) == (2, "")
    assert done.stderr == "a process that judges descriptions died; --workers 1 does without them\n"


# The same bytes


def test_the_same_input_gives_the_same_bytes(many: Path) -> None:
    runs = (
        {"PYTHONHASHSEED": "0", "TZ": "UTC", "LC_ALL": "C"},
        {"PYTHONHASHSEED": "4711", "TZ": "UTC+0", "LC_ALL": "C.UTF-8"},
        {"PYTHONHASHSEED": "12", "TZ": "Europe/London", "LC_ALL": "POSIX", "LANG": "de_DE.UTF-8"},
    )
    for number, environment in enumerate(runs):
        saves = [word for ending in ENDINGS for word in ("--save", f"{number}.{ending}")]
        started(*saves, "--workers", str(number + 1), ".", cwd=many, **environment)
    for ending in ENDINGS:
        first, *others = [(many / f"{number}.{ending}").read_bytes() for number in range(len(runs))]
        assert first
        assert others == [first, first], ending


@pytest.mark.parametrize("form", ["json", "sarif", "markdown", "terminal"])
def test_a_full_report_is_the_same_whatever_the_hash_seed(sound: Path, form: str) -> None:
    one, two = (started("--as", form, "--every", "sound.yaml", cwd=sound, PYTHONHASHSEED=seed) for seed in "19")
    assert one.stdout == two.stdout != ""


# Progress


def on_terminal(*arguments: str, cwd: Path, out_too: bool) -> str:
    """What arrives at a terminal to which the error stream, or the output as well, is connected."""
    master, slave = pty.openpty()
    with subprocess.Popen(
        [*COMMAND, *arguments], cwd=cwd, stderr=slave, stdout=slave if out_too else subprocess.DEVNULL,
        env={**os.environ, "TERM": "xterm", "COLUMNS": "80"},
    ) as process:  # fmt: skip
        os.close(slave)
        seen = b""
        while select.select([master], [], [], 30)[0]:
            try:
                piece = os.read(master, 65536)
            except OSError:  # the other end is closed
                break
            if not piece:
                break
            seen += piece
        process.wait()
    os.close(master)
    return seen.decode("utf-8", "replace")


def test_progress_is_shown_on_a_terminal_and_nowhere_else(many: Path) -> None:
    assert "judged" in on_terminal("--as", "json", ".", cwd=many, out_too=False)
    both = on_terminal("--as", "json", "--save", "x.json", ".", cwd=many, out_too=True)
    assert "judged" in both.partition("{")[0]
    text = on_terminal(".", cwd=many, out_too=True)
    assert "\x1b[?25l" not in text  # text that rolls by is progress enough
    assert "20 descriptions: 19 with findings, 1 unusable" in text
    assert "\x1b" not in review("--as", "json", ".", cwd=many).stderr
    few = on_terminal("--as", "json", "chip00.tidegate.yaml", cwd=many, out_too=False)
    assert few == ""


def test_colour_stays_out_of_what_is_saved(sound: Path) -> None:
    shown = on_terminal("--save", "report.txt", "sound.yaml", cwd=sound, out_too=True)
    assert "\x1b[" in shown
    assert "\x1b" not in (sound / "report.txt").read_text("utf-8")
