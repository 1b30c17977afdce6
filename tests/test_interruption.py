"""Ctrl-C, termination and a closed terminal at any moment: one sentence, nothing half-written, no process left over."""

from __future__ import annotations

import json
import os
import signal
import subprocess
import sys
import time
from collections.abc import Callable, Mapping
from pathlib import Path

import pytest

from tests.commands.calling import tidegate
from tidegate.lint.commands.interruption import SIGNALS, Stopped, Told

SMALL = Path(__file__).with_name("reports") / "drawing" / "small.yaml"
COMMAND = (sys.executable, "-m", "tidegate.lint.cli")
WORDS = {
    signal.SIGINT: "interrupted before the end",
    signal.SIGTERM: "terminated before the end",
    signal.SIGHUP: "left by its terminal before the end",
}
OLD = "the report of yesterday\n"
SOON_S = 20.0  # far above what is needed, so that a busy machine fails no test

# A pack whose rule says that it runs, and then does what the test wants.
PACK = """
import os, time
from tidegate.lint.judgement import Level
from tidegate.lint.rule import Example, rule

def begin():
    open(f"started-{os.getpid()}-{time.monotonic_ns()}", "w").close()

@rule(
    "slow/step", title="takes its time", level=Level.NOTE, applies_to="rails", proves="Nothing.",
    facts=("rails",), mend="none", sources=("invented",), example=Example(fails="rails: {}", holds="rails: {}"),
)
def step(rail, case):
    BODY
    return case.passes("well")

RULES = (step,)
"""
SLEEPS = "begin(); time.sleep(4)"
SWALLOWS = "try: begin(); time.sleep(4)\n    except BaseException: pass"
WHILE_LOADED = "open(f'started-{os.getpid()}-', 'w').close(); time.sleep(4)\n"


def _environment(**more: str) -> dict[str, str]:
    plain = {name: value for name, value in os.environ.items() if name != "PYTHONUNBUFFERED"}
    return {**plain, **more}


@pytest.fixture
def chips(tmp_path: Path) -> Path:
    """A folder with four descriptions, a pack that takes its time, and the reports of yesterday."""
    for number in range(4):
        text = f"subsystem: chip {number}\nrails: {{avdd: {{nominal: 1.8 V}}}}\n"
        (tmp_path / f"chip{number}.yaml").write_text(text, "utf-8")
    (tmp_path / "report.json").write_text(OLD, "utf-8")
    return tmp_path


def _started(folder: Path, *arguments: str, body: str = SLEEPS, first: str = "") -> subprocess.Popen[str]:
    (folder / "slow.py").write_text(f"import os, time\n{first}{PACK.replace('BODY', body)}", "utf-8")
    command = [*COMMAND, "review", "--pack", "slow.py", "--save", "report.json", *arguments]
    return subprocess.Popen(
        command, cwd=folder, stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True, env=_environment(),
        start_new_session=True,
    )  # fmt: skip


def _wait_for(what: Callable[[], bool]) -> None:
    end_s = time.monotonic() + SOON_S
    while not what():
        assert time.monotonic() < end_s, "it takes too long"
        time.sleep(0.02)


def _working(folder: Path) -> list[int]:
    """The processes whose rule has begun, once for each description that they have taken up."""
    return [int(path.name.split("-")[1]) for path in folder.glob("started-*")]


def _gone(process: int) -> bool:
    """Whether a process does not run any more; one that only waits to be asked how it ended does not."""
    try:
        return Path(f"/proc/{process}/stat").read_text("utf-8").rpartition(")")[2].split()[0] == "Z"
    except FileNotFoundError:
        return True


def _nothing_happened(folder: Path) -> None:
    assert (folder / "report.json").read_text("utf-8") == OLD
    assert not [path.name for path in folder.iterdir() if path.name.startswith(".")]


@pytest.mark.parametrize("number", SIGNALS, ids=lambda number: number.name)
def test_stopped_while_a_pack_runs(chips: Path, number: signal.Signals) -> None:
    with _started(chips, "chip0.yaml") as process:
        _wait_for(lambda: bool(_working(chips)))
        process.send_signal(number)
        out, err = process.communicate(timeout=SOON_S)
    assert (process.returncode, out, err) == (-number, "", f"tidegate: {WORDS[number]}\n")
    _nothing_happened(chips)


def test_stopped_while_a_pack_is_loaded(chips: Path) -> None:
    with _started(chips, "chip0.yaml", first=WHILE_LOADED) as process:
        _wait_for(lambda: bool(_working(chips)))
        process.send_signal(signal.SIGINT)
        assert process.communicate(timeout=SOON_S) == ("", f"tidegate: {WORDS[signal.SIGINT]}\n")
    assert process.returncode == -signal.SIGINT
    _nothing_happened(chips)


def test_a_pack_that_swallows_the_wish_does_not_undo_it(chips: Path) -> None:
    with _started(chips, "chip0.yaml", body=SWALLOWS) as process:
        _wait_for(lambda: bool(_working(chips)))
        process.send_signal(signal.SIGTERM)
        _, err = process.communicate(timeout=SOON_S)
    assert (process.returncode, err) == (-signal.SIGTERM, f"tidegate: {WORDS[signal.SIGTERM]}\n")


