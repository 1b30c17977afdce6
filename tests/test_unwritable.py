"""Streams that are closed, full or left, files that cannot be written or read: one sentence, the right exit status.

An old report stays whole, and no draft of a new one is left.
"""

from __future__ import annotations

import contextlib
import errno
import io
import json
import os
import shutil
import stat
import subprocess
import sys
import threading
from collections.abc import Iterator, Sequence
from pathlib import Path
from typing import IO

import pytest

from tests.commands.calling import Done, tidegate
from tidegate.lint.cli import main

SMALL = Path(__file__).with_name("reports") / "drawing" / "small.yaml"
COMMAND = (sys.executable, "-m", "tidegate.lint.cli")
FULL = Path("/dev/full")
needs_full = pytest.mark.skipif(not FULL.exists(), reason="there is no /dev/full on this system")

# Every command, and its exit status where all can be written (README): small.yaml has findings, for it is incomplete.
CALLS: dict[str, tuple[Sequence[str], int]] = {
    "review": (("review", "small.yaml"), 1),
    "review, as JSON": (("review", "--as", "json", "small.yaml"), 1),
    "margins": (("margins", "small.yaml"), 0),
    "place": (("place", "small.yaml", "uv"), 0),
    "ramp": (("ramp", "small.yaml"), 0),
    "rules": (("rules",), 0),
    "draw": (("draw", "small.yaml", "graph"), 0),
    "trace": (("trace", "small.yaml", "uv"), 0),
    "start": (("start",), 0),
    "compare": (("compare", "small.yaml", "small.yaml"), 0),
    "schema": (("schema",), 0),
    "completion": (("completion", "bash"), 0),
    "help": (("--help",), 0),
}
OLD = '{"the report": "of yesterday"}\n'


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    """A folder with a small description and the report of yesterday."""
    shutil.copy(SMALL, tmp_path)
    (tmp_path / "report.json").write_text(OLD, "utf-8")
    return tmp_path


def nothing_happened(folder: Path) -> None:
    assert (folder / "report.json").read_text("utf-8") == OLD
    assert [path.name for path in folder.iterdir() if path.name.startswith(".")] == []


def started(arguments: Sequence[str], folder: Path, *, streams: str = "", limits: str = "") -> subprocess.Popen[str]:
    """A process of its own; a shell opens and closes its streams, and sets limits, as it is told to."""
    environment = {name: value for name, value in os.environ.items() if name != "PYTHONUNBUFFERED"}
    command = ["sh", "-c", f'{limits}\nexec "$@" {streams}', "sh", *COMMAND, *arguments]
    return subprocess.Popen(
        command, cwd=folder, stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True, env=environment
    )


def ended(process: subprocess.Popen[str]) -> Done:
    out, err = process.communicate(timeout=60)
    return Done(process.returncode, out or "", err)


# The output


def into(stream: IO[str], arguments: Sequence[str], folder: Path) -> Done:
    """Call the command line in this process, with an output that is a file."""
    err = io.StringIO()
    with contextlib.chdir(folder), contextlib.redirect_stdout(stream), contextlib.redirect_stderr(err):
        status = main(arguments)
    return Done(status, "", err.getvalue())


@needs_full
@pytest.mark.parametrize("call", CALLS)
def test_a_full_disk_under_the_output(folder: Path, call: str) -> None:
    with FULL.open("w", encoding="utf-8") as full:
        done = into(full, CALLS[call][0], folder)
    assert done == Done(2, "", "tidegate: the output cannot be written (No space left on device)\n")


@pytest.mark.parametrize("call", CALLS)
def test_a_reader_that_has_gone_changes_nothing(folder: Path, call: str) -> None:
    """As with `| head`: the exit status says what was judged, so that `set -o pipefail` can rest on it."""
    arguments, status = CALLS[call]
    reader, writer = os.pipe()
    os.close(reader)
    with os.fdopen(writer, "w", encoding="utf-8") as left:
        assert into(left, arguments, folder) == Done(status, "", "")


