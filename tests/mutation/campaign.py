"""Whether the tests notice small wrong changes of the source; by hand, never as a test.

    python tests/mutation/campaign.py lint/physics --results FILE      try the mutants that FILE does not yet hold
    python tests/mutation/campaign.py lint/physics --results FILE --survivors    and try again those that survived
    python tests/mutation/campaign.py lint/physics --results FILE --summary      show the tables, try nothing

FILE holds one JSON object a line and only grows; the last line about a mutant counts. Which changes are made is said
in `mutants.py`, how trying one costs only a fork in `session.py`. Needs the extra `mutation`, and Linux.
"""

from __future__ import annotations

import argparse
import importlib
import json
import os
import random
import re
import shutil
import sys
import tempfile
import time
from collections import Counter, defaultdict
from collections.abc import Iterator
from pathlib import Path
from typing import Any

for _name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS"):  # before NumPy: a process with threads must not fork
    os.environ[_name] = "1"
sys.dont_write_bytecode = True

import hypothesis  # noqa: E402
import pytest  # noqa: E402
from mutants import Mutant, Spot, mutants, spots  # noqa: E402
from session import OPTIONS, Child, Fresh, Record, Session, end_with_parent, in_children, module_name  # noqa: E402

ROOT = Path(__file__).resolve().parents[2]
TESTS = [
    *("tests/physics", "tests/derived", "tests/timing", "tests/graph", "tests/rules", "tests/published"),
    *("tests/process_kits", "tests/description", "tests/test_engine.py", "tests/test_case.py"),
    *("tests/test_judgement.py", "tests/test_examples.py"),
]
HEAVY = "numpy scipy.stats scipy.optimize scipy.integrate scipy.special mpmath pint uncertainties networkx jsonschema"


def main() -> None:
    """Read the command line, and try or tell."""
    ask = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    ask.add_argument("places", nargs="+", help="source files or folders, from the root of the project")
    ask.add_argument(
        "--results", type=Path, required=True, help="file of results, made or continued; keep it elsewhere"
    )
    ask.add_argument("--tests", nargs="+", default=TESTS, help="test files or folders; fewer start sooner")
    ask.add_argument("--workers", type=int, default=1, help="children at a time")
    ask.add_argument("--seconds", type=float, default=10.0, help="most test time for a mutant beside the nearest file")
    ask.add_argument("--sample", type=int, help="only so many mutants, drawn at random")
    ask.add_argument("--survivors", action="store_true", help="also try again those that survived")
    ask.add_argument("--summary", action="store_true", help="show the tables, try nothing")
    told = ask.parse_args()
    told.results = told.results.resolve()
    os.chdir(ROOT)
    files = sorted(str(file) for place in told.places for file in _python_files(Path(place)))
    places = {file: spots(file, Path(file).read_text("utf-8")) for file in files}
    if not told.summary:
        _try(told, places)
    _tell_all(places, _results(told.results))


def _python_files(place: Path) -> list[Path]:
    return [place] if place.suffix == ".py" else sorted(place.rglob("*.py"))


def _results(file: Path) -> dict[str, dict[str, Any]]:
    if not file.exists():
        return {}
    return {one["key"]: one for one in map(json.loads, file.read_text("utf-8").splitlines())}


def _try(told: argparse.Namespace, places: dict[str, list[Spot]]) -> None:
    known = _results(told.results)
    wanted = {None, "survived", "no test"} if told.survivors else {None}
    chosen = [spot for found in places.values() for spot in found if known.get(spot.key, {}).get("outcome") in wanted]
    if told.sample is not None:
        chosen = random.Random(0).sample(chosen, min(told.sample, len(chosen)))
    with tempfile.TemporaryDirectory() as scratch:
        folder = Path(scratch).resolve() / "copy"
        shutil.copytree(ROOT, folder, ignore=shutil.ignore_patterns(".*", "__pycache__"))
        os.chdir(folder)
        todo: dict[str, list[Mutant]] = {}
        for file in places:
            wanted_here = [spot for spot in chosen if spot.file == file]
            if wanted_here:
                todo[file] = list(mutants((folder / file).read_text("utf-8"), wanted_here))
        total = sum(map(len, todo.values()))
        _say(f"{total} mutants of {len(todo)} files")
        if total:
            _Campaign(told, folder, todo, total).run()
        os.chdir(ROOT)


