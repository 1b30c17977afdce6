"""The house stands as DEVELOPERS.md says: imports go one way, files stay small, heavy libraries load on demand."""

from __future__ import annotations

import ast
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]

# From the lowest floor up; a module may import from its own floor and from those below.
FLOORS = (
    ("tidegate.lint.version", "tidegate.lint.limits", "tidegate.schema"),
    ("tidegate.lint.physics",),
    ("tidegate.lint.found", "tidegate.lint.units"),
    ("tidegate.lint.quantity", "tidegate.lint.quantity_faults"),
    ("tidegate.lint.description",),
    ("tidegate.lint.graph",),
    ("tidegate.lint.facts",),
    ("tidegate.lint.account",),
    ("tidegate.lint.judgement",),
    ("tidegate.lint.case",),
    ("tidegate.lint.derived",),
    ("tidegate.lint.timing",),
    ("tidegate.lint.rule",),
    ("tidegate.lint.waivers", "tidegate.lint.settings", "tidegate.lint.time_limit", "tidegate.lint.packs"),
    ("tidegate.lint.corners",),
    ("tidegate.lint.engine",),
    ("tidegate.lint.break_even",),
    ("tidegate.lint.must_keep",),
    ("tidegate.lint.found_files", "tidegate.lint.batch", "tidegate.lint.comparison", "tidegate.lint.pack_testing"),
    ("tidegate.lint.reports",),
    ("tidegate.lint.commands",),
    ("tidegate.rules",),
    ("tidegate.lint.cli",),
)


def _modules() -> list[tuple[str, Path]]:
    found = []
    for folder, package in (("lint", "tidegate.lint"), ("rules", "tidegate.rules")):
        for path in sorted((ROOT / folder).rglob("*.py")):
            parts = path.relative_to(ROOT / folder).with_suffix("").parts
            inner = [part for part in parts if part != "__init__"]
            found.append((".".join([package, *inner]), path))
    return found


def _floor(module: str) -> int:
    best = max(
        (len(prefix), number)
        for number, floor in enumerate(FLOORS)
        for prefix in floor
        if module == prefix or module.startswith(prefix + ".")
    )
    return best[1]


def _imports(path: Path) -> list[str]:
    names = []
    for node in ast.walk(ast.parse(path.read_text("utf-8"))):
        if isinstance(node, ast.ImportFrom) and node.module == "tidegate.lint":
            names += [f"tidegate.lint.{alias.name}" for alias in node.names]
        elif isinstance(node, ast.ImportFrom) and node.module and node.module.startswith("tidegate"):
            names.append(node.module)
        elif isinstance(node, ast.Import):
            names += [alias.name for alias in node.names if alias.name.startswith("tidegate")]
    return names


MODULES = [(name, path) for name, path in _modules() if name not in ("tidegate.lint", "tidegate.rules")]


@pytest.mark.parametrize(("module", "path"), MODULES, ids=[name for name, _ in MODULES])
def test_imports_go_down(module: str, path: Path) -> None:
    here = _floor(module)
    up = [name for name in _imports(path) if _floor(name) > here]
    assert up == []


@pytest.mark.parametrize(("module", "path"), MODULES, ids=[name for name, _ in MODULES])
def test_one_file_holds_one_idea(module: str, path: Path) -> None:
    assert len(path.read_text("utf-8").splitlines()) <= 400


def test_every_package_is_listed_for_installation() -> None:
    import tomllib

    listed = set(tomllib.loads((ROOT / "pyproject.toml").read_text("utf-8"))["tool"]["setuptools"]["packages"])
    found = {
        ".".join(["tidegate", *path.parent.relative_to(ROOT).parts])
        for folder in ("lint", "rules", "schema")
        for path in (ROOT / folder).rglob("__init__.py")
    }
    assert listed == found


def test_the_version_is_told_once() -> None:
    import tomllib

    from tidegate.lint.version import VERSION

    assert tomllib.loads((ROOT / "pyproject.toml").read_text("utf-8"))["project"]["version"] == VERSION


RARELY_NEEDED = {
    "concurrent.futures", "difflib", "jsonschema", "jsonschema_rs", "logging", "networkx", "numpy", "rich",
    "statistics", "tempfile",
}  # fmt: skip
"""What explains faults, draws, or answers rarer questions than whether a description keeps the rules."""


@pytest.mark.parametrize(
    ("arguments", "absent"),
    [
        (["--version"], {"yaml", "rich", "msgspec", "jsonschema", "jsonschema_rs", "networkx", "numpy"}),
        (["--help"], {"yaml", "rich", "msgspec", "jsonschema", "jsonschema_rs", "networkx", "numpy"}),
        (["review", "examples/sound.yaml"], RARELY_NEEDED),
        (["review", "--as", "json", "examples/sound.yaml"], RARELY_NEEDED),
    ],
    ids=["version", "help", "review", "review_json"],
)
def test_a_command_loads_only_what_it_needs(arguments: list[str], absent: set[str]) -> None:
    script = (
        "import sys\nfrom tidegate.lint.cli import main\n"
        f"try: main({arguments!r})\nexcept SystemExit: pass\nprint('\\nloaded', *sorted(sys.modules))"
    )
    done = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True, check=True, cwd=ROOT)
    loaded = set(done.stdout.splitlines()[-1].split())
    assert not loaded & absent