@pytest.mark.parametrize("whole_group", [True, False], ids=["every process", "the first process"])
def test_stopped_while_two_workers_run(chips: Path, whole_group: bool) -> None:
    """Ctrl-C at a terminal reaches every process; a job scheduler tells the first one alone."""
    with _started(chips, "--workers", "2", *(f"chip{number}.yaml" for number in range(4))) as process:
        _wait_for(lambda: len(_working(chips)) == 2)
        workers = _working(chips)
        assert process.pid not in workers
        (os.killpg if whole_group else os.kill)(process.pid, signal.SIGINT)
        out, err = process.communicate(timeout=SOON_S)
    assert (process.returncode, out, err) == (-signal.SIGINT, "", f"tidegate: {WORDS[signal.SIGINT]}\n")
    assert all(map(_gone, workers))
    assert sorted(_working(chips)) == sorted(workers)  # what was not begun is not begun any more
    _nothing_happened(chips)


@pytest.mark.skipif(not Path("/proc/self/stat").exists(), reason="processes are looked up in /proc")
def test_workers_do_not_outlive_a_process_that_is_killed(chips: Path) -> None:
    with _started(chips, "--workers", "2", *(f"chip{number}.yaml" for number in range(4))) as process:
        _wait_for(lambda: len(_working(chips)) == 2)
        workers = _working(chips)
        process.kill()
        _wait_for(lambda: all(map(_gone, workers)))


# The command in a process of its own, which says when a report is half-written and then takes its time.
HALF_WRITTEN = """
import sys, time
from tidegate.lint.reports.forms import Whole
from tidegate.lint.cli import main

whole = Whole.pieces

def pieces(self, ran):
    text = "".join(whole(self, ran))
    yield text[: len(text) // 2]
    open("started-0", "w").close()
    time.sleep(4)
    yield text[len(text) // 2 :]

Whole.pieces = pieces
sys.exit(main())
"""


@pytest.mark.parametrize("number", SIGNALS, ids=lambda number: number.name)
def test_stopped_while_a_report_is_written(chips: Path, number: signal.Signals) -> None:
    command = [sys.executable, "-c", HALF_WRITTEN, "review", "--save", "report.json", "chip0.yaml"]
    with subprocess.Popen(
        command, cwd=chips, stdout=subprocess.DEVNULL, stderr=subprocess.PIPE, text=True, env=_environment()
    ) as process:
        _wait_for(lambda: bool(_working(chips)))
        process.send_signal(number)
        _, err = process.communicate(timeout=SOON_S)
    assert (process.returncode, err) == (-number, f"tidegate: {WORDS[number]}\n")
    _nothing_happened(chips)


def test_a_signal_that_is_turned_off_stays_so(chips: Path) -> None:
    """As with `nohup`, and with Ctrl-C for what a shell runs in the background."""
    (chips / "slow.py").write_text(PACK.replace("BODY", "os.kill(os.getpid(), 1); os.kill(os.getpid(), 2)"), "utf-8")
    off = f"import signal, sys\nfor n in (1, 2): signal.signal(n, signal.SIG_IGN)\n{HALF_WRITTEN.replace('(4)', '(0)')}"
    command = [sys.executable, "-c", off, "review", "--pack", "slow.py", "--save", "report.json", "chip0.yaml"]
    done = subprocess.run(command, cwd=chips, capture_output=True, text=True, env=_environment(), check=False)
    assert done.stderr == ""
    assert done.returncode in (0, 1)
    assert json.loads((chips / "report.json").read_text("utf-8"))["files"]


def test_the_same_wish_twice_does_not_disturb_the_putting_in_order(monkeypatch: pytest.MonkeyPatch) -> None:
    times = iter((10.0, 10.1, 10.4, 11.0))
    monkeypatch.setattr(time, "monotonic", lambda: next(times))
    told = Told()
    heard = []
    for number in (signal.SIGINT, signal.SIGTERM, signal.SIGINT, signal.SIGTERM):
        try:
            told(number, None)
        except Stopped as stopped:
            heard.append(stopped.number)
    assert heard == [signal.SIGINT, signal.SIGTERM]


# A process that is met by Ctrl-C before it knows that it works for another.
EARLY = """
import os, signal
from tests.commands.calling import tidegate
from tidegate.lint.commands.interruption import begin_work, signals_held

with signals_held():
    process = os.fork()
    if process == 0:
        os.kill(os.getpid(), signal.SIGINT)
        begin_work()
        os._exit(7)
raise SystemExit(os.waitstatus_to_exitcode(os.waitpid(process, 0)[1]))
"""


