"""Tests run against one mutant after another, each in a child process forked from a session that has read the tests.

The session works on a copy of the tree, so that the tree may be edited meanwhile. It imports the tests once, records
which test executes which line and how long it takes, then forks a child for each mutant. The child puts the changed
code into the functions that hold the old one (wherever they have been imported to), and runs the tests of that line,
nearest first. A change that acts at import is left to a process that imports everything anew (`fresh`).
"""

from __future__ import annotations

import ctypes
import functools
import gc
import importlib
import importlib.abc
import importlib.machinery
import importlib.util
import json
import os
import resource
import signal
import sys
import time
from collections import defaultdict
from collections.abc import Callable, Iterable, Mapping, Sequence
from contextlib import suppress
from pathlib import Path
from types import CodeType, FunctionType
from typing import Any

import coverage
import pytest
from mutants import AtImportError, Mutant, swaps

FOLDERS = {"lint": "tidegate.lint", "rules": "tidegate.rules", "schema": "tidegate.schema"}
OPTIONS = (
    *("-q", "--tb=no", "--capture=sys", "-p", "no:cacheprovider", "-p", "no:xdist", "-p", "no:cov"),
    *("-W", "ignore::pytest.PytestAssertRewriteWarning"),  # hypothesis is imported before pytest starts
)
MORE_MEMORY = 2 << 30
_REMEMBERING = type(functools.cache(len))
_PR_SET_PDEATHSIG = 1
WALL_PER_CPU = 6.0  # other work shares the machine


class FromCopy(importlib.abc.MetaPathFinder):
    """Imports the project from a folder, with some files' text replaced."""

    def __init__(self, folder: Path, changed: Mapping[str, str]) -> None:
        self.folder, self.changed = folder, changed

    def find_spec(self, name: str, path: Any = None, target: Any = None) -> importlib.machinery.ModuleSpec | None:
        top = next((short for short, full in FOLDERS.items() if name == full or name.startswith(full + ".")), None)
        if top is None:
            return None
        base = self.folder.joinpath(top, *name.removeprefix(FOLDERS[top]).split(".")[1:])
        package = (base / "__init__.py").exists()
        file = base / "__init__.py" if package else base.with_suffix(".py")
        if not file.exists():
            return None
        loader = _Loader(name, str(file), self.changed.get(str(file.relative_to(self.folder))))
        places = [str(base)] if package else None
        return importlib.util.spec_from_file_location(name, file, loader=loader, submodule_search_locations=places)


class _Loader(importlib.machinery.SourceFileLoader):
    def __init__(self, name: str, path: str, text: str | None) -> None:
        super().__init__(name, path)
        self.text = text

    def get_code(self, fullname: str) -> CodeType | None:
        text = Path(self.path).read_text("utf-8") if self.text is None else self.text
        return compile(text, self.path, "exec", dont_inherit=True)


def module_name(file: str) -> str:
    """The import name of a source file of the project."""
    parts = Path(file).with_suffix("").parts
    return ".".join([FOLDERS[parts[0]], *(part for part in parts[1:] if part != "__init__")])


class Record:
    """Which test executes which line, what it costs, and which tests fail without any mutant."""

    def __init__(self) -> None:
        self.lines: dict[str, dict[int, set[str]]] = defaultdict(lambda: defaultdict(set))
        self.seconds: dict[str, float] = {}
        self.failed: set[str] = set()
        self.at_import: list[str] = []  # keys of mutants for `fresh`

    def save(self, file: Path) -> None:
        lines = {name: {n: sorted(tests) for n, tests in found.items()} for name, found in self.lines.items()}
        file.write_text(json.dumps([lines, self.seconds, sorted(self.failed), self.at_import]), "utf-8")

    def add(self, file: Path) -> None:
        lines, seconds, failed, at_import = json.loads(file.read_text("utf-8"))
        for name, found in lines.items():
            for number, tests in found.items():
                self.lines[name][int(number)].update(tests)
        self.seconds.update(seconds)
        self.failed.update(failed)
        self.at_import += at_import

    def tests_of(self, file: str, statement: tuple[int, int] | None) -> set[str]:
        """Tests that execute a statement of a file, or any line of it."""
        found = self.lines.get(file, {})
        numbers = found if statement is None else range(statement[0], statement[1] + 1)
        return {test for number in numbers for test in found.get(number, ())} - self.failed


class Plugin:
    """What both kinds of process need of pytest: the chosen tests in order, and the first failure."""

    def __init__(self) -> None:
        self.fallen: str | None = None

    def pytest_runtest_logreport(self, report: pytest.TestReport) -> None:
        if report.failed and self.fallen is None:
            self.fallen = report.nodeid

    def run(self, config: pytest.Config, items: Sequence[pytest.Item], limit_s: Callable[[str], float]) -> str | None:
        """The test that fails first, if one does; a test that computes for too long ends the process."""
        for item, following in zip(items, [*items[1:], None], strict=True):
            signal.setitimer(signal.ITIMER_VIRTUAL, limit_s(item.nodeid))
            config.hook.pytest_runtest_protocol(item=item, nextitem=following)
            if self.fallen:
                break
        signal.setitimer(signal.ITIMER_VIRTUAL, 0)
        return self.fallen


