"""Rules of third parties: a Python file named explicitly, or an installed package named explicitly.

A pack is a module with ``RULES``, a tuple of rules made by ``tidegate.lint.rule.rule``.  It is checked when it is
loaded, runs under a time limit, and can neither replace a rule that comes with the tool nor speak for its families.
"""

from __future__ import annotations

import hashlib
import importlib.util
import inspect
import re
import stat
import sys
from collections.abc import Callable, Collection, Iterable, Iterator, Mapping, Sequence
from contextlib import contextmanager, redirect_stdout
from functools import partial, wraps
from pathlib import Path
from traceback import walk_tb
from typing import Any, Final

from msgspec.structs import replace

from tidegate.lint.case import Case
from tidegate.lint.found import raised
from tidegate.lint.graph.dependency import SECTIONS
from tidegate.lint.judgement import Judgement, Level
from tidegate.lint.limits import MOST_PACK_BYTES, MOST_PACK_S
from tidegate.lint.rule import Example, PackError, Rule
from tidegate.lint.time_limit import TimeLimitError, within

GROUP: Final = "tidegate.rules"
"""Entry-point group of installed packs."""
MODULE_PREFIX: Final = "tidegate_pack_"
"""How the names begin under which Python keeps the modules of packs."""

_ID: Final = re.compile(r"[a-z][a-z0-9_]*/[a-z][a-z0-9_]*")
_HERE: Final = Path()
_TEXTS: Final = ("title", "proves", "mend")


def load_packs(
    files: Iterable[str], installed: Iterable[str], taken_families: Collection[str], *, folder: Path = _HERE,
    most_seconds: float = MOST_PACK_S,
) -> list[tuple[Rule, ...]]:  # fmt: skip
    """The rules of packs, one tuple each, under their time limit; names of files count from ``folder``.

    Raises: PackError: if a pack cannot be loaded, or its rules are not complete.
    """
    packs: list[tuple[Rule, ...]] = []
    taken = set(taken_families)
    from_file = partial(_from_file, folder)
    named: list[tuple[str, Callable[[str], object]]] = [(file, from_file) for file in files]
    for name, load in [*named, *((name, _installed) for name in installed)]:
        with _at_fault(name, most_seconds), redirect_stdout(sys.stderr):
            module = within(most_seconds, f"loading rule pack {name}", partial(load, name), status=2)
        rules = checked(name, module, taken)
        taken |= {rule.family for rule in rules}
        packs.append(tuple(replace(rule, judge=_guarded(rule, most_seconds)) for rule in rules))
    return packs


@contextmanager
def _at_fault(name: str, most_seconds: float) -> Iterator[None]:
    """Whatever a pack does while it is loaded is said of the pack, and does not end the program."""
    try:
        yield
    except (PackError, KeyboardInterrupt):
        raise
    except TimeLimitError as error:
        raise PackError(f"rule pack {name}: loading it took more than {most_seconds:g} s") from error
    except BaseException as error:
        said = f"{raised(error)}{_where(error)}"
        raise PackError(f"rule pack {name}: cannot be loaded ({said})") from error


def _where(error: BaseException) -> str:
    """The line of the pack in which an error was raised; a SyntaxError names it itself."""
    lines = [line for frame, line in walk_tb(error.__traceback__) if _is_of_a_pack(frame.f_globals)]
    return f", in line {lines[-1]}" if lines else ""


def _is_of_a_pack(names: Mapping[str, Any]) -> bool:
    return str(names.get("__name__")).startswith(MODULE_PREFIX)


def _from_file(folder: Path, name: str) -> object:
    path = folder / name
    problem = _no_pack(path)
    if problem:
        raise PackError(f"rule pack {name}: {problem}")
    # Two packs may have the same file name; dataclasses look their module up where Python keeps the loaded ones.
    mark = hashlib.sha256(str(path.absolute()).encode("utf-8", "surrogateescape")).hexdigest()[:8]
    spec = importlib.util.spec_from_file_location(f"{MODULE_PREFIX}{path.stem}_{mark}", path)
    if spec is None or spec.loader is None:
        raise PackError(f"rule pack {name}: not a Python file (its name ends in .py)")
    module = importlib.util.module_from_spec(spec)
    sys.modules[spec.name] = module
    try:
        spec.loader.exec_module(module)
    except BaseException:
        del sys.modules[spec.name]
        raise
    return module