@needs_full
def test_the_same_in_processes_of_their_own(folder: Path) -> None:
    """Where Python itself, at the end, would write what is left over once more, and complain."""
    full = [
        started(CALLS[call][0], folder, streams=">/dev/full", limits=f"export PYTHONUNBUFFERED={unbuffered}")
        for call, unbuffered in (("review", ""), ("help", ""), ("help", "1"))
    ]
    for run in full:
        assert ended(run) == Done(2, "", "tidegate: the output cannot be written (No space left on device)\n")
    left = subprocess.run(
        ["bash", "-c", '"$@" | true; exit ${PIPESTATUS[0]}', "bash", *COMMAND, *CALLS["review"][0]],
        cwd=folder, capture_output=True, text=True, check=False,
    )  # fmt: skip
    assert (left.returncode, left.stderr) == (1, "")


def test_an_output_that_was_closed_before_the_start(folder: Path) -> None:
    closed = started(("review", "--as", "json", "--save", "other.json", "small.yaml"), folder, streams=">&-")
    all_closed = started(("review", "small.yaml", "--save", "another.json"), folder, streams=">&- 2>&- <&-")
    assert ended(closed) == Done(2, "", "tidegate: the output cannot be written (it is closed)\n")
    assert ended(all_closed) == Done(2, "", "")
    one, other = ((folder / f"{name}.json").read_text("utf-8") for name in ("other", "another"))
    assert json.loads(one)["files"]  # what can be saved is, and no stream is mistaken for the file
    assert one == other


def test_no_file_takes_the_number_of_a_closed_stream(folder: Path) -> None:
    """What a library in C writes to stream 1 must not land in a file that happens to have that number."""
    held = 'import os\nHELD = open("held.txt", "w")\nos.write(1, b"noise")\n'
    pack = (SMALL.parents[3] / "examples" / "house_rules.py").read_text("utf-8")
    (folder / "noisy.py").write_text(pack.replace("from typing import Final\n", f"from typing import Final\n{held}"))
    run = started(("review", "small.yaml", "--pack", "noisy.py"), folder, streams=">&-")
    assert ended(run) == Done(2, "", "tidegate: the output cannot be written (it is closed)\n")
    assert (folder / "held.txt").read_bytes() == b""


def test_an_input_that_is_closed_is_no_matter(folder: Path) -> None:
    shutil.copy(SMALL, folder / "other.yaml")
    run = started(("review", "--workers", "2", "small.yaml", "other.yaml"), folder, streams="<&-")
    assert ended(run).returncode == 1


@needs_full
def test_errors_that_nobody_can_read_do_not_change_the_status(folder: Path) -> None:
    calls: dict[str, Sequence[str]] = {
        "no such file": ("review", "gone.yaml"),
        "no such element": ("trace", "small.yaml", "uw"),
        "no such command": ("revieuw",),
    }
    runs = {
        (name, streams): started(arguments, folder, streams=streams)
        for name, arguments in calls.items()
        for streams in ("2>/dev/full", "2>&-")
    }
    for name, run in runs.items():
        assert ended(run).returncode == 2, name


def test_a_limit_on_the_size_of_files(folder: Path) -> None:
    """As a full disk, in the middle of a report: RLIMIT_FSIZE of POSIX (getrlimit)."""
    saved = started(("review", "small.yaml", "--save", "report.json"), folder, limits="ulimit -f 8")
    drawn = started(("draw", "small.yaml", "graph", "--save", "report.json"), folder, limits="ulimit -f 8")
    shown = started(("review", "small.yaml", "--as", "json"), folder, limits="ulimit -f 8", streams=">out.json")
    assert ended(saved).stderr == ended(drawn).stderr == "report.json: cannot be written (File too large)\n"
    assert ended(shown).stderr == "tidegate: the output cannot be written (File too large)\n"
    assert [run.returncode for run in (saved, drawn, shown)] == [2, 2, 2]
    nothing_happened(folder)


# Files that are to be written


