"""How long commands take, as ratios in one run; `python tests/benchmarks/scale.py [--write]`, by hand, never as a test.

Each figure is the median CPU time of whole processes: start-up against the bare interpreter with libraries, and the
review of generated descriptions against the bare parse of the same bytes with the same library. `--write` puts the
table into the README.
"""

from __future__ import annotations

import argparse
import json
import math
import os
import platform
import subprocess
import sys
import tempfile
from pathlib import Path
from typing import Any

import yaml

ROOT = Path(__file__).resolve().parents[2]
SIZES = (100, 1000, 10000)
SECTIONS = (
    "rails", "domains", "references", "biases", "comparators", "output_stages", "resets", "loads", "bypasses",
    "neighbours",
)  # fmt: skip
BASELINE = "import yaml, jsonschema, networkx, rich"
PARSE = "import sys, yaml; yaml.compose(open(sys.argv[1]), Loader=yaml.CSafeLoader)"
MARKS = ("<!-- benchmark: python tests/benchmarks/scale.py --write fills this in -->\n", "<!-- end of benchmark -->\n")


def generated(elements: int) -> str:
    """As many copies of the sound example, each with names of its own, as make about so many elements."""
    text = (ROOT / "examples" / "sound.yaml").read_text("utf-8")
    base: dict[str, Any] = yaml.load(text, Loader=yaml.BaseLoader)
    base |= yaml.load((ROOT / "examples" / "process.yaml").read_text("utf-8"), Loader=yaml.BaseLoader)
    names = {name for section in SECTIONS for name in base[section]}
    whole: dict[str, Any] = {key: base[key] for key in ("conditions", "process")}
    for number in range(max(1, elements // len(names))):
        for section in SECTIONS:
            entries = {f"{name}_{number}": _renamed(entry, names, number) for name, entry in base[section].items()}
            whole.setdefault(section, {}).update(entries)
    return json.dumps(_typed(whole), indent=1)


def _renamed(node: Any, names: set[str], number: int) -> Any:
    if isinstance(node, dict):
        return {key: _renamed(child, names, number) for key, child in node.items()}
    if isinstance(node, list):
        return [_renamed(child, names, number) for child in node]
    return f"{node}_{number}" if node in names else node


def _typed(node: Any) -> Any:
    """Flags and plain numbers were read as text."""
    if isinstance(node, dict):
        return {key: _typed(child) for key, child in node.items()}
    if isinstance(node, list):
        return [_typed(child) for child in node]
    if node in ("true", "false"):
        return node == "true"
    try:
        return json.loads(node)
    except ValueError:
        return node


def cost(*arguments: str, runs: int) -> tuple[float, float]:
    """Median CPU time in s, and greatest memory in MB, of a Python process."""
    times, memory = [], 0.0
    for _ in range(runs):
        process = subprocess.Popen([sys.executable, *arguments], stdout=subprocess.DEVNULL, cwd=ROOT)
        _, _, used = os.wait4(process.pid, 0)
        times.append(used.ru_utime + used.ru_stime)
        memory = max(memory, used.ru_maxrss / (1024 if sys.platform != "darwin" else 1024 * 1024))
    return sorted(times)[len(times) // 2], memory


def table() -> str:
    """The figures as Markdown."""
    tool = ("-m", "tidegate.lint.cli")
    cost(*tool, "review", "examples/sound.yaml", runs=1)  # byte code is written once
    lines = ["| what | against | ratio |", "| --- | --- | ---: |"]
    start, bare = cost(*tool, "--version", runs=9)[0], cost("-c", "import argparse", runs=9)[0]
    lines.append(f"| `--version` | `import argparse` | {start / bare:.2f} |")
    sound, base = cost(*tool, "review", "examples/sound.yaml", runs=9)[0], cost("-c", BASELINE, runs=9)[0]
    lines.append(f"| `review` of the sound example | `{BASELINE}` | {sound / base:.2f} |")
    points: list[tuple[int, float]] = []
    with tempfile.TemporaryDirectory() as folder:
        for size in SIZES:
            path = Path(folder) / f"{size}.json"
            path.write_text(generated(size), "utf-8")
            runs = 3 if size < max(SIZES) else 1
            review, memory = cost(*tool, "review", str(path), runs=runs)
            parse = cost("-c", PARSE, str(path), runs=runs)[0]
            points.append((size, review - sound))
            lines.append(
                f"| `review` of {size} elements ({memory:.0f} MB) | parse of the same bytes | {review / parse:.1f} |"
            )
    (first, quick), (last, slow) = points[0], points[-1]
    growth = math.log(slow / quick) / math.log(last / first)
    lines.append(f"| growth with size | time per element at {first} | exponent {growth:.2f} |")
    lines += [
        "",
        f"CPython {platform.python_version()}, {platform.system()} {platform.machine()}; CPU time, one process.",
    ]
    return "\n".join(lines) + "\n"


def main() -> None:
    """Print the table, or put it into the README."""
    parser = argparse.ArgumentParser(description="Measure start-up and scale, as ratios in one run.")
    parser.add_argument("--write", action="store_true", help="put the table into the README")
    options = parser.parse_args()
    made = table()
    print(made)
    if options.write:
        readme = ROOT / "README.md"
        head, rest = readme.read_text("utf-8").split(MARKS[0])
        readme.write_text(f"{head}{MARKS[0]}{made}{MARKS[1]}{rest.split(MARKS[1])[1]}", "utf-8")


if __name__ == "__main__":
    main()