class Child:
    """A forked process that answers with the test that noticed the mutant."""

    def __init__(self, mutant: Mutant | None, work: Callable[[], str | None], limit_s: float) -> None:
        self.mutant, self.began = mutant, time.monotonic()
        self.last_s = self.began + WALL_PER_CPU * limit_s
        self.answer, write = os.pipe()
        self.pid = os.fork()
        if self.pid:
            os.close(write)
            return
        answer = "by an error outside the tests"
        try:
            _quiet(limit_s)
            answer = work() or ""
        except BaseException as error:
            answer = f"by {type(error).__name__} outside the tests"
        finally:
            os.write(write, b"=" + answer.encode())
            os._exit(0)

    def outcome(self) -> tuple[str, str] | None:
        """`killed`, `survived` or `timeout`, and by which test; None while it runs."""
        done, _ = os.waitpid(self.pid, os.WNOHANG)
        if not done and time.monotonic() < self.last_s:
            return None
        if not done:
            os.kill(self.pid, signal.SIGKILL)
            os.waitpid(self.pid, 0)
        with os.fdopen(self.answer, "rb") as pipe:
            said = pipe.read().decode()
        if not said:
            return "timeout", ""
        return ("killed", said[1:]) if said[1:] else ("survived", "")


def end_with_parent() -> None:
    """Let Linux end this process when the one that forked it ends."""
    ctypes.CDLL(None).prctl(_PR_SET_PDEATHSIG, signal.SIGKILL)


def _quiet(limit_s: float) -> None:
    end_with_parent()
    null = os.open(os.devnull, os.O_RDWR)
    for stream in (0, 1, 2):
        os.dup2(null, stream)
    resource.setrlimit(resource.RLIMIT_CPU, (int(limit_s) + 1, int(limit_s) + 2))
    pages = int(Path("/proc/self/statm").read_text("utf-8").split()[0])
    most = pages * resource.getpagesize() + MORE_MEMORY
    resource.setrlimit(resource.RLIMIT_AS, (most, most))


def in_children(jobs: Iterable[Child], workers: int, done: Callable[[Child, str, str], None]) -> None:
    """Let so many children run at a time; `jobs` forks as it is asked for the next."""
    running: list[Child] = []
    waiting = iter(jobs)
    more = True
    while more or running:
        while more and len(running) < workers:
            child = next(waiting, None)
            if child is None:
                more = False
            else:
                running.append(child)
        for child in list(running):
            outcome = child.outcome()
            if outcome:
                running.remove(child)
                done(child, *outcome)
        time.sleep(0.004)