def _full(path: Path) -> None:
    """A device that is full at a path: one of its own for root, who could replace that of the system by mistake."""
    if os.geteuid() != 0:
        path.symlink_to(FULL)
        return
    try:
        os.mknod(path, stat.S_IFCHR | 0o666, os.makedev(1, 7))
    except OSError as error:
        pytest.skip(f"no device can be made here ({error})")


REASONS: dict[str, str] = {
    "gone/report.json": "No such file or directory",
    "small.yaml/report.json": "Not a directory",
    "folder.json": "Is a directory",
    "loop.json": "Too many levels of symbolic links",
    "full.json": "No space left on device",
    "/proc/report.json": "No such file or directory",
    f"{'x' * 300}.json": "File name too long",
}


@needs_full
@pytest.mark.parametrize("path", REASONS)
def test_a_report_that_cannot_be_written(folder: Path, path: str) -> None:
    (folder / "folder.json").mkdir()
    (folder / "loop.json").symlink_to("loop.json")
    _full(folder / "full.json")
    before = sorted(each.name for each in folder.iterdir())
    said = f"{path}: cannot be written ({REASONS[path]})\n"
    reviewed = tidegate("review", "--save", path, "--save", "report.json", "small.yaml", cwd=folder)
    assert (reviewed.returncode, reviewed.stderr) == (2, said)
    assert json.loads((folder / "report.json").read_text("utf-8"))["files"]  # the other one is written
    drawn = tidegate("draw", "small.yaml", "graph", "--save", path, cwd=folder)
    assert drawn == Done(2, "", said)
    assert sorted(each.name for each in folder.iterdir()) == before


@pytest.mark.skipif(os.geteuid() == 0, reason="root may write to any folder; /proc stands for one above")
def test_a_folder_that_may_only_be_read(folder: Path) -> None:
    folder.chmod(0o500)
    try:
        done = tidegate("draw", "small.yaml", "graph", "--save", "report.json", cwd=folder)
    finally:
        folder.chmod(0o700)
    assert done == Done(2, "", "report.json: cannot be written (Permission denied)\n")
    nothing_happened(folder)


@pytest.fixture
def inputs(folder: Path) -> Path:
    """Everything that a review may read, under names that a report may have."""
    (folder / "chip.json").write_text('{"include": ["part.json"], "subsystem": "chip"}', "utf-8")
    (folder / "part.json").write_text('{"rails": {"avdd": {"nominal": "1.8 V"}}}', "utf-8")
    (folder / "own.json").write_text('{"waivers": ["accepted.json"]}', "utf-8")
    (folder / "accepted.json").write_text('{"waivers": []}', "utf-8")
    os.link(folder / "part.json", folder / "hard.json")
    (folder / "soft.json").symlink_to("chip.json")
    return folder


def test_a_name_that_cannot_be_looked_up_keeps_no_other_from_being_judged(folder: Path) -> None:
    long = "x" * 5000
    done = tidegate("review", long, f"{long}*", "small.yaml", cwd=folder)
    assert (done.returncode, len(done.stderr.splitlines())) == (2, 2)
    assert done.stdout.splitlines()[-1] == "3 descriptions: 1 with findings, 2 unusable"


@pytest.mark.parametrize("name", ["chip", "part", "own", "accepted", "hard", "soft"])
def test_no_report_takes_the_place_of_what_it_is_made_from(inputs: Path, name: str) -> None:
    before = {path.name: path.read_bytes() for path in inputs.iterdir()}
    said = f"./{name}.json: cannot be written (the report is made from this file)\n"
    reviewed = tidegate("review", "chip.json", "--settings", "own.json", "--save", f"./{name}.json", cwd=inputs)
    assert (reviewed.returncode, reviewed.stderr) == (2, said)
    drawn = tidegate("draw", "chip.json", "graph", "--settings", "own.json", "--save", f"./{name}.json", cwd=inputs)
    assert drawn.returncode == 2
    assert drawn.stderr == said.replace("./", "")
    assert {path.name: path.read_bytes() for path in inputs.iterdir()} == before