def test_a_worker_is_not_met_by_a_signal_before_it_knows_what_to_do(
    chips: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    done = subprocess.run([sys.executable, "-c", EARLY], capture_output=True, text=True, check=False)
    assert (done.returncode, done.stderr) == (7, "")
    held: list[set[signal.Signals]] = []

    def handed_out(*_: object) -> list[object]:
        held.append({signal.Signals(number) for number in signal.pthread_sigmask(signal.SIG_BLOCK, ())})
        return []

    monkeypatch.setattr("tidegate.lint.commands.review.run_batch", handed_out)
    tidegate("review", "chip0.yaml", cwd=chips)
    assert held == [set(SIGNALS)]  # while processes are started
    assert not set(signal.pthread_sigmask(signal.SIG_BLOCK, ())) & set(SIGNALS)


# Runs commands in processes of their own, first undisturbed, then each met by a signal at its so-many-th call.
MOMENTS = """
import json, os, shutil, signal, sys
from tidegate.lint.cli import main, own_families, parser

own_families()
parser()
top, shares, commands = sys.argv[1], json.loads(sys.argv[2]), json.loads(sys.argv[3])

def run(name, arguments, at):
    folder = os.path.join(top, f"{name}-{at}")
    shutil.copytree(os.path.join(top, "chip"), os.path.join(folder, "work"))
    os.mkdir(os.path.join(folder, "tmp"))
    process = os.fork()
    if process == 0:
        os.environ["TMPDIR"] = os.path.join(folder, "tmp")
        os.chdir(os.path.join(folder, "work"))
        for number in (1, 2):
            os.dup2(os.open(f"../{number}", os.O_WRONLY | os.O_CREAT), number)
        calls = 0

        def count(frame, event, argument):
            nonlocal calls
            if calls or callable(signal.getsignal(signal.SIGTERM)):  # from where the program heeds signals
                calls += 1
                if calls == at:
                    os.kill(os.getpid(), signal.SIGTERM)

        sys.argv[1:] = arguments
        sys.settrace(count)
        status = main()
        sys.settrace(None)
        with open("../calls", "w") as file:
            file.write(str(calls))
        sys.exit(status)
    return os.waitstatus_to_exitcode(os.waitpid(process, 0)[1])

told = []
for name, arguments in commands:
    told.append((name, 0, run(name, arguments, 0)))
    calls = int(open(os.path.join(top, f"{name}-0", "calls")).read())
    for share in shares:
        at = max(int(share * calls), 1)
        told.append((name, at, run(name, arguments, at)))
print(json.dumps(told))
"""
SHARES = (0.0, 0.5, 0.95)
"""Where in a command the signal comes, as a share of the calls of functions that it makes."""
CALLS: Mapping[str, tuple[str, ...]] = {
    "review": ("review", "--as", "json", "--save", "report.json", "--save", "report.md", "small.yaml"),
    "margins": ("margins", "small.yaml"),
    "place": ("place", "small.yaml", "uv"),
    "ramp": ("ramp", "--as", "json", "small.yaml"),
    "rules": ("rules", "hysteresis/present"),
    "draw": ("draw", "small.yaml", "graph", "--save", "report.svg"),
    "trace": ("trace", "small.yaml", "uv"),
    "start": ("start",),
    "compare": ("compare", "HEAD:small.yaml", "small.yaml"),
    "schema": ("schema",),
    "completion": ("completion", "zsh"),
}


@pytest.fixture
def top(tmp_path: Path) -> Path:
    """A folder with a repository that holds a small description, and the reports of yesterday."""
    chip = tmp_path / "chip"
    chip.mkdir()
    (chip / "small.yaml").write_bytes(SMALL.read_bytes())
    who = ("-c", "user.name=a", "-c", "user.email=a@example.invalid")
    for words in (("init", "-q"), ("add", "."), (*who, "commit", "-q", "-m", "first")):
        subprocess.run(["git", *words], cwd=chip, check=True)
    for ending in ("json", "md", "svg"):
        (chip / f"report.{ending}").write_text(OLD, "utf-8")
    return tmp_path


def _files(folder: Path) -> dict[str, bytes]:
    return {path.name: path.read_bytes() for path in folder.iterdir() if path.is_file()}


def test_stopped_at_any_moment_of_any_command(top: Path) -> None:
    command = [sys.executable, "-c", MOMENTS, str(top), json.dumps(SHARES)]
    pairs = list(CALLS.items())
    runs = [
        subprocess.Popen([*command, json.dumps(half)], stdout=subprocess.PIPE, text=True, env=_environment())
        for half in (pairs[::2], pairs[1::2])
    ]
    told = [each for run in runs for each in json.loads(run.communicate(timeout=3 * SOON_S)[0])]
    assert len(told) == len(CALLS) * (1 + len(SHARES))
    before = _files(top / "chip")
    for name, at, status in told:
        folder = top / f"{name}-{at}"
        after, whole = _files(folder / "work"), _files(top / f"{name}-0" / "work")
        assert list((folder / "tmp").iterdir()) == []
        assert set(after) == set(before)  # no draft is left
        assert all(content in (before[file], whole[file]) for file, content in after.items())
        said = (folder / "2").read_text("utf-8")
        if at == 0:
            assert (status in (0, 1), said) == (True, ""), (name, said)
        else:
            assert (status, said) == (-signal.SIGTERM, f"tidegate: {WORDS[signal.SIGTERM]}\n"), (name, at, said)