class _Campaign:
    def __init__(self, told: argparse.Namespace, folder: Path, todo: dict[str, list[Mutant]], total: int) -> None:
        self.told, self.folder, self.todo, self.total = told, folder, todo, total
        self.count: Counter[str] = Counter()
        self.kills: dict[tuple[str, str], Counter[str]] = defaultdict(Counter)
        self.began = time.monotonic()

    def run(self) -> None:
        hypothesis.settings.register_profile(
            "campaign", derandomize=True, database=None, deadline=None, suppress_health_check=hypothesis.HealthCheck,
            phases=(hypothesis.Phase.explicit, hypothesis.Phase.generate),
        )  # fmt: skip
        hypothesis.settings.load_profile("campaign")
        for name in HEAVY.split():
            importlib.import_module(name)
        pid = os.fork()
        if not pid:
            status = 1
            end_with_parent()
            try:
                status = self._session()
            finally:
                os._exit(status)
        if os.waitstatus_to_exitcode(os.waitpid(pid, 0)[1]):
            _say((self.folder.parent / "session.txt").read_text("utf-8")[-3000:])
            sys.exit("the session ended early")
        self.record = Record()
        self.record.add(self.folder.parent / "record.json")
        in_children(self._fresh(), self.told.workers, self._done)

    def _session(self) -> int:
        said = os.open(self.folder.parent / "session.txt", os.O_WRONLY | os.O_CREAT)
        os.dup2(said, 1)
        watched = {str(self.folder / user) for file in self.todo for user in self._users(file)}
        session = Session(self.folder, self.told.workers, self.todo, sorted(watched))
        session.choose, session.report, session.tell = self._choose, self._report, _say
        status = pytest.main([*OPTIONS, "--rootdir", str(self.folder), *self.told.tests], plugins=[session])
        sys.stdout.flush()
        return 0 if (self.folder.parent / "record.json").exists() else int(status) or 1

    def _fresh(self) -> Iterator[Child]:
        """A child for each mutant that acts at import; before the first, one without a mutant."""
        keys = set(self.record.at_import)
        seconds = self.record.seconds
        _say(f"{len(keys)} mutants act at import")

        def limit_s(test: str) -> float:
            return 3.0 + 10.0 * seconds[test]

        checked = False
        for found in self.todo.values():
            for mutant in found:
                if mutant.spot.key not in keys:
                    continue
                tests = self._choose(self.record, mutant, True)
                if not tests:
                    self._report(mutant, "no test", "", 0.0)
                    continue
                whole = 60.0 + 10.0 * sum(seconds[test] for test in tests)
                if not checked:
                    checked = True
                    yield Child(None, Fresh(self.folder, None, tests, limit_s), whole)
                yield Child(mutant, Fresh(self.folder, mutant, tests, limit_s), whole)

    def _done(self, child: Child, outcome: str, by: str) -> None:
        if child.mutant:
            self._report(child.mutant, outcome, by, time.monotonic() - child.began)
        elif outcome != "survived":
            _say(f"WITHOUT a mutant: {outcome} {by}; what follows means nothing")

    def _choose(self, record: Record, mutant: Mutant, whole_file: bool) -> list[str]:
        """Tests for a mutant: of the mirroring file, those that name it, the rest; each the proven, then the quick."""
        spot = mutant.spot
        folder, stem = Path("tests", *Path(spot.file).parts[-2:-1]), Path(spot.file).stem

        def distance(test: str) -> tuple[int, int, float]:
            file = Path(test.partition("::")[0])
            kills = self.kills[spot.file, spot.function][test]
            near = 0 if file == folder / f"test_{stem}.py" else 1 if file.parent == folder and stem in test else 2
            return near, -kills, record.seconds[test]

        if whole_file:
            found = {test for file in self._users(spot.file) for test in record.tests_of(file, None)}
            # What is made at import need not run in the test that looks at it: whole file, and tests that name it.
            found |= {test for test in set(record.seconds) - record.failed if distance(test)[0] < 2}
        else:
            found = record.tests_of(spot.file, spot.statement)
        spent, chosen = 0.0, []
        for test in sorted(found, key=distance):
            near, _, cost = distance(test)
            if near == 0 or spent + cost <= self.told.seconds:
                chosen.append(test)
                spent += cost
        if whole_file:  # read file by file
            chosen.sort(key=lambda test: distance(test)[0])
        return chosen

    def _users(self, file: str) -> list[str]:
        """The file, and those that import it."""
        package, _, name = module_name(file).rpartition(".")
        importing = re.compile(rf"from {re.escape(package)}(\.{name} import|\s+import\b.*\b{name}\b)")
        every = [path for top in ("lint", "rules") for path in (self.folder / top).rglob("*.py")]
        using = [path for path in every if importing.search(path.read_text("utf-8"))]
        return [file, *(str(path.relative_to(self.folder)) for path in using)]

    def _report(self, mutant: Mutant, outcome: str, by: str, seconds: float) -> None:
        spot = mutant.spot
        line = {
            "key": spot.key, "outcome": outcome, "file": spot.file, "line": spot.line, "function": spot.function,
            "operator": spot.operator, "before": spot.before, "after": mutant.after, "by": by,
            "seconds": round(seconds, 2),
        }  # fmt: skip
        with self.told.results.open("a", encoding="utf-8") as file:
            file.write(json.dumps(line, ensure_ascii=False) + "\n")
        self.count[outcome] += 1
        self.kills[spot.file, spot.function][by] += 1  # what killed one mutant of a function may kill the next
        done = self.count.total()
        if done % 100 == 0 or done == self.total:
            _say(f"{done} of {self.total} after {time.monotonic() - self.began:.0f} s: {dict(self.count)}")


def _say(text: str) -> None:
    print(text, file=sys.stderr, flush=True)


def _tell_all(places: dict[str, list[Spot]], known: dict[str, dict[str, Any]]) -> None:
    """Survivors line by line, then a table by file and one by folder, as Markdown."""
    counts: dict[str, Counter[str]] = defaultdict(Counter)
    for file, found in places.items():
        for spot in found:
            one = known.get(spot.key)
            if one is None:
                continue
            for group in (file, str(Path(file).parent)):
                counts[group][one["outcome"]] += 1
            if one["outcome"] in ("survived", "no test"):
                where = f"{file}:{spot.line} {spot.function or 'module'} {spot.operator} ({one['outcome']})"
                print(f"{where}\n  - {one['before']}\n  + {one['after']}")
    print(
        "\n| place | mutants | killed | by time limit | survived | no test | killed % |\n|---|---|---|---|---|---|---|"
    )
    for group in sorted(counts, key=lambda group: (not group.endswith(".py"), group)):
        count = counts[group]
        share = 100.0 * (count["killed"] + count["timeout"]) / count.total()
        print(
            f"| {group} | {count.total()} | {count['killed']} | {count['timeout']} | {count['survived']} "
            f"| {count['no test']} | {share:.1f} |"
        )


if __name__ == "__main__":
    main()