def _no_pack(path: Path) -> str:
    """Why what lies there cannot be a pack; empty where it can."""
    try:
        status = path.stat()
    except FileNotFoundError:
        return "no such file"
    except (OSError, ValueError) as error:
        return f"cannot be read ({getattr(error, 'strerror', None) or 'no usable file name'})"
    if stat.S_ISDIR(status.st_mode):
        return "a folder"
    if not stat.S_ISREG(status.st_mode):
        return "a pipe or a device"
    if status.st_size > MOST_PACK_BYTES:
        allowed = f"at most {MOST_PACK_BYTES // 2**20} MiB are read"
        return f"too large (found {status.st_size / 2**20:.1f} MiB, {allowed})"
    return ""


def _installed(name: str) -> object:
    from importlib.metadata import entry_points

    found = entry_points(group=GROUP, name=name)
    if not found:
        known = ", ".join(sorted(entry_points(group=GROUP).names)) or "none"
        raise PackError(f"rule pack {name}: not installed; installed: {known}")
    return next(iter(found)).load()


def checked(name: str, module: object, taken: Collection[str]) -> Sequence[Rule]:
    """The rules of a pack, if every one of them is complete.

    Raises: PackError: with everything that is wrong.
    """
    rules = getattr(module, "RULES", None)
    if not isinstance(rules, tuple) or not rules or not all(isinstance(rule, Rule) for rule in rules):
        raise PackError(f"rule pack {name}: RULES must be a tuple of rules, at least one")
    problems = [f"{rule.id or repr(rule.id)}: {problem}" for rule in rules for problem in _problems(rule, taken)]
    ids = [rule.id for rule in rules]
    problems += [f"{rule_id}: given twice" for rule_id in sorted({i for i in ids if ids.count(i) > 1})]
    if problems:
        raise PackError(f"rule pack {name}: " + "; ".join(problems))
    return rules


def _problems(rule: Rule, taken: Collection[str]) -> Iterator[str]:
    if not _ID.fullmatch(str(rule.id)):
        yield "an id is family/name, in small letters, digits and underscores"
        return
    if rule.family in taken:
        yield f"the family {rule.family} is taken; a pack has families of its own"
    if rule.level not in list(Level):
        yield f"its level is {rule.level!r}; levels are Level.ERROR, Level.WARNING and Level.NOTE"
    for section in sorted({*rule.applies_to} - {*SECTIONS}):
        yield f"applies to {section!r}; sections are {', '.join(SECTIONS)}"
    for field in _TEXTS:
        if not str(getattr(rule, field)).strip():
            yield f"its {field} is empty"
    for field in ("facts", "sources"):
        given: object = getattr(rule, field)
        if not isinstance(given, tuple) or not all(isinstance(each, str) for each in given):
            yield f"its {field} are no tuple of texts"
        elif not given:
            yield f"its {field} are empty"
    example: object = rule.example
    if not isinstance(example, Example):
        yield "its example is no Example(fails=..., holds=...)"
    elif not str(example.fails).strip() or not str(example.holds).strip():
        yield "its example is empty"
    if not _takes_two(rule.judge):
        yield "its function takes the element and the case"


def _takes_two(judge: Any) -> bool:
    try:
        inspect.signature(judge).bind(None, None)
    except (TypeError, ValueError):
        return False
    return not inspect.iscoroutinefunction(judge) and not inspect.isgeneratorfunction(judge)


def _guarded(rule: Rule, most_seconds: float) -> Any:
    """The function of a rule under a time limit; what it prints does not get into a report."""

    @wraps(rule.judge)
    def judge(element: Any, case: Case) -> Judgement:
        with redirect_stdout(sys.stderr):
            return within(most_seconds, rule.id, lambda: rule.judge(element, case))

    return judge