def test_a_link_stays_a_link_and_what_it_points_to_is_written(folder: Path) -> None:
    (folder / "inner").mkdir()
    (folder / "link.json").symlink_to("inner/new.json")
    assert tidegate("review", "--save", "link.json", "small.yaml", cwd=folder).returncode == 1
    assert (folder / "link.json").is_symlink()
    assert json.loads((folder / "inner" / "new.json").read_text("utf-8"))["files"]


def test_a_pipe_with_a_name_is_written_to(folder: Path) -> None:
    os.mkfifo(folder / "pipe.json")
    read: list[str] = []
    reader = threading.Thread(target=lambda: read.append((folder / "pipe.json").read_text("utf-8")))
    reader.start()
    done = tidegate("review", "--as", "json", "--save", "pipe.json", "small.yaml", cwd=folder)
    reader.join(60)
    assert read == [done.stdout]
    assert (folder / "pipe.json").is_fifo()


def test_a_named_pipe_that_is_left_is_told(folder: Path) -> None:
    os.mkfifo(folder / "pipe.html")
    reader = threading.Thread(target=lambda: (folder / "pipe.html").open("rb").close())
    reader.start()
    done = tidegate("review", "--save", "pipe.html", "small.yaml", cwd=folder)
    reader.join(60)
    assert (done.returncode, done.stderr) == (2, "pipe.html: cannot be written (Broken pipe)\n")


def test_two_runs_that_write_one_file_at_once(folder: Path) -> None:
    chips = []
    for number in range(3):
        chips.append(f"chip{number}.yaml")
        (folder / chips[-1]).write_text(SMALL.read_text("utf-8").replace("lantern", "lantern " * 10**number), "utf-8")
    runs = [started(("review", chip, "--save", "report.json"), folder) for chip in chips]
    assert [ended(run).returncode for run in runs] == [1] * 3
    report = (folder / "report.json").read_text("utf-8")
    assert report in [tidegate("review", "--as", "json", chip, cwd=folder).stdout for chip in chips]
    assert [path.name for path in folder.iterdir() if path.name.startswith(".")] == []


# Files that are to be read


@pytest.mark.parametrize(
    ("path", "reason"),
    [
        ("gone.yaml", "No such file or directory"),
        ("small.yaml/chip.yaml", "Not a directory"),
        ("folder.yaml", "Is a directory"),
        ("/proc/self/mem", "Input/output error"),  # what no one can read, not even root
    ],
)
@pytest.mark.parametrize("command", ["review", "margins", "place", "ramp", "draw", "trace", "compare"])
def test_a_description_that_cannot_be_read(folder: Path, command: str, path: str, reason: str) -> None:
    (folder / "folder.yaml").mkdir()
    more = {"draw": ["graph"], "trace": ["uv"], "compare": ["small.yaml"]}.get(command, [])
    done = tidegate(command, path, *more, cwd=folder)
    assert (done.returncode, done.stdout) == (2, "")
    (line,) = done.stderr.splitlines()
    assert line.startswith(f"{path}: ")
    if (command, path) == ("review", "folder.yaml"):  # a folder is looked through
        reason = "the folder holds no description"
    assert reason in line


def test_a_current_folder_that_is_gone(folder: Path) -> None:
    run = started(("review", "small.yaml"), folder, limits="mkdir gone; cd gone; rmdir ../gone")
    assert ended(run) == Done(2, "", "tidegate: the current folder: No such file or directory\n")


def test_whatever_else_the_system_refuses_is_said_with_its_name(folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def refuse(*_: object, **__: object) -> Iterator[str]:
        raise OSError(errno.EMFILE, "Too many open files", "some\x1bfile")

    monkeypatch.setattr("tidegate.lint.commands.review.found_files", refuse)
    done = tidegate("review", "small.yaml", cwd=folder)
    assert done == Done(2, "", "tidegate: some\\u001bfile: Too many open files\n")
