"""Rules of third parties: a Python file named explicitly, or an installed package named explicitly.

A pack is a module with ``RULES``, a tuple of rules made by ``tidegate.lint.rule.rule``.  It is checked when it is
loaded, runs under a time limit, and can neither replace a rule that comes with the tool nor speak for its families.
"""

from __future__ import annotations

import importlib.util
import inspect
import re
import signal
import threading
from collections.abc import Collection, Iterable, Iterator, Sequence
from contextlib import contextmanager
from dataclasses import replace
from pathlib import Path
from typing import Any, Final

from tidegate.lint.case import Case
from tidegate.lint.graph.dependency import SECTIONS
from tidegate.lint.judgement import Judgement
from tidegate.lint.rule import Rule

GROUP: Final = "tidegate.rules"
"""Entry-point group of installed packs."""
MOST_SECONDS: Final = 5.0
"""Longest time that one judgement of a pack may take, in s, where the platform can interrupt it."""

_ID: Final = re.compile(r"[a-z][a-z0-9_]*/[a-z][a-z0-9_]*")
_TEXTS: Final = ("title", "proves", "mend")


class PackError(Exception):
    """A pack cannot be used; the message names the pack and everything that is wrong with it."""


def load_packs(
    files: Iterable[Path], installed: Iterable[str], own_families: Collection[str]
) -> list[tuple[Rule, ...]]:
    """The rules of packs, one tuple each, under their time limit.

    Raises: PackError: if a pack cannot be loaded, or its rules are not complete.
    """
    packs: list[tuple[Rule, ...]] = []
    taken = set(own_families)
    for name, module in [*((str(f), _from_file(f)) for f in files), *((n, _installed(n)) for n in installed)]:
        rules = checked(name, module, taken)
        taken |= {rule.family for rule in rules}
        packs.append(tuple(replace(rule, judge=_guarded(rule)) for rule in rules))
    return packs


def _from_file(path: Path) -> object:
    if not path.is_file():
        raise PackError(f"rule pack {path}: no such file")
    spec = importlib.util.spec_from_file_location(f"tidegate_pack_{path.stem}", path)
    if spec is None or spec.loader is None:
        raise PackError(f"rule pack {path}: not a Python file (its name ends in .py)")
    module = importlib.util.module_from_spec(spec)
    try:
        spec.loader.exec_module(module)
    except Exception as error:  # a pack may do anything while it is loaded; whatever it is, the pack is at fault
        raise PackError(f"rule pack {path}: cannot be loaded ({type(error).__name__}: {error})") from error
    return module


def _installed(name: str) -> object:
    from importlib.metadata import entry_points

    found = entry_points(group=GROUP, name=name)
    if not found:
        known = ", ".join(sorted(entry_points(group=GROUP).names)) or "none"
        raise PackError(f"rule pack {name}: not installed; installed: {known}")
    try:
        return next(iter(found)).load()
    except Exception as error:  # as above
        raise PackError(f"rule pack {name}: cannot be loaded ({type(error).__name__}: {error})") from error


def checked(name: str, module: object, taken: Collection[str]) -> Sequence[Rule]:
    """The rules of a pack, if every one of them is complete.

    Raises: PackError: with everything that is wrong.
    """
    rules = getattr(module, "RULES", None)
    if not isinstance(rules, tuple) or not rules or not all(isinstance(rule, Rule) for rule in rules):
        raise PackError(f"rule pack {name}: RULES must be a tuple of rules, at least one")
    problems = [f"{rule.id}: {problem}" for rule in rules for problem in _problems(rule, taken)]
    ids = [rule.id for rule in rules]
    problems += [f"{rule_id}: given twice" for rule_id in sorted({i for i in ids if ids.count(i) > 1})]
    if problems:
        raise PackError(f"rule pack {name}: " + "; ".join(problems))
    return rules


def _problems(rule: Rule, taken: Collection[str]) -> Iterator[str]:
    if not _ID.fullmatch(rule.id):
        yield "an id is family/name, in small letters, digits and underscores"
    if rule.family in taken:
        yield f"the family {rule.family} is taken; a pack has families of its own"
    if rule.applies_to not in SECTIONS:
        yield f"applies to {rule.applies_to!r}; sections are {', '.join(SECTIONS)}"
    for field in _TEXTS:
        if not str(getattr(rule, field)).strip():
            yield f"its {field} is empty"
    for field in ("facts", "sources"):
        if not getattr(rule, field):
            yield f"its {field} are empty"
    if not rule.example.fails.strip() or not rule.example.holds.strip():
        yield "its example is empty"
    if not callable(rule.judge) or len(inspect.signature(rule.judge).parameters) != 2:
        yield "its function takes the element and the case"


class PackTimeError(Exception):
    """A rule of a pack took too long."""


def _guarded(rule: Rule) -> Any:
    def judge(element: Any, case: Case) -> Judgement:
        with _time_limit(rule.id):
            return rule.judge(element, case)

    return judge


@contextmanager
def _time_limit(rule_id: str) -> Iterator[None]:
    """Interrupt what takes too long; without effect off the main thread and where there is no such signal."""
    if not hasattr(signal, "setitimer") or threading.current_thread() is not threading.main_thread():
        yield
        return

    def too_long(_signal: int, _frame: object) -> None:
        raise PackTimeError(f"{rule_id} took more than {MOST_SECONDS:g} s")

    before = signal.signal(signal.SIGALRM, too_long)
    signal.setitimer(signal.ITIMER_REAL, MOST_SECONDS)
    try:
        yield
    finally:
        signal.setitimer(signal.ITIMER_REAL, 0)
        signal.signal(signal.SIGALRM, before)