class Session(Plugin):
    """The process that has read the tests: records, then forks a child for each mutant."""

    def __init__(self, folder: Path, workers: int, todo: Mapping[str, list[Mutant]], watched: list[str]) -> None:
        super().__init__()
        self.folder, self.workers, self.todo = folder, workers, todo
        self.record = Record()
        self.choose: Callable[[Record, Mutant, bool], list[str]]
        self.report: Callable[[Mutant, str, str, float], None]
        self.tell: Callable[[str], None]
        self.watch = coverage.Coverage(data_file=None, config_file=False, branch=False, include=watched)
        self.watch.set_option("run:disable_warnings", ["no-data-collected"])  # a test file may run nothing of ours

    def pytest_sessionstart(self) -> None:
        sys.meta_path.insert(0, FromCopy(self.folder, {}))
        self.watch.start()

    def pytest_collectreport(self, report: pytest.CollectReport) -> None:
        if report.failed:
            self.tell(f"cannot be read, so left out: {report.nodeid}")

    def pytest_runtestloop(self, session: pytest.Session) -> bool:
        for file in self.todo:
            importlib.import_module(module_name(file))
        self.watch.stop()
        at_collection = {file: set(self._lines_of(self.watch, file)) for file in self.todo}
        self.watch.erase()
        self._record_all(session)
        self._try_all(session, at_collection)
        return True

    def _lines_of(self, watch: coverage.Coverage, file: str) -> list[int]:
        return watch.get_data().lines(str(self.folder / file)) or []

    def _record_all(self, session: pytest.Session) -> None:
        by_file: dict[Path, list[pytest.Item]] = defaultdict(list)
        for item in session.items:
            by_file[item.path].append(item)
        jobs = (
            Child(None, lambda n=n, items=items: self._record(session, items, n), 600.0)
            for n, items in enumerate(by_file.values())
        )

        def done(child: Child, outcome: str, by: str) -> None:
            if outcome != "survived":
                self.tell(f"recording: {outcome} {by}")

        in_children(jobs, self.workers, done)
        for n, file in enumerate(by_file):
            part = self.folder.parent / f"{n}.json"
            if not part.exists():
                self.tell(f"{file.name} could not be run without mutants")
                raise session.Failed("no record")
            self.record.add(part)
        self.tell(f"recorded {len(self.record.seconds)} tests; without any mutant fail {sorted(self.record.failed)}")

    def _record(self, session: pytest.Session, items: list[pytest.Item], n: int) -> None:
        watch, record = self.watch, Record()
        watch.start()
        for item, following in zip(items, [*items[1:], None], strict=True):
            watch.switch_context(item.nodeid)
            began = time.process_time()
            self.fallen = None
            session.config.hook.pytest_runtest_protocol(item=item, nextitem=following)
            record.seconds[item.nodeid] = time.process_time() - began
            if self.fallen:
                record.failed.add(item.nodeid)
        watch.stop()
        data = watch.get_data()
        for measured in data.measured_files():
            name = str(Path(measured).relative_to(self.folder))
            for number, tests in data.contexts_by_lineno(measured).items():
                record.lines[name][number].update(filter(None, tests))
        record.save(self.folder.parent / f"{n}.json")

    def _ours(self, remembering: Any) -> bool:
        """Whether the function whose answers are kept is one of the project or of its tests."""
        code = getattr(getattr(remembering, "__wrapped__", None), "__code__", None)
        return code is not None and code.co_filename.startswith(str(self.folder))

    def _try_all(self, session: pytest.Session, at_collection: Mapping[str, set[int]]) -> None:
        holders: dict[CodeType, list[FunctionType]] = defaultdict(list)
        for one in gc.get_objects():
            if isinstance(one, FunctionType) and one.__code__.co_filename.startswith(str(self.folder)):
                holders[one.__code__].append(one)
        kept = [one for one in gc.get_objects() if isinstance(one, _REMEMBERING) and self._ours(one)]
        gc.freeze()
        items = {item.nodeid: item for item in session.items}
        seconds = self.record.seconds

        def limit_s(test: str) -> float:
            return 3.0 + 10.0 * seconds[test]

        def work(exchange: list[tuple[CodeType, CodeType, bool]], tests: list[str]) -> str | None:
            for remembering in kept:  # what the right code answered while the tests were read
                remembering.cache_clear()
            for was, becomes, _ in exchange:
                for function in holders[was]:
                    with suppress(ValueError):  # a nested one with other closed-over names: its holder makes it anew
                        function.__code__ = becomes
            return self.run(session.config, [items[test] for test in tests], limit_s)

        def jobs() -> Iterable[Child]:
            checked = False
            for file, mutants in self.todo.items():
                path = str(self.folder / file)
                original = compile((self.folder / file).read_text("utf-8"), path, "exec", dont_inherit=True)
                for mutant in mutants:
                    first, last = mutant.spot.statement
                    try:
                        exchange = swaps(original, compile(mutant.source, path, "exec", dont_inherit=True))
                        if at_collection[file] & set(range(first, last + 1)) or not _reached(exchange, holders):
                            raise AtImportError
                    except AtImportError:
                        self.record.at_import.append(mutant.spot.key)
                        continue
                    tests = self.choose(self.record, mutant, False)
                    if not tests:
                        self.report(mutant, "no test", "", 0.0)
                        continue
                    whole = 5.0 + 10.0 * sum(seconds[test] for test in tests)
                    if not checked:
                        checked = True
                        yield Child(None, lambda tests=tests: work([], tests), whole)
                    yield Child(mutant, lambda exchange=exchange, tests=tests: work(exchange, tests), whole)

        def done(child: Child, outcome: str, by: str) -> None:
            if child.mutant:
                self.report(child.mutant, outcome, by, time.monotonic() - child.began)
            elif outcome != "survived":
                self.tell(f"WITHOUT a mutant: {outcome} {by}; what follows means nothing")

        in_children(jobs(), self.workers, done)
        self.record.save(self.folder.parent / "record.json")


def _reached(exchange: list[tuple[CodeType, CodeType, bool]], holders: Mapping[CodeType, list[FunctionType]]) -> bool:
    """Whether every changed function that no other one makes is in memory and can take the new code."""
    outer = [(was, becomes) for was, becomes, inside in exchange if not inside]
    return bool(outer) and all(
        holders.get(was) and len(was.co_freevars) == len(becomes.co_freevars) for was, becomes in outer
    )


class Fresh(Plugin):
    """A process that imports the mutant like any other source, and runs chosen tests."""

    def __init__(self, folder: Path, mutant: Mutant | None, tests: list[str], limit_s: Callable[[str], float]) -> None:
        super().__init__()
        self.folder, self.mutant, self.tests, self.limit_s = folder, mutant, tests, limit_s
        self.ran = 0

    def __call__(self) -> str | None:
        changed = {self.mutant.spot.file: self.mutant.source} if self.mutant else {}
        sys.meta_path.insert(0, FromCopy(self.folder, changed))
        files = list(dict.fromkeys(test.partition("::")[0] for test in self.tests))
        status = pytest.main([*OPTIONS, "--rootdir", str(self.folder), *files], plugins=[self])
        if self.fallen is None and (status != 0 or self.ran < len(self.tests)):
            return "by the tests being unable to start"
        return self.fallen

    def pytest_runtestloop(self, session: pytest.Session) -> bool:
        items = {item.nodeid: item for item in session.items}
        chosen = [items[test] for test in self.tests if test in items]
        self.ran = len(chosen)
        if not session.testsfailed:
            self.run(session.config, chosen, self.limit_s)
        return True
