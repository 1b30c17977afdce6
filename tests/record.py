"""Writes everything that is recorded from the code: `python tests/record.py`; tests fail where it is stale.

What it writes is read by a person before it is committed: recorded output freezes mistakes.
"""

from __future__ import annotations

import contextlib
import importlib.util
import io
import os
from collections.abc import Callable, Iterator, Mapping
from functools import lru_cache, partial
from pathlib import Path
from typing import Any

ROOT = Path(__file__).resolve().parents[1]
SAMPLE_LINES = 36


@contextlib.contextmanager
def in_project(columns: int = 80) -> Iterator[None]:
    """Run from the root of the project, at a fixed width: the recorded paths and line breaks depend on both."""
    before, width = Path.cwd(), os.environ.get("COLUMNS")
    os.chdir(ROOT)
    os.environ["COLUMNS"] = str(columns)
    try:
        yield
    finally:
        os.chdir(before)
        os.environ.pop("COLUMNS") if width is None else os.environ.update(COLUMNS=width)


def command(*arguments: str) -> str:
    """What a command prints."""
    from tidegate.lint.cli import main

    out = io.StringIO()
    with in_project(), contextlib.redirect_stdout(out):
        main(arguments)
    return out.getvalue()


def completion(shell: str) -> str:
    """The completion script of a shell, from the options themselves."""
    import shtab

    from tidegate.lint.cli import parser

    text: str = shtab.complete(parser(), shell)
    return text.rstrip() + "\n"


def recorded() -> Mapping[str, Callable[[], str]]:
    """Every recorded file, and how its text is made."""
    return {
        "lint/completion/tidegate.bash": lambda: completion("bash"),
        "lint/completion/tidegate.zsh": lambda: completion("zsh"),
        "lint/completion/tidegate.tcsh": lambda: completion("tcsh"),
        "examples/starter.yaml": lambda: command("start"),
        "tests/golden/sound.txt": lambda: command("review", "examples/sound.yaml"),
        "tests/golden/sound_every.txt": lambda: command("review", "--every", "examples/sound.yaml"),
        "tests/golden/faulty.txt": lambda: command("review", "examples/faulty.yaml"),
        "tests/golden/faulty.json": lambda: command("review", "--as", "json", "examples/faulty.yaml"),
        "tests/golden/starter.txt": lambda: command("review", "examples/starter.yaml"),
        "tests/golden/place.txt": lambda: command("place", "examples/sound.yaml"),
        "tests/golden/place_uv.txt": lambda: command("place", "examples/sound.yaml", "uv"),
        "tests/golden/place_por.txt": lambda: command("place", "examples/sound.yaml", "por"),
        "tests/golden/place_uv.json": lambda: command("place", "examples/sound.yaml", "uv", "--as", "json"),
        "tests/golden/margins.txt": lambda: command("margins", "examples/sound.yaml"),
        "rules/README.md": _documents().rule_catalogue,
        "schema/README.md": _documents().description_reference,
        "lint/physics/README.md": _documents().formula_sheet,
        **{f"lint/facts/views/{name}.py": partial(_fact_views().view_module, name) for name in _fact_views().MODULES},
        "tests/golden/rules.txt": lambda: command("rules"),
        "tests/golden/help.txt": _help,
        "README.md": _readme,
    }


def _readme() -> str:
    """The README with its sample of a report and its command help as they are today."""
    text = (ROOT / "README.md").read_text("utf-8")
    sample = command("review", "examples/faulty.yaml").splitlines()[:SAMPLE_LINES]
    while sample and sample[-1].strip():  # up to the end of a block
        sample.pop()
    text = _filled(text, "sample", ["```text", *sample[:-1], "...", "```"])
    return _filled(text, "help", ["```text", *_help().rstrip().splitlines(), "```"])


def _filled(text: str, name: str, lines: list[str]) -> str:
    """A text with lines between the marks of a name."""
    head, begin, rest = text.partition(f"<!-- {name}: python tests/record.py fills this in -->\n")
    _, end, foot = rest.partition(f"<!-- end of {name} -->\n")
    assert begin and end, f"README.md has no place for {name}"
    return head + begin + "\n".join(lines) + "\n" + end + foot


def _documents() -> Any:
    """How the documents are made."""
    return _beside("documents")


def _fact_views() -> Any:
    """How the typed views of facts are made."""
    return _beside("fact_views")


@lru_cache
def _beside(name: str) -> Any:
    """A module beside this one, wherever Python was started."""
    spec = importlib.util.spec_from_file_location(name, Path(__file__).with_name(f"{name}.py"))
    assert spec is not None and spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


def _help() -> str:
    from tidegate.lint.cli import _COMMANDS, parser

    texts = []
    with in_project():
        top = parser()
        texts.append(top.format_help())
        actions = next(a for a in top._actions if a.dest == "command")
        texts += [actions.choices[name].format_help() for name in _COMMANDS]  # type: ignore[index]
    return "\n".join(texts)


def main() -> None:
    """Write what is stale."""
    for name, make in recorded().items():
        path = ROOT / name
        text = make()
        if not path.exists() or path.read_text("utf-8") != text:
            path.parent.mkdir(parents=True, exist_ok=True)
            path.write_text(text, "utf-8")
            print(f"wrote {name}")


if __name__ == "__main__":
    main()
