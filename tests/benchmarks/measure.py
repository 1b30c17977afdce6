"""How long everything takes, as ratios in one run; by hand, never as a test.

``python tests/benchmarks/measure.py`` prints the table, ``--write`` puts it into the README too, ``--up-to`` leaves out
greater descriptions (the greatest takes some minutes and 6 GB).
"""

from __future__ import annotations

import argparse
import math
import platform
import subprocess
import sys
import tempfile
from collections.abc import Iterator
from itertools import pairwise
from pathlib import Path

from generated import ROOT, generated
from processes import TOOL, both, cost

SIZES = (10, 100, 1000, 10000, 100000)
RUNS = 9
PARSE = "import gc, sys, yaml; gc.disable(); yaml.compose(open(sys.argv[1]), Loader=yaml.CSafeLoader)"
"""With the collector off: with it on, a parse measures for the most part how often the collector walks what it made."""
PARSED = "PyYAML's C parser composes the same bytes, collector off"
LIBRARIES = "import yaml, jsonschema, networkx, rich"
READING = "import argparse, yaml, msgspec"
SOUND, FAULTY = "examples/sound.yaml", "examples/faulty.yaml"
COMMANDS: tuple[tuple[tuple[str, ...], str], ...] = (
    (("--version",), "import argparse"),
    (("--help",), "import argparse"),
    (("review", SOUND), LIBRARIES),
    (("review", "one_fault.yaml"), LIBRARIES),
    (("review", FAULTY), LIBRARIES),
    (("margins", SOUND), READING),
    (("place", SOUND), READING),
    (("ramp", SOUND), READING),
    (("trace", SOUND, "por"), READING),
    (("draw", SOUND, "ladder"), READING),
    (("compare", SOUND, FAULTY), READING),
    (("rules",), "import argparse, msgspec"),
    (("start", "--rail", "avdd=1.8V", "--watch", "avdd=power-on,under"), "import argparse, yaml"),
    (("schema",), "import argparse"),
    (("completion", "bash"), "import argparse"),
)
A_FAULT = ("release_delay: {min: 200 us", "release_delay: {min: 100 us")
MARKS = (
    "<!-- benchmark: python tests/benchmarks/measure.py --write fills this in -->\n",
    "<!-- end of benchmark -->\n",
)

Row = tuple[str, str, str]


def starting(folder: Path) -> Iterator[Row]:
    """Each command on a small example, against the libraries that it cannot do without."""
    text = (ROOT / SOUND).read_text("utf-8")
    assert A_FAULT[0] in text
    (folder / "one_fault.yaml").write_text(text.replace(*A_FAULT), "utf-8")
    (folder / "process.yaml").write_text((ROOT / "examples" / "process.yaml").read_text("utf-8"), "utf-8")
    for words, libraries in COMMANDS:
        given = [str(folder / word) if word == "one_fault.yaml" else word for word in words]
        cost(*TOOL, *given)  # byte code is written once
        ours, bare = both((*TOOL, *given), ("-c", libraries), runs=RUNS)
        yield f"`{' '.join(words)}`", f"`{libraries}`", f"{ours.cpu_s / bare.cpu_s:.2f}"


def growing(folder: Path, most: int) -> Iterator[Row]:
    """The review of greater and greater descriptions, against the bare parse of the same bytes.

    Modes, scenarios, overrides and neighbours grow with the elements.
    """
    points: list[tuple[int, float]] = []
    for size in (size for size in SIZES if size <= most):
        path = folder / f"{size}.json"
        path.write_text(generated(size), "utf-8")
        lines = path.read_text("utf-8").count("\n")
        runs = RUNS if size <= 100 else 3 if size <= 10000 else 1
        ours, bare = both((*TOOL, "review", str(path)), ("-c", PARSE, str(path)), runs=runs)
        points.append((size, ours.cpu_s))
        memory = f"{ours.memory_mb:.0f} MB" + (f", {ours.memory_mb * 1e3 / lines:.1f} kB a line" if size > 1000 else "")
        yield f"`review` of {size} elements ({memory})", PARSED, f"{ours.cpu_s / bare.cpu_s:.1f}"
    for (size, cpu_s), (greater, longer_s) in pairwise(points[2:]):
        each = (longer_s / greater) / (cpu_s / size)
        exponent = math.log(longer_s / cpu_s) / math.log(greater / size)
        yield f"time per element of {greater}", f"that of {size}", f"{each:.2f} (growth exponent {exponent:.2f})"


def computing() -> Iterator[Row]:
    """The computations, in a process of their own."""
    here = Path(__file__).parent
    script = "import computing, json; print(json.dumps(list(computing.rows())))"
    told = subprocess.run([sys.executable, "-c", script], cwd=here, capture_output=True, text=True, check=True)
    import json

    yield from (tuple(row) for row in json.loads(told.stdout))


def table(most: int) -> str:
    """The figures as Markdown."""
    lines = ["| what | against | ratio |", "| --- | --- | ---: |"]
    with tempfile.TemporaryDirectory() as made:
        folder = Path(made)
        for rows in (starting(folder), growing(folder, most), computing()):
            for row in rows:
                print(" | ".join(row), file=sys.stderr, flush=True)
                lines.append(f"| {' | '.join(row)} |")
    machine = f"CPython {platform.python_version()}, {platform.system()} {platform.machine()}"
    return "\n".join([*lines, "", f"{machine}; processor time of one process, the quickest of several runs."]) + "\n"


def main() -> None:
    """Print the table, or put it into the README."""
    parser = argparse.ArgumentParser(description="Measure start-up, growth and computations, as ratios in one run.")
    parser.add_argument("--write", action="store_true", help="put the table into the README")
    parser.add_argument("--up-to", type=int, default=SIZES[-1], metavar="N", help="most elements of a description")
    options = parser.parse_args()
    made = table(options.up_to)
    print(made)
    if options.write:
        readme = ROOT / "README.md"
        head, rest = readme.read_text("utf-8").split(MARKS[0])
        readme.write_text(f"{head}{MARKS[0]}{made}{MARKS[1]}{rest.split(MARKS[1])[1]}", "utf-8")


if __name__ == "__main__":
    main()
